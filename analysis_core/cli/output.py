"""Where the command line writes: tables, JSON, files, and a progress line."""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

from analysis_core.errors import JobError


def put(options: argparse.Namespace, document: Callable[[], Any], text: str) -> None:
    """Print the table, unless the JSON goes to stdout; write the JSON where it was asked for."""
    if options.json:
        data = json.dumps(document(), ensure_ascii=False, indent=1, allow_nan=False)
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
