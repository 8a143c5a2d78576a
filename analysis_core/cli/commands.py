"""What each command does.  A command takes the parsed options and returns the exit status."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core import pipeline
from analysis_core.cli.output import progress, put, write, write_bytes
from analysis_core.errors import JobError
from analysis_core.report.tables import CAUTION, balance_text, findings_text, safe, survey_text
from analysis_core.results import Outcome
from analysis_core.settings import Settings
from analysis_core.units import display_units

if TYPE_CHECKING:
    from analysis_core.ifc.posting.writer import PostReport

OK, INCOMPLETE = 0, 1


def survey(options: argparse.Namespace) -> int:
    settings = _settings(options)
    survey = pipeline.survey(options.model, settings, progress=progress(), only=options.line)
    if options.job_out:
        write(Path(options.job_out), pipeline.job_text(survey, settings))
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
    put(options, lambda: pipeline.survey_document(survey, states, only=options.line), text)
    return INCOMPLETE if any(f.severity == "error" for f in survey.findings) else OK


def balance(options: argparse.Namespace) -> int:
    settings = _settings(options)
    if options.lightest:
        return _lightest(options, settings)
    if options.only:
        raise JobError("'--only' says which sections '--lightest' chooses from; give both.")
    outcome = pipeline.run(options.model, settings, progress=progress(), only=options.line)
    units = display_units(settings.display.system, settings.display.units)
    text = balance_text(outcome, units)
    checked = None
    if options.checks:
        from analysis_core.report.checks import checks_text

        checked = pipeline.checks(outcome, settings)
        text += "\n\n" + checks_text(outcome, checked, units)
    if options.reactions:
        write(Path(options.reactions), pipeline.reactions_csv(outcome, settings))
    if options.issues:
        write_bytes(Path(options.issues), pipeline.issues(outcome, checked))
    if options.record:
        from analysis_core.report.record_text import record_text

        text = record_text(pipeline.records(outcome), units) + "\n\n" + text
    put(
        options,
        lambda: pipeline.document(outcome, stations=options.stations, checks=checked),
        text,
    )
    return _status(outcome)


def _lightest(options: argparse.Namespace, settings: Settings) -> int:
    from analysis_core.report.choices import choices_data, choices_text
    from analysis_core.report.results_file import finding_data

    choices, told = pipeline.lightest(
        options.model, options.lightest, settings, marks=options.line, alike=options.alike,
        only=options.only, progress=progress(),
    )  # fmt: skip
    units = display_units(settings.display.system, settings.display.units)
    head = {"format": "spanledger-choices", "version": 1}
    file = options.lightest if options.lightest not in ("model", "job") else ""
    put(
        options,
        lambda: {
            **head,
            "choices": choices_data(choices),
            "findings": [finding_data(f) for f in told],
        },
        choices_text(choices, units, file),
    )
    if told:
        print(findings_text(told), file=sys.stderr)
    return OK if all(choice.chosen for choice in choices) else INCOMPLETE


def post(options: argparse.Namespace) -> int:
    target = Path(options.model if options.in_place else options.output)
    changing = options.section or options.material or options.members
    if options.remove and changing:
        raise JobError(
            "'--remove' writes nothing new, so it takes no '--section', '--material' or "
            "'--members'."
        )
    if options.remove:
        return _take_out(options.model, target)
    settings = _settings(options)
    if options.table and not options.section:
        raise JobError("'--table' says where a '--section' is found; give both.")
    if options.table:
        from analysis_core.job.reader import with_section_tables

        settings = with_section_tables(settings, [Path(options.table)])
    if changing:
        return _update(options, settings, target)
    found = pipeline.survey(options.model, settings, progress=progress(), only=options.line)
    outcome = pipeline.solve(found, settings, progress=progress())
    chosen = pipeline.of_lines(outcome, options.line)
    put(options, lambda: pipeline.document(chosen, stations=options.stations), "")
    _post_to(
        outcome, options.model, target, only=options.line, analysis_model=options.analysis_model
    )
    return _status(chosen)


def _update(options: argparse.Namespace, settings: Settings, target: Path) -> int:
    from analysis_core.member_update import changes_data, changes_text, pairs

    if options.line:
        raise JobError(
            "'--line' does not go with '--section', '--material' and '--members': what bears on a "
            "changed member changes as well, so all lines are posted. Leave it out."
        )
    done = pipeline.update_members(
        options.model,
        target,
        settings,
        sections=pairs(options.section, "--section"),
        materials=pairs(options.material, "--material"),
        given=options.members,
        analysis_model=options.analysis_model,
        progress=progress(),
    )
    put(
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
    if report.packed_anew:
        how += ". That is true of the model; the archive around it had to be packed anew"
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
        outcome, source, target, progress=progress(), only=only, analysis_model=analysis_model
    )
    _tell_posted(report, target)


def _tell_posted(report: PostReport, target: Path) -> None:
    notes = findings_text(report.findings)
    print(
        f"Posted into '{safe(str(target))}': {report.written} property sets new, "
        f"{report.updated} updated, {report.unchanged} unchanged.",
        *([notes] if notes else []), CAUTION, sep="\n", file=sys.stderr,
    )  # fmt: skip


def reconcile(options: argparse.Namespace) -> int:
    from analysis_core.report import changes as report
    from analysis_core.revision.reconcile import of_lines

    settings = _settings(options)
    found = pipeline.reconcile(options.before, options.after, settings, progress=progress())
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
        write(Path(options.csv), report.changes_csv(found, units))
    put(options, lambda: report.changes_document(found), report.changes_text(found, units))
    return _status(pipeline.of_lines(found.after, chosen))


def sheet(options: argparse.Namespace) -> int:
    settings = _settings(options)
    outcome = pipeline.run(options.model, settings, progress=progress(), only=options.line)
    if options.storey:
        outcome = pipeline.of_storeys(outcome, options.storey)
    write(Path(options.output), pipeline.sheet(outcome, settings))
    put(options, lambda: pipeline.document(outcome), "")
    print(f"Wrote '{safe(options.output)}'. {CAUTION}", file=sys.stderr)
    return _status(outcome)


def rules(options: argparse.Namespace) -> int:
    name, replaced = options.name, {}
    if options.job:
        settings = _settings(options)
        name = name or settings.rules.name
        replaced = dict(settings.rules.replace) if name == settings.rules.name else {}
        if pipeline.is_check_code(name):
            replaced = dict(settings.checks.replace)
    text = pipeline.rules_text(name, replaced)
    put(options, lambda: pipeline.rules_document(name, replaced), text)
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
