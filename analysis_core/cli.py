"""The command line.  What was asked for goes to stdout, progress and messages to stderr.

Exit status: 0 everything asked for was done; 1 done, but some lines could not be analysed (their
findings say why); 2 nothing could be done: one clear message on stderr, no traceback.
"""

from __future__ import annotations

import argparse
import json
import os
import sys
from collections.abc import Callable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from analysis_core import __version__, pipeline
from analysis_core.errors import AnalysisError, JobError
from analysis_core.output_paths import check_outputs
from analysis_core.report.tables import (
    CAUTION,
    balance_text,
    findings_text,
    safe,
    survey_text,
)
from analysis_core.results import Outcome
from analysis_core.settings import Settings
from analysis_core.units import display_units

if TYPE_CHECKING:
    from analysis_core.ifc.posting.writer import PostReport

OK, INCOMPLETE, FAILED = 0, 1, 2

_DESCRIPTION = """\
Reads beams, supports and loads from an IFC model, idealises them as beam lines, solves them by
moment distribution and writes the results back as property sets.

Start with:  spanledger survey MODEL.ifc      what was found, and why it was taken so
then:        spanledger balance MODEL.ifc     moments, shears, deflections and reactions
and:         spanledger post MODEL.ifc -o OUT.ifc"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command and return the exit status."""
    options = _parser().parse_args(arguments)
    try:
        _check_outputs(options)
        status: int = options.run(options)
        sys.stdout.flush()
        return status
    except AnalysisError as error:
        return _failed(str(error))
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return OK
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
        in_place=options.run is _post,
    )


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="spanledger", description=_DESCRIPTION, epilog=CAUTION,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )  # fmt: skip
    parser.add_argument("--version", action="version", version=f"spanledger {__version__}")
    commands = parser.add_subparsers(metavar="COMMAND", required=True, title="commands")
    _survey_options(commands)
    _balance_options(commands)
    _post_options(commands)
    _reconcile_options(commands)
    _sheet_options(commands)
    _rules_options(commands)
    return parser


def _command(commands: Any, name: str, run: Callable[..., int], about: str) -> Any:
    command = commands.add_parser(
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


def _survey_options(commands: Any) -> None:
    about = "list lines, spans, supports, actions and findings; solve nothing"
    command = _command(commands, "survey", _survey, about)
    _model_options(command)
    command.add_argument(
        "--job-out", metavar="FILE",
        help="write a starting job file: everything that was assumed, with the reasons",
    )  # fmt: skip


def _balance_options(commands: Any) -> None:
    about = "solve every line and print its governing effects"
    command = _command(commands, "balance", _balance, about)
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
        "TABLE is 'model', 'job' (the section table of the job file) or a file with such a table",
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


def _post_options(commands: Any) -> None:
    about = "solve every line and write the results into a copy of the model"
    command = _command(commands, "post", _post, about)
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
        "--stations", type=_station_count, default=21, metavar="N", help=argparse.SUPPRESS
    )


def _reconcile_options(commands: Any) -> None:
    about = "say what changed between two revisions and what it did to the effects"
    command = _command(commands, "reconcile", _reconcile, about)
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


def _sheet_options(commands: Any) -> None:
    about = "write the calculation sheet, one HTML file that prints"
    command = _command(commands, "sheet", _sheet, about)
    _model_options(command)
    command.add_argument(
        "-o", "--output", metavar="SHEET.html", required=True, help="the sheet to write"
    )
    command.add_argument(
        "--storey", metavar="NAME", action="append", default=[],
        help="only the lines of this storey (may be repeated)",
    )  # fmt: skip


def _rules_options(commands: Any) -> None:
    about = "list the built-in rule sets and the codes of the checks, or print one"
    command = _command(commands, "rules", _rules, about)
    command.add_argument(
        "name", nargs="?", metavar="NAME", help="the rule set, or the code of the checks, to print"
    )
    command.add_argument(
        "--job", metavar="JOB.yaml", help="print the rule set of this job file, as it replaces it"
    )
    command.add_argument(
        "--json", metavar="FILE", help="write the same as JSON ('-': to standard output)"
    )


