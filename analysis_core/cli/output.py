"""Where the command line writes: tables, JSON, files, and a progress line."""

from __future__ import annotations

import argparse
import io
import json
import os
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

from analysis_core.errors import JobError


def ready_streams() -> None:
    """Let nothing that a model holds stop the printing.

    A stream that was closed takes what is written and drops it; one whose encoding lacks a
    character gets an escape in its place.
    """
    for name in ("stdout", "stderr"):
        stream = getattr(sys, name)
        if stream is None:
            setattr(sys, name, open(os.devnull, "w", encoding="utf-8"))  # noqa: SIM115  # for good
        elif isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")


def put(options: argparse.Namespace, document: Callable[[], Any], text: str) -> None:
    """Print the table, unless the JSON goes to stdout; write the JSON where it was asked for."""
    if options.json:
        # Escapes of the stream would be no JSON; those of JSON itself fit any encoding.
        plain = options.json == "-" and "utf" not in (sys.stdout.encoding or "").lower()
        data = json.dumps(document(), ensure_ascii=plain, indent=1, allow_nan=False)
        if options.json == "-":
            print(data)
            return
        write(Path(options.json), data + "\n")
    if text:
        print(text)


def write(path: Path, text: str) -> None:
    try:
        path.write_text(text, encoding="utf-8", newline="")
    except OSError as error:
        raise JobError(f"'{path}' cannot be written: {error.strerror or error}.") from None


def write_bytes(path: Path, data: bytes) -> None:
    try:
        path.write_bytes(data)
    except OSError as error:
        raise JobError(f"'{path}' cannot be written: {error.strerror or error}.") from None


def progress() -> Callable[[str, float], None] | None:
    """A progress line on stderr, silent when that is not a terminal."""
    if not sys.stderr.isatty():
        return None

    def show(step: str, part: float) -> None:
        end = "\n" if part >= 1.0 else ""
        print(f"\r\033[K{step} {100.0 * part:3.0f} %", end=end, file=sys.stderr, flush=True)

    return show
