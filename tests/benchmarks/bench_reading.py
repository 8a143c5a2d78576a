"""Times reading physical buildings against opening them: PERFORMANCE goals on reading and memory.

    python tests/benchmarks/bench_reading.py [BEAMS ...]

For each size (1,000, 10,000 and 50,000 beams by default) a synthetic frame is written, opened by
the library, and read from its bytes to the building, in processes of their own.  Reading needs
no opening by the library, so the goal of 1.8 x open after opening is 2.8 x open for all of it.
Times are medians in processor time, so that other work on the machine counts less; memory is the
peak of each process above that of one that only imported the modules.
"""

from __future__ import annotations

import platform
import resource
import statistics
import subprocess
import sys
import tempfile
import time
from datetime import date
from pathlib import Path

REPEATS = 5
SIZES = (1_000, 10_000, 50_000)
MEASURES = ("import", "open", "reading")


def measure(what: str, path: str) -> None:
    """Print seconds and peak memory (MB) of one kind of work in this process."""
    import ifcopenshell

    from analysis_core.ifc.physical.reader import read_physical
    from analysis_core.ifc.source import open_model
    from analysis_core.settings import Settings

    times = []
    if what == "open":
        start = time.process_time()
        file = ifcopenshell.open(path)
        times.append(time.process_time() - start)
        del file
    elif what == "reading":
        start = time.process_time()
        building = read_physical(open_model(path), Settings())
        times.append(time.process_time() - start)
        assert building.members
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0
    print(statistics.median(times) if times else 0.0, peak)


def in_own_process(what: str, path: Path) -> tuple[float, float]:
    found = subprocess.run(
        [sys.executable, __file__, "--measure", what, str(path)],
        capture_output=True,
        text=True,
        check=True,
    )
    seconds, peak = found.stdout.split()
    return float(seconds), float(peak)


def main(sizes: list[int]) -> None:
    sys.path.insert(0, str(Path(__file__).parent))
    from synthetic import write_frame

    print(f"{date.today()}, {platform.processor() or platform.machine()}, "
          f"Python {platform.python_version()}")  # fmt: skip
    print("beams    entities   open s   read s   read/open   us/beam   memory/open")
    with tempfile.TemporaryDirectory() as folder:
        for size in sizes:
            path = Path(folder) / "frame.ifc"
            entities = write_frame(path, size)
            repeats = REPEATS if size <= 10_000 else 3
            runs = {what: [in_own_process(what, path) for _ in range(repeats)] for what in MEASURES}
            seconds = {what: statistics.median(s for s, _ in runs[what]) for what in MEASURES}
            memory = {what: statistics.median(m for _, m in runs[what]) for what in MEASURES}
            ratio = (memory["reading"] - memory["import"]) / (memory["open"] - memory["import"])
            print(
                f"{size:6,}  {entities:9,}  {seconds['open']:7.3f}  {seconds['reading']:7.3f}  "
                f"{seconds['reading'] / seconds['open']:9.2f}  "
                f"{1e6 * seconds['reading'] / (2 * size):8.1f}  {ratio:11.2f}"
            )


if __name__ == "__main__":
    if sys.argv[1:2] == ["--measure"]:
        measure(sys.argv[2], sys.argv[3])
    else:
        main([int(size) for size in sys.argv[1:]] or list(SIZES))