def _survey(options: argparse.Namespace) -> int:
    settings = _settings(options)
    survey = pipeline.survey(options.model, settings, progress=_progress(), only=options.line)
    if options.job_out:
        _write(Path(options.job_out), pipeline.job_text(survey, settings))
    states = pipeline.posted_states(survey, settings)
    units = display_units(settings.display.system, settings.display.units)
    text = survey_text(
        survey.model,
        survey.file,
        survey.schema,
        units,
        states=states,
        only=options.line,
        counts=survey.counts,
    )
    _put(options, lambda: pipeline.survey_document(survey, states, only=options.line), text)
    return INCOMPLETE if any(f.severity == "error" for f in survey.findings) else OK


def _balance(options: argparse.Namespace) -> int:
    settings = _settings(options)
    if options.lightest:
        return _lightest(options, settings)
    outcome = pipeline.run(options.model, settings, progress=_progress(), only=options.line)
    units = display_units(settings.display.system, settings.display.units)
    text = balance_text(outcome, units)
    checked = None
    if options.checks:
        from analysis_core.report.checks import checks_text

        checked = pipeline.checks(outcome, settings)
        text += "\n\n" + checks_text(outcome, checked, units)
    if options.reactions:
        _write(Path(options.reactions), pipeline.reactions_csv(outcome, settings))
    if options.issues:
        _write_bytes(Path(options.issues), pipeline.issues(outcome, checked))
    if options.record:
        from analysis_core.report.record_text import record_text

        text = record_text(pipeline.records(outcome), units) + "\n\n" + text
    _put(
        options,
        lambda: pipeline.document(outcome, stations=options.stations, checks=checked),
        text,
    )
    return _status(outcome)


def _lightest(options: argparse.Namespace, settings: Settings) -> int:
    from analysis_core.report.choices import choices_data, choices_text

    choices = pipeline.lightest(
        options.model, options.lightest, settings, marks=options.line, alike=options.alike,
        progress=_progress(),
    )  # fmt: skip
    units = display_units(settings.display.system, settings.display.units)
    head = {"format": "spanledger-choices", "version": 1}
    _put(
        options,
        lambda: {**head, "choices": choices_data(choices)},
        choices_text(choices, units),
    )
    return OK if all(choice.chosen for choice in choices) else INCOMPLETE


def _post(options: argparse.Namespace) -> int:
    target = Path(options.model if options.in_place else options.output)
    if options.remove and (options.section or options.material):
        raise JobError("'--remove' writes nothing new, so it takes no '--section' or '--material'.")
    if options.remove:
        return _take_out(options.model, target)
    settings = _settings(options)
    if options.section or options.material:
        return _update(options, settings, target)
    found = pipeline.survey(options.model, settings, progress=_progress(), only=options.line)
    outcome = pipeline.solve(found, settings, progress=_progress())
    chosen = pipeline.of_lines(outcome, options.line)
    _put(options, lambda: pipeline.document(chosen, stations=options.stations), "")
    _post_to(
        outcome, options.model, target, only=options.line, analysis_model=options.analysis_model
    )
    return _status(chosen)


def _update(options: argparse.Namespace, settings: Settings, target: Path) -> int:
    from analysis_core.member_update import changes_data, changes_text, pairs

    if options.line:
        raise JobError(
            "'--line' does not go with '--section' and '--material': what bears on a changed "
            "member changes as well, so all lines are posted. Leave it out."
        )
    done = pipeline.update_members(
        options.model,
        target,
        settings,
        sections=pairs(options.section, "--section"),
        materials=pairs(options.material, "--material"),
        analysis_model=options.analysis_model,
        progress=_progress(),
    )
    _put(
        options,
        lambda: {
            **pipeline.document(done.outcome, stations=options.stations),
            "changes": changes_data(done.changes),
        },
        changes_text(done.changes),
    )
    _tell_posted(done.report, target)
    return _status(done.outcome)


def _take_out(source: str, target: Path) -> int:
    report = pipeline.remove(source, target)
    how = (
        "all other bytes are as they were before"
        if report.path == "append"
        else "another program had rewritten the file; nothing else in it was changed"
    )
    print(
        f"Taken out, into '{safe(str(target))}': {report.removed} property sets and what goes "
        f"with them; {how}.",
        file=sys.stderr,
    )
    return 0


def _post_to(
    outcome: Outcome,
    source: str,
    target: Path,
    only: Sequence[str] = (),
    *,
    analysis_model: bool = False,
) -> None:
    report = pipeline.post(
        outcome, source, target, progress=_progress(), only=only, analysis_model=analysis_model
    )
    _tell_posted(report, target)


