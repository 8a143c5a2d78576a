"""One run of the command line, and what its failures say.

Exit status: 0 everything asked for was done; 1 done, but some lines could not be analysed (their
findings say why); 2 nothing could be done: one clear message on stderr, no traceback.
"""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence

from analysis_core.cli import commands
from analysis_core.cli.options import parser
from analysis_core.cli.output import ready_streams
from analysis_core.cli.output_paths import check_outputs
from analysis_core.errors import AnalysisError
from analysis_core.report.tables import safe

FAILED = 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command and return the exit status."""
    ready_streams()
    options = parser().parse_args(arguments)
    try:
        _check_outputs(options)
        status: int = options.run(options)
        sys.stdout.flush()
        return status
    except AnalysisError as error:
        return _failed(str(error))
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return commands.OK
    except KeyboardInterrupt:
        return _failed("Stopped; nothing was written.")
    except MemoryError:
        return _failed("The model does not fit into memory; close other programs or split it.")
    except OSError as error:
        where = f"'{error.filename}': " if error.filename else ""
        return _failed(f"{where}{error.strerror or error}.")
    except Exception as error:
        if os.environ.get("SPANLEDGER_DEBUG"):
            raise
        return _failed(
            f"A fault in the program itself stopped the work ({type(error).__name__}: {error}); "
            f"nothing was written. Please report it with the model; SPANLEDGER_DEBUG=1 shows where."
        )


def _failed(message: str) -> int:
    print(f"spanledger: {safe(message)}", file=sys.stderr)
    return FAILED


def _check_outputs(options: argparse.Namespace) -> None:
    given = vars(options)
    inputs = {"MODEL": "model", "BEFORE": "before", "AFTER": "after", "--job": "job"}
    outputs = {
        "-o": "output", "--json": "json", "--csv": "csv", "--reactions": "reactions",
        "--issues": "issues", "--job-out": "job_out",
    }  # fmt: skip
    check_outputs(
        {name: given.get(key) for name, key in inputs.items()},
        {name: given.get(key) for name, key in outputs.items()},
        in_place=options.run is commands.post,
    )
