"""Time and size of the calculation sheet of a whole building, no two lines alike.

    python tests/benchmarks/bench_sheet.py [LINES]

1,000 lines (the default) of four spans and a cantilever each, with loads of their own, so that
none can refer to another: distribution, checks, diagrams and tables of every line are written.
Goal: 20 s and 30 MB.
"""

from __future__ import annotations

import platform
import sys
import tempfile
import time
from dataclasses import replace
from datetime import date
from pathlib import Path

from synthetic import SPANS, write_frame

from analysis_core import pipeline
from analysis_core.settings import ActionSetting, CaseSetting, Selector, Settings

SECONDS, MEGABYTES = 20.0, 30.0


def settings_for(marks: list[str]) -> Settings:
    """Return a job with an imposed and a permanent load that differ from line to line."""
    cases = (CaseSetting("Q", "imposed", "B"), CaseSetting("F", "permanent"))
    actions = [
        ActionSetting(case, Selector(line=mark), "uniform", (load * (1.0 + 1e-4 * i),))
        for i, mark in enumerate(marks)
        for case, load in (("Q", 9e3), ("F", 6e3))
    ]
    return Settings(cases=cases, actions=tuple(actions))


def main(lines: int) -> int:
    """Print the figures; return 1 where the goal is missed."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "frame.ifc"
        write_frame(path, lines * len(SPANS))
        marks = [line.mark for line in pipeline.survey(path).model.lines]
        settings = replace(settings_for(marks))
        outcome = pipeline.run(path, settings)
        start, busy = time.perf_counter(), time.process_time()
        text = pipeline.sheet(outcome, settings)
        seconds, busy = time.perf_counter() - start, time.process_time() - busy
    size = len(text.encode()) / 1e6
    count = len(outcome.lines)
    good = seconds <= SECONDS * count / 1000.0 and size <= MEGABYTES * count / 1000.0
    print(f"{platform.machine()}, Python {platform.python_version()}, {date.today()}")
    print(
        f"{count} lines: {seconds:.1f} s ({busy:.1f} s of processor time), {size:.1f} MB; "
        f"{1e3 * seconds / count:.1f} ms and {1e3 * size / count:.1f} kB a line; "
        f"goal for 1,000 lines {SECONDS:g} s and {MEGABYTES:g} MB: {'met' if good else 'missed'}"
    )
    return 0 if good else 1


if __name__ == "__main__":
    sys.exit(main(int(sys.argv[1]) if len(sys.argv) > 1 else 1000))