def _tell_posted(report: PostReport, target: Path) -> None:
    notes = findings_text(report.findings)
    print(
        f"Posted into '{safe(str(target))}': {report.written} property sets new, "
        f"{report.updated} updated, {report.unchanged} unchanged.",
        *([notes] if notes else []), CAUTION, sep="\n", file=sys.stderr,
    )  # fmt: skip


def _reconcile(options: argparse.Namespace) -> int:
    from analysis_core.report import changes as report
    from analysis_core.revision.reconcile import of_lines

    settings = _settings(options)
    found = pipeline.reconcile(options.before, options.after, settings, progress=_progress())
    found = of_lines(found, options.line)
    chosen = [mark for change in found.changes for mark in change.after] if options.line else []
    units = display_units(settings.display.system, settings.display.units)
    if options.output and options.line and not chosen:
        raise JobError(
            f"'{options.after}' has none of the chosen lines any more; leave out -o or --line."
        )
    if options.output:
        _post_to(found.after, options.after, Path(options.output), only=chosen)
    if options.csv:
        _write(Path(options.csv), report.changes_csv(found, units))
    _put(options, lambda: report.changes_document(found), report.changes_text(found, units))
    return _status(pipeline.of_lines(found.after, chosen))


def _sheet(options: argparse.Namespace) -> int:
    settings = _settings(options)
    outcome = pipeline.run(options.model, settings, progress=_progress(), only=options.line)
    if options.storey:
        outcome = pipeline.of_storeys(outcome, options.storey)
    _write(Path(options.output), pipeline.sheet(outcome, settings))
    _put(options, lambda: pipeline.document(outcome), "")
    print(f"Wrote '{safe(options.output)}'. {CAUTION}", file=sys.stderr)
    return _status(outcome)


def _rules(options: argparse.Namespace) -> int:
    name, replaced = options.name, {}
    if options.job:
        settings = _settings(options)
        name = name or settings.rules.name
        replaced = dict(settings.rules.replace) if name == settings.rules.name else {}
        if pipeline.is_check_code(name):
            replaced = dict(settings.checks.replace)
    text = pipeline.rules_text(name, replaced)
    _put(options, lambda: pipeline.rules_document(name, replaced), text)
    return OK


def _status(outcome: Outcome) -> int:
    failed = any(result.status != "balanced" for result in outcome.lines)
    return INCOMPLETE if failed or any(f.severity == "error" for f in outcome.findings) else OK


def _settings(options: argparse.Namespace) -> Settings:
    if options.job is None:
        return Settings()
    from analysis_core.job.reader import load  # YAML is only loaded when there is a job file

    settings = load(options.job)
    rules = settings.rules
    if rules.name.endswith((".yaml", ".yml")) and not Path(rules.name).is_absolute():
        beside = Path(options.job).resolve().parent / rules.name
        settings = replace(settings, rules=replace(rules, name=str(beside)))
    return settings


def _put(options: argparse.Namespace, document: Callable[[], Any], text: str) -> None:
    """Print the table, unless the JSON goes to stdout; write the JSON where it was asked for."""
    if options.json:
        data = json.dumps(document(), ensure_ascii=False, indent=1, allow_nan=False)
        if options.json == "-":
            print(data)
            return
        _write(Path(options.json), data + "\n")
    if text:
        print(text)


def _write(path: Path, text: str) -> None:
    try:
        path.write_text(text, encoding="utf-8", newline="")
    except OSError as error:
        raise JobError(f"'{path}' cannot be written: {error.strerror or error}.") from None


def _write_bytes(path: Path, data: bytes) -> None:
    try:
        path.write_bytes(data)
    except OSError as error:
        raise JobError(f"'{path}' cannot be written: {error.strerror or error}.") from None


def _station_count(text: str) -> int:
    try:
        count = int(text)
    except ValueError:
        count = 0
    if not 2 <= count <= 10_001:
        raise argparse.ArgumentTypeError(f"'{text}' must be a whole number from 2 to 10001")
    return count


def _progress() -> Callable[[str, float], None] | None:
    """A progress line on stderr, silent when that is not a terminal."""
    if not sys.stderr.isatty():
        return None

    def show(step: str, part: float) -> None:
        end = "\n" if part >= 1.0 else ""
        print(f"\r\033[K{step} {100.0 * part:3.0f} %", end=end, file=sys.stderr, flush=True)

    return show


if __name__ == "__main__":
    sys.exit(main())
