"""The options of each command."""

from __future__ import annotations

import argparse
from collections.abc import Callable
from typing import Any

from analysis_core import __version__
from analysis_core.cli import commands
from analysis_core.report.tables import CAUTION

_DESCRIPTION = """\
Reads beams, supports and loads from an IFC model, idealises them as beam lines, solves them by
moment distribution and writes the results back as property sets.

Start with:  spanledger survey MODEL.ifc      what was found, and why it was taken so
then:        spanledger balance MODEL.ifc     moments, shears, deflections and reactions
and:         spanledger post MODEL.ifc -o OUT.ifc"""


def parser() -> argparse.ArgumentParser:
    top = argparse.ArgumentParser(
        prog="spanledger", description=_DESCRIPTION, epilog=CAUTION,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )  # fmt: skip
    top.add_argument("--version", action="version", version=f"spanledger {__version__}")
    subcommands = top.add_subparsers(metavar="COMMAND", required=True, title="commands")
    _survey_options(subcommands)
    _balance_options(subcommands)
    _post_options(subcommands)
    _reconcile_options(subcommands)
    _sheet_options(subcommands)
    _rules_options(subcommands)
    return top


def _command(subcommands: Any, name: str, run: Callable[..., int], about: str) -> Any:
    command = subcommands.add_parser(
        name, help=about, description=about[0].upper() + about[1:] + ".", epilog=CAUTION
    )
    command.set_defaults(run=run)
    return command


def _model_options(command: Any) -> None:
    command.add_argument("model", metavar="MODEL.ifc", help="the IFC file (.ifc or .ifczip)")
    command.add_argument("--job", metavar="JOB.yaml", help="settings beside the model")
    command.add_argument(
        "--json", metavar="FILE", help="write the results as JSON ('-': to standard output)"
    )
    command.add_argument(
        "--line", metavar="MARK", action="append", default=[],
        help="only this line (may be repeated)",
    )  # fmt: skip


def _survey_options(subcommands: Any) -> None:
    about = "list lines, spans, supports, actions and findings; solve nothing"
    command = _command(subcommands, "survey", commands.survey, about)
    _model_options(command)
    command.add_argument(
        "--job-out", metavar="FILE",
        help="write a starting job file: everything that was assumed, with the reasons",
    )  # fmt: skip


def _balance_options(subcommands: Any) -> None:
    about = "solve every line and print its governing effects"
    command = _command(subcommands, "balance", commands.balance, about)
    _model_options(command)
    command.add_argument(
        "--record", action="store_true",
        help="print the distribution table of each chosen line and case",
    )  # fmt: skip
    command.add_argument(
        "--checks", action="store_true",
        help="also check the resistance of the members, clause by clause",
    )  # fmt: skip
    command.add_argument(
        "--lightest", metavar="TABLE",
        help="instead: the lightest section that suffices for the chosen lines, or for each kind; "
        "TABLE is 'model', 'job' (the section table of the job file) or a file with such a table, "
        "also a list of profiles as FreeCAD keeps it",
    )  # fmt: skip
    command.add_argument(
        "--only", metavar="PATTERN", action="append", default=[],
        help="with --lightest: only sections whose name or category fits, 'IPE*' say (may be "
        "repeated); without, what is not made of the material of a line is left out",
    )  # fmt: skip
    command.add_argument(
        "--alike", action="store_true",
        help="with --lightest: one section for all lines of the same section and material",
    )  # fmt: skip
    command.add_argument(
        "--reactions", metavar="FILE.csv",
        help="write the reactions of every support and case as a spreadsheet",
    )  # fmt: skip
    command.add_argument(
        "--issues", metavar="FILE.bcf",
        help="write findings and failed checks as a BCF file, for any coordination viewer",
    )  # fmt: skip
    command.add_argument(
        "--stations", type=_station_count, default=21, metavar="N",
        help="stations per span in the JSON, ends included (default 21)",
    )  # fmt: skip


def _post_options(subcommands: Any) -> None:
    about = "solve every line and write the results into a copy of the model"
    command = _command(subcommands, "post", commands.post, about)
    _model_options(command)
    where = command.add_mutually_exclusive_group(required=True)
    where.add_argument("-o", "--output", metavar="OUT.ifc", help="the copy to write")
    where.add_argument(
        "--in-place", action="store_true", help="replace the model itself, all at once"
    )
    what = command.add_mutually_exclusive_group()
    what.add_argument(
        "--analysis-model",
        action="store_true",
        help="write the idealisation too, as an analysis model for others to take over",
    )
    what.add_argument(
        "--remove",
        action="store_true",
        help="take everything out that was posted, and solve nothing",
    )
    command.add_argument(
        "--section", metavar="TARGET=PROFILE", action="append", default=[],
        help="first give the members of a line, or the element of a GlobalId, another section: a "
        "profile of the model or of the job file's section table (may be repeated)",
    )  # fmt: skip
    command.add_argument(
        "--material", metavar="TARGET=NAME", action="append", default=[],
        help="the same for a material of the model or the job file (may be repeated)",
    )  # fmt: skip
    command.add_argument(
        "--members", action="store_true",
        help="first write the sections and materials that the job file gives members (members)",
    )  # fmt: skip
    command.add_argument(
        "--table", metavar="FILE",
        help="with --section: a section table in place of that of the job file",
    )  # fmt: skip
    command.add_argument(
        "--stations", type=_station_count, default=21, metavar="N", help=argparse.SUPPRESS
    )


def _reconcile_options(subcommands: Any) -> None:
    about = "say what changed between two revisions and what it did to the effects"
    command = _command(subcommands, "reconcile", commands.reconcile, about)
    command.add_argument("before", metavar="BEFORE.ifc", help="the earlier revision")
    command.add_argument("after", metavar="AFTER.ifc", help="the later revision")
    command.add_argument("--job", metavar="JOB.yaml", help="settings beside both models")
    command.add_argument(
        "--json", metavar="FILE", help="write the changes as JSON ('-': to standard output)"
    )
    command.add_argument("--csv", metavar="FILE", help="write the changes as a spreadsheet")
    command.add_argument(
        "--line", metavar="MARK", action="append", default=[],
        help="only this line, by its mark before or after (may be repeated)",
    )  # fmt: skip
    command.add_argument(
        "-o", "--output", metavar="OUT.ifc", help="post the results into a copy of AFTER.ifc"
    )


def _sheet_options(subcommands: Any) -> None:
    about = "write the calculation sheet, one HTML file that prints"
    command = _command(subcommands, "sheet", commands.sheet, about)
    _model_options(command)
    command.add_argument(
        "-o", "--output", metavar="SHEET.html", required=True, help="the sheet to write"
    )
    command.add_argument(
        "--storey", metavar="NAME", action="append", default=[],
        help="only the lines of this storey (may be repeated)",
    )  # fmt: skip


def _rules_options(subcommands: Any) -> None:
    about = "list the built-in rule sets and the codes of the checks, or print one"
    command = _command(subcommands, "rules", commands.rules, about)
    command.add_argument(
        "name", nargs="?", metavar="NAME", help="the rule set, or the code of the checks, to print"
    )
    command.add_argument(
        "--job", metavar="JOB.yaml", help="print the rule set of this job file, as it replaces it"
    )
    command.add_argument(
        "--json", metavar="FILE", help="write the same as JSON ('-': to standard output)"
    )


def _station_count(text: str) -> int:
    try:
        count = int(text)
    except ValueError:
        count = 0
    if not 2 <= count <= 10_001:
        raise argparse.ArgumentTypeError(f"'{text}' must be a whole number from 2 to 10001")
    return count
