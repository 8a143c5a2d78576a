"""Posts into one file again and again, each time in a process of its own that is killed.

Run as a program: ``kill_driver.py FOLDER ROUNDS SEED``.  Prints how often the file was found old
and new; ends with an error as soon as it is neither.
"""

import json
import os
import random
import signal
import sys
import time
from datetime import UTC, datetime
from pathlib import Path

from posting_makers import BEAM, SECOND_BEAM, outcome_of, small_model, span_result

from analysis_core.ifc.posting import writer

NOON = datetime(2031, 5, 4, 12, 0, 0, tzinfo=UTC)
PADDING = 30_000
"""Points in the model, so that writing it takes a while."""


def model() -> bytes:
    points = "".join(
        f"#{1000 + i}=IFCCARTESIANPOINT(({i}.5,{i * 2}.25,0.125));\n" for i in range(PADDING)
    )
    return small_model().replace(b"#30=", points.encode() + b"#30=", 1)


def outcome(load: float):
    return outcome_of(
        span_result(BEAM, load=load, stations=200),
        span_result(SECOND_BEAM, load=load / 3.0, mark="B-2", stations=200),
    )


def main(folder: str, rounds: int, seed: int) -> None:
    path = Path(folder) / "model.ifc"
    contents = []
    for load in (8e3, 9e3):
        path.write_bytes(model())
        begun = time.perf_counter()
        writer.post(path, path, outcome(load), computed_at=NOON)
        usual = time.perf_counter() - begun
        contents.append(path.read_bytes())
    random.seed(seed)
    current, counts = 1, {"old": 0, "new": 0}
    for _ in range(rounds):
        other = 1 - current
        child = os.fork()
        if child == 0:
            writer.post(path, path, outcome((8e3, 9e3)[other]), computed_at=NOON)
            os._exit(0)
        time.sleep(random.uniform(0.0, 2.0 * usual))
        os.kill(child, signal.SIGKILL)
        os.waitpid(child, 0)
        found = path.read_bytes()
        if found not in contents:
            sys.exit(f"{len(found)} bytes: neither the old file nor the new one")
        counts["new" if found == contents[other] else "old"] += 1
        # Whatever else the machine does: about half of the kills come in time.
        usual *= 0.95 if found == contents[other] else 1.05
        current = contents.index(found)
    writer.post(path, path, outcome(8e3), computed_at=NOON)
    counts["left"] = sorted(os.listdir(folder))
    print(json.dumps(counts))


if __name__ == "__main__":
    main(sys.argv[1], int(sys.argv[2]), int(sys.argv[3]))
