#!/usr/bin/env python3
"""Gathers every literal to be translated, keeps the .ts files in step, and compiles them.

    collect.py            update the .ts files; compile them where lrelease is installed
    collect.py --check    say what is missing, and change nothing

Needs nothing but Python.  A literal counts where it stands in a call of ``translate``, ``say``,
``noop`` or ``QT_TRANSLATE_NOOP``.
"""

from __future__ import annotations

import ast
import shutil
import subprocess
import sys
import xml.etree.ElementTree as ElementTree
from collections.abc import Iterator
from pathlib import Path

HERE = Path(__file__).resolve().parent
PACKAGE = HERE.parents[1]
OURS = "Spanledger"
WITH_CONTEXT = ("translate", "QT_TRANSLATE_NOOP")
WITHOUT = ("say", "noop")


def literals() -> list[tuple[str, str]]:
    """Return (context, text) of every literal, each once, in order."""
    found: set[tuple[str, str]] = set()
    for path in sorted(PACKAGE.rglob("*.py")):
        found.update(_in_module(ast.parse(path.read_text(encoding="utf-8"))))
    return sorted(found)


def translations(path: Path) -> dict[tuple[str, str], str]:
    """Return what a .ts file holds."""
    found = {}
    for context in ElementTree.parse(path).getroot().iter("context"):
        name = context.findtext("name", "")
        for message in context.iter("message"):
            key = name, message.findtext("source", "")
            found[key] = message.findtext("translation", "")
    return found


def missing(path: Path) -> list[str]:
    """Return the literals that a .ts file does not translate."""
    known = translations(path)
    return [text for context, text in literals() if not known.get((context, text))]


def update(path: Path) -> None:
    """Write a .ts file with every literal, keeping the translations it has."""
    known = translations(path) if path.exists() else {}
    root = ElementTree.Element("TS", version="2.1", language=path.stem.split("_")[-1])
    contexts: dict[str, ElementTree.Element] = {}
    for name, text in literals():
        if name not in contexts:
            contexts[name] = ElementTree.SubElement(root, "context")
            ElementTree.SubElement(contexts[name], "name").text = name
        message = ElementTree.SubElement(contexts[name], "message")
        ElementTree.SubElement(message, "source").text = text
        translated = ElementTree.SubElement(message, "translation")
        translated.text = known.get((name, text), "")
        if not translated.text:
            translated.set("type", "unfinished")
    ElementTree.indent(root)
    text = ElementTree.tostring(root, encoding="unicode")
    path.write_text(f'<?xml version="1.0" encoding="utf-8"?>\n<!DOCTYPE TS>\n{text}\n', "utf-8")


def main() -> int:
    """Update and compile, or check."""
    paths = sorted(HERE.glob("*.ts"))
    if "--check" in sys.argv:
        lost = {path.name: missing(path) for path in paths}
        for name, texts in lost.items():
            print(f"{name}: {len(texts)} not translated", *texts, sep="\n  ")
        return 1 if any(lost.values()) else 0
    for path in paths:
        update(path)
        if shutil.which("lrelease"):
            subprocess.run(["lrelease", "-silent", str(path)], check=True)
    return 0


def _in_module(module: ast.Module) -> Iterator[tuple[str, str]]:
    for node in ast.walk(module):
        if not isinstance(node, ast.Call):
            continue
        name = getattr(node.func, "id", getattr(node.func, "attr", ""))
        texts = [a.value for a in node.args if isinstance(a, ast.Constant)]
        if name in WITH_CONTEXT and len(texts) >= 2:
            yield texts[0], texts[1]
        elif name in WITHOUT and texts and isinstance(texts[0], str):
            yield OURS, texts[0]


if __name__ == "__main__":
    sys.exit(main())
