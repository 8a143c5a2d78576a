"""Times and memory of reading, running and posting whole files, as ratios to plain opening.

    python tests/benchmarks/bench_files.py [BEAMS]

Every ratio is taken in one run on a frame made by ``synthetic.py``: medians of five, imports
excluded, in processor time, so that other work on the machine counts less; the wall clock, which
holds the waiting for the disk, is beside it.  Row numbers are those of the project's performance
goals.
"""

from __future__ import annotations

import gc
import hashlib
import os
import platform
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from unittest.mock import patch

import ifcopenshell
import numpy as np

HERE = Path(__file__).resolve().parent
sys.path[:0] = [str(HERE), str(HERE.parents[1])]

from synthetic import write_frame  # noqa: E402 -- found beside this file

from analysis_core import pipeline  # noqa: E402
from analysis_core.ifc.posting import writer  # noqa: E402
from analysis_core.ifc.posting.diagrams import DiagramWriter  # noqa: E402
from analysis_core.results import Outcome  # noqa: E402
from analysis_core.settings import (  # noqa: E402
    ActionSetting,
    CaseSetting,
    RuleSettings,
    Selector,
    Settings,
)

ROUNDS = 5
SETTINGS = Settings(
    rules=RuleSettings(arrangements="every"),
    cases=(CaseSetting("Dead", "permanent"), CaseSetting("Imposed", "imposed")),
    actions=(
        ActionSetting("Dead", Selector(ifc_class="IfcBeam"), "uniform", (18e3,)),
        ActionSetting("Imposed", Selector(ifc_class="IfcBeam"), "uniform", (12e3,)),
    ),
)


def main(beams: int) -> None:
    print(f"{platform.machine()}, {os.cpu_count()} cores, Python {platform.python_version()}, "
          f"NumPy {np.__version__}, ifcopenshell {ifcopenshell.version}; "
          f"{time.strftime('%Y-%m-%d')}; {beams:,} beams, medians of {ROUNDS}")  # fmt: skip
    with tempfile.TemporaryDirectory() as folder:
        model, target = Path(folder) / "frame.ifc", Path(folder) / "out.ifc"
        entities = write_frame(model, beams)
        print(f"{entities:,} entities, {model.stat().st_size / 1e6:.1f} MB")
        outcome = pipeline.run(model, SETTINGS)
        singles = without_supports(outcome)
        posted = Path(folder) / "posted.ifc"
        pipeline.post(outcome, model, posted)
        # Taken in turns, so that whatever else the machine does falls on all of them.
        times = in_turns({
            "open": lambda: opened(model),
            "open and write": lambda: opened(model).write(str(target)),
            "run": lambda: pipeline.run(model, SETTINGS),
            "post": lambda: pipeline.post(outcome, model, target),
            "post, single values": lambda: post_singles(model, target, singles),
            "post again": again(outcome, posted),
        })  # fmt: skip
        walls = {name: wall for name, (_, wall) in times.items()}
        times = {name: seconds for name, (seconds, _) in times.items()}
        for name, seconds in times.items():
            print(f"  {name:22s} {seconds:7.3f} s  {seconds / times['open']:6.2f} x open"
                  f"   (clock {walls[name]:.3f} s)")  # fmt: skip
        whole = times["run"] + times["post"]
        properties = count_properties(model, target, singles, beams)
        rows = {
            "1 whole run / (open + write)": (whole / times["open and write"], 0.8),
            f"2 post, {properties:.0f} properties a beam / open":
                (times["post, single values"] / times["open"], 0.8),
            "2 the same for 12 properties": (
                times["post, single values"] / times["open"] * 12.0 / properties, 0.8),
        }  # fmt: skip
        for name, (ratio, goal) in rows.items():
            print(f"row {name}: {ratio:.2f} (goal {goal})")
        print(f"row 4 the original comes back: {comes_back(outcome, model, target)}")
        plain, own = peak_of_open(model), peak_of_run(model, target)
        print(f"row 11 peak memory: {own:.0f} MB / {plain:.0f} MB = {own / plain:.2f} (goal 1.5)")


def in_turns(jobs: dict[str, Callable[[], object]]) -> dict[str, tuple[float, float]]:
    """Median processor time and time by the clock of each job, taken in turns."""
    times: dict[str, list[tuple[float, float]]] = {name: [] for name in jobs}
    for _ in range(ROUNDS):
        for name, job in jobs.items():
            gc.collect()
            begun, clock = time.process_time(), time.perf_counter()
            job()
            times[name].append((time.process_time() - begun, time.perf_counter() - clock))
    return {
        name: (statistics.median(t for t, _ in found), statistics.median(w for _, w in found))
        for name, found in times.items()
    }


def opened(path: Path) -> ifcopenshell.file:
    return ifcopenshell.open(str(path))


def again(outcome: Outcome, target: Path) -> Callable[[], object]:
    return lambda: writer.post(target, target, outcome)


def without_supports(outcome: Outcome) -> Outcome:
    """The outcome with no supporting elements, so that no reactions are posted."""

    def bare(result):
        joints = tuple(replace(j, element=None) for j in result.line.joints)
        return replace(result, line=replace(result.line, joints=joints))

    return replace(outcome, lines=tuple(bare(r) for r in outcome.lines))


def post_singles(model: Path, target: Path, outcome: Outcome) -> None:
    """Post without diagrams: single values alone, if there are no supports either."""
    none = patch.object(DiagramWriter, "write", lambda self, elements: [[] for _ in elements])
    with none:
        writer.post(model, target, outcome)


def count_properties(model: Path, target: Path, outcome: Outcome, beams: int) -> float:
    post_singles(model, target, outcome)
    file = opened(target)
    sets = [s for s in file.by_type("IfcPropertySet") if s.Name.startswith("Spanledger_")]
    return sum(len(s.HasProperties) for s in sets) / beams


def comes_back(outcome: Outcome, model: Path, target: Path) -> bool:
    before = hashlib.sha256(model.read_bytes()).digest()
    writer.post(model, target, outcome)
    writer.post(target, target, outcome)
    writer.remove(target, target)
    return hashlib.sha256(target.read_bytes()).digest() == before


# The highest memory since the program began; what the parent used before does not count.
PEAK = """
import re, sys
sys.path[:0] = {path!r}
{job}
print(int(re.search(r"VmHWM:\\s*(\\d+)", open("/proc/self/status").read())[1]) / 1024.0)
"""


def peak_of_open(model: Path) -> float:
    return peak(f"import ifcopenshell; f = ifcopenshell.open({str(model)!r})")


def peak_of_run(model: Path, target: Path) -> float:
    return peak(
        f"from bench_files import *\nmodel = Path({str(model)!r})\n"
        f"pipeline.post(pipeline.run(model, SETTINGS), model, Path({str(target)!r}))"
    )


def peak(job: str) -> float:
    code = PEAK.format(path=sys.path[:2], job=job)
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    return float(run.stdout.split()[-1])


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 10_000)
