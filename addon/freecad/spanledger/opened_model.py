"""One open model: its file, its job file, what was decided, and the run that came of it.

Knows neither Qt nor FreeCAD.  A decision is a new text of the job file; undo and redo go through
these texts, so that nothing else has to be reversible.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from contextlib import suppress
from dataclasses import dataclass, field, replace
from functools import lru_cache
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core.errors import JobError
from analysis_core.job import reader as job
from analysis_core.results import Outcome
from analysis_core.settings import Settings
from analysis_core.units import DisplayUnits, display_units

if TYPE_CHECKING:
    from analysis_core.checking.members import MemberChecks
    from analysis_core.ifc.shapes import BuildingShape
    from analysis_core.pipeline import Reading
    from analysis_core.revision.posted_states import PostedState
    from analysis_core.revision.reconcile import Reconciliation

    Checks = tuple[MemberChecks, ...]
    from analysis_core.solving.lines import Memory


@dataclass(slots=True)
class Decision:
    """A change of the job file: what it was called, and the texts on both sides of it."""

    title: str
    before: str
    after: str


@dataclass(slots=True)
class OpenedModel:
    """The state of one open model."""

    path: Path
    job_path: Path
    text: str = ""
    outcome: Outcome | None = None
    previous: Outcome | None = None
    """The run before the last decision, to show what moved."""
    posted: set[str] = field(default_factory=set)
    stale: bool = False
    reading: Reading | None = None
    """What stands in the file; kept so that a decision need not read it again."""
    stamp: tuple[int, int] | None = None
    memory: Memory | None = None
    in_file: Mapping[str, PostedState] = field(default_factory=dict)
    """By mark whether the results that stand in the file hold."""
    checks: dict[str, Checks] = field(default_factory=dict)
    """The checks of members by mark; empty until they were made."""
    _checked: dict[tuple[str, str], Checks] = field(default_factory=dict)
    shape: BuildingShape | None = None
    """The bodies of the building, once they were made."""
    _settings: dict[str, Settings] = field(default_factory=dict)
    _tables: dict[Path, tuple[int, int] | None] = field(default_factory=dict)
    """The section tables beside the job file, as they were when they were read."""
    done: list[Decision] = field(default_factory=list)
    undone: list[Decision] = field(default_factory=list)

    @classmethod
    def open(cls, path: str | Path, job_path: str | Path | None = None) -> OpenedModel:
        """Start on a model, with the job file beside it where there is one.

        Raises JobError where the job file cannot be read or understood.
        """
        path = Path(path)
        job_path = Path(job_path) if job_path else job_beside(path)
        text = _read(job_path) if job_path.exists() else ""
        job.parse(text, folder=job_path.parent)
        return cls(path, job_path, text)

    @property
    def settings(self) -> Settings:
        """What the job file says now; a rule set of the user's own is sought beside it."""
        settings = self._parsed(self.text)
        rules = settings.rules
        if rules.name.endswith((".yaml", ".yml")) and not Path(rules.name).is_absolute():
            beside = str(self.job_path.resolve().parent / rules.name)
            settings = replace(settings, rules=replace(rules, name=beside))
        return settings

    @property
    def units(self) -> DisplayUnits:
        """Units in which the engineer reads."""
        return _units(self.text)

    def decide(self, title: str, text: str) -> None:
        """Take a changed job file, and write it.

        Raises JobError where it is not understood or cannot be written; then nothing changed.
        """
        self._parsed(text)
        if text == self.text:
            return
        self._write(text)
        self.done.append(Decision(title, self.text, text))
        self.undone.clear()
        self.text = text

    def undo(self) -> str:
        """Take the last decision back and return what it was called; "" where there is none."""
        if not self.done:
            return ""
        self._write(self.done[-1].before)
        decision = self.done.pop()
        self.undone.append(decision)
        self.text = decision.before
        return decision.title

    def redo(self) -> str:
        """Take the decision that was undone last again; "" where there is none."""
        if not self.undone:
            return ""
        self._write(self.undone[-1].after)
        decision = self.undone.pop()
        self.done.append(decision)
        self.text = decision.after
        return decision.title

    def run(self, settings: Settings, progress: Callable[[str, float], None]) -> Outcome:
        """Read where needed, idealise and solve; may be called in another thread.

        Raises IfcReadError, JobError, and whatever ``progress`` raises.
        """
        from analysis_core import pipeline
        from analysis_core.solving.lines import Memory

        stamp = _stamp(self.path)
        reading = self.reading
        if reading is not None and stamp == self.stamp and settings.members:
            reading = self._with_stock(reading, settings)
        if reading is None or stamp != self.stamp or not reading.serves(settings):
            reading = pipeline.read(self.path, settings, progress=progress)
        memory = self.memory or Memory()
        survey = pipeline.idealised(reading, settings)
        outcome = pipeline.solve(survey, settings, progress=progress, memory=memory)
        self.reading, self.stamp, self.memory = reading, stamp, memory
        self.in_file = pipeline.posted_states(survey, settings)
        return outcome

    def stocked(self, settings: Settings, progress: Callable[[str, float], None]) -> Reading:
        """Return what stands in the file with its profiles and materials; these are then kept.

        May be called in another thread.  Raises IfcReadError, and whatever ``progress`` raises.
        """
        from analysis_core import pipeline

        stamp, reading = _stamp(self.path), self.reading
        if (
            reading is None
            or stamp != self.stamp
            or not reading.serves(replace(settings, members=()))
        ):
            reading = pipeline.read(self.path, settings, progress=progress)
        progress("Reading", 0.5)
        self.reading, self.stamp = self._with_stock(reading, settings), stamp
        return self.reading

    def _with_stock(self, reading: Reading, settings: Settings) -> Reading:
        from analysis_core import pipeline

        if reading.stock is not None:
            return reading
        return replace(reading, stock=pipeline.stock(self.path, settings))

    def check(
        self, outcome: Outcome, settings: Settings, progress: Callable[[str, float], None]
    ) -> dict[str, Checks]:
        """Check the members of every line, those that did not change by what is known of them.

        May be called in another thread; raises JobError, and whatever ``progress`` raises.
        """
        from analysis_core.checking.members import check_line

        found: dict[str, Checks] = {}
        known, said = self._checked, _said_of_checks(settings)
        for done, result in enumerate(outcome.lines):
            progress("Checking", done / len(outcome.lines))
            if result.status != "balanced":
                continue
            key = result.fingerprint, said
            if not result.fingerprint or key not in known:
                known[key] = tuple(check_line(result, outcome.model, settings))
            found[result.line.mark] = known[key]
        self._checked = {
            (result.fingerprint, said): found[result.line.mark]
            for result in outcome.lines
            if result.line.mark in found
        }
        return found

    def known_checks(self, outcome: Outcome, settings: Settings) -> dict[str, Checks]:
        """Return the checks of the lines that did not change since they were checked."""
        said = _said_of_checks(settings)
        return {
            result.line.mark: self._checked[result.fingerprint, said]
            for result in outcome.lines
            if (result.fingerprint, said) in self._checked
        }

    def building(self, progress: Callable[[str, float], None]) -> BuildingShape:
        """Return the bodies of the building; may be called in another thread."""
        from analysis_core.ifc.shapes import building_shape
        from analysis_core.ifc.source import open_model

        return building_shape(open_model(self.path), progress=progress)

    def compare(
        self, earlier: Path, settings: Settings, progress: Callable[[str, float], None]
    ) -> Reconciliation:
        """Compare with an earlier revision of the model; may be called in another thread.

        Raises IfcReadError, JobError, and whatever ``progress`` raises.
        """
        from analysis_core import pipeline

        return pipeline.reconcile(earlier, self.path, settings, progress=progress)

    def take_compared(self, found: Reconciliation) -> None:
        """Go on with the later of two outcomes, the earlier one beside it."""
        self.outcome, self.previous, self.stale = found.after, found.before, False

    def read_again(self) -> None:
        """Take the model and the job file from the disk at the next run.

        Raises JobError where the job file cannot be read or understood.
        """
        text = _read(self.job_path) if self.job_path.exists() else ""
        self._settings.clear()  # a section table beside it may have changed, too
        self._tables.clear()
        self._parsed(text)
        self.reading = None
        if text != self.text:
            self.text = text
            self.done.clear()  # what was undone before would overwrite another's edit
            self.undone.clear()

    def changed_on_disk(self) -> bool:
        """Whether the model or the job file is another than the run was made with."""
        try:
            text = _read(self.job_path) if self.job_path.exists() else ""
        except JobError:
            return True
        return (
            text != self.text
            or _stamp(self.path) != self.stamp
            or any(_stamp(path) != stamp for path, stamp in self._tables.items())
        )

    @property
    def files(self) -> list[Path]:
        """The files that the lines depend on: model, job file, section tables beside it."""
        return [self.path, self.job_path, *self._tables]

    def take_posted(self, outcome: Outcome, target: Path) -> None:
        """Remember what was written; where it went into the model itself, its bytes changed."""
        self.posted |= {r.fingerprint for r in outcome.lines if r.fingerprint}
        if target == self.path:
            self.reading, self.stamp = None, _stamp(self.path)

    def receive(self, outcome: Outcome) -> None:
        """Take the outcome of a run."""
        self.previous, self.outcome = self.outcome, outcome
        self.stale, self.checks = False, {}

    def _parsed(self, text: str) -> Settings:
        """The settings of a text; the last few are kept, undo and redo come back to them."""
        if text not in self._settings:
            if len(self._settings) > 8:
                self._settings.clear()
            self._settings[text] = job.parse(text, folder=self.job_path.parent)
            for name in self._settings[text].section_table_files:
                path = self.job_path.parent / name
                self._tables[path] = _stamp(path)
        return self._settings[text]

    def _write(self, text: str) -> None:
        if self.job_path.exists() and _read(self.job_path) != self.text:
            raise JobError(
                f"The decision was not kept: '{self.job_path.name}' was changed by somebody else "
                f"meanwhile. Balance the lines again, which reads it, and then decide."
            )
        beside = self.job_path.with_name(f".{self.job_path.name}.new")
        try:
            beside.write_text(text, encoding="utf-8")
            beside.replace(self.job_path)
        except OSError as error:
            with suppress(OSError):  # what hinders writing may hinder this, too
                beside.unlink(missing_ok=True)
            raise JobError(
                f"The decision was not kept: '{self.job_path}' cannot be written "
                f"({error.strerror or error}). Make the folder writable, or choose another job "
                f"file."
            ) from None


def job_beside(path: Path) -> Path:
    """Return where the job file of a model stands: the same name, ending in .yaml."""
    return path.with_suffix(".yaml")


def _said_of_checks(settings: Settings) -> str:
    """What checks depend on beside the fingerprint of a line's effects."""
    return repr(
        (settings.rules, settings.materials, settings.sections, settings.limits, settings.checks)
    )


@lru_cache(maxsize=8)
def _units(text: str) -> DisplayUnits:
    display = job.parse(text).display
    return display_units(display.system, display.units)


def _stamp(path: Path) -> tuple[int, int] | None:
    """Return what tells that a file was written anew; None where it is gone."""
    try:
        found = path.stat()
    except OSError:
        return None
    return found.st_mtime_ns, found.st_size


def _read(path: Path) -> str:
    try:
        return path.read_text(encoding="utf-8-sig")
    except OSError as error:
        raise JobError(f"Job file '{path}' cannot be read: {error.strerror or error}.") from None
    except UnicodeDecodeError:
        raise JobError(f"Job file '{path}' is not UTF-8 text; save it as UTF-8.") from None
