"""Other sections and materials for members: what the windows for it ask for is done here."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING, Any

import FreeCADGui

from ..host_profiles import profile_lists
from ..present.member_decisions import decide_members
from ..present.scopes import Scope, elements_of, every_kind, scopes
from ..qt import QtCore
from ..texts import translate
from ..worker import CancelledError, Progress

if TYPE_CHECKING:
    from analysis_core.checking.choosing import Choice

    from ..profile_shelf import Shelf, ShelfKeeper
    from .controller import Desk


class Choosing(QtCore.QObject):
    """One per desk."""

    def __init__(self, desk: Desk) -> None:
        super().__init__()
        self._desk = desk
        self._keeper: ShelfKeeper | None = None
        self.section_dialog: Any = None
        self.lightest_dialog: Any = None
        self._sought_for = ""
        """The job file that the last search was made with."""

    def ask_for_section(self) -> None:
        """Show the sections and materials that the chosen line, or its span, can be given."""
        desk = self._desk
        opened = desk.solved
        offered = scopes(opened.outcome, desk.line, self._span())

        def show(shelf: Shelf) -> None:
            from .section_dialog import SectionDialog

            window = FreeCADGui.getMainWindow()
            self.section_dialog = SectionDialog(offered, shelf, opened.units, window)
            self.section_dialog.decided.connect(
                lambda title, change: self._decide(opened, title, change)
            )
            self.section_dialog.show()

        self._with_shelf(opened, show)

    def ask_for_lightest(self) -> None:
        """Show the window in which the lightest section is sought."""
        desk = self._desk
        opened = desk.solved
        offered = [s for s in scopes(opened.outcome, desk.line, None) if s.key in ("line", "alike")]
        offered.append(every_kind(opened.outcome))

        def show(shelf: Shelf) -> None:
            from .lightest_dialog import LightestDialog

            dialog = LightestDialog(offered, shelf, opened.units, FreeCADGui.getMainWindow())
            dialog.sought.connect(
                lambda scope, source, wanted: self._seek(opened, shelf, scope, source, wanted)
            )
            dialog.stop_asked.connect(desk.runs.cancel)
            dialog.applied.connect(lambda choices: self._apply(opened, shelf, choices))
            self._sought_for = ""
            self.lightest_dialog = dialog
            dialog.show()

        self._with_shelf(opened, show)

    # Inside.
    def _span(self) -> int | None:
        kind, number = self._desk.spot or ("", 0)
        return number if kind == "member" else None

    def _with_shelf(self, opened: Any, show: Callable[[Shelf], None]) -> None:
        settings, lists = opened.settings, profile_lists()

        from ..profile_shelf import ShelfKeeper  # late: start-up of the workbench

        keeper = self._keeper = self._keeper or ShelfKeeper()

        def task(progress: Progress) -> Shelf:
            return keeper.fill(opened, settings, lists, progress)

        def done(shelf: Shelf) -> None:
            if self._desk.solved is opened:
                show(shelf)

        self._desk.runs.start(task, done)

    def _seek(
        self, opened: Any, shelf: Shelf, scope: Scope, source: str,
        wanted: tuple[Sequence[str], Sequence[str]],
    ) -> None:  # fmt: skip
        desk, dialog = self._desk, self.lightest_dialog
        if desk.runs.busy:
            words = translate("Spanledger", "Something is still running; wait, or stop it.")
            dialog.stopped.emit(words)
            return
        settings, self._sought_for = opened.settings, opened.text
        kinds, names = wanted
        from ..profile_shelf import lightest, narrowed  # late: start-up of the workbench

        candidates = narrowed(shelf.offers[source].candidates, kinds, names)

        def task(progress: Progress) -> Any:
            def told(step: str, part: float) -> None:
                progress(step, part)
                dialog.progressed.emit(step, part)

            try:
                return lightest(
                    opened, settings, candidates, scope.marks, told,
                    alike=scope.key != "line", strict=not (kinds or names),
                )  # fmt: skip
            except CancelledError:
                dialog.stopped.emit(translate("Spanledger", "Stopped; nothing was changed."))
                raise
            except Exception as error:
                dialog.stopped.emit(str(error))
                raise

        desk.runs.start(task, dialog.show_choices)

    def _apply(self, opened: Any, shelf: Shelf, choices: Sequence[Choice]) -> None:
        changed = [c for c in choices if c.chosen and c.chosen != c.before]
        if opened.text != self._sought_for:
            words = translate(
                "Spanledger",
                "Something was decided since the search; seek the lightest section again.",
            )
            self._desk.tell(words)
            return
        names = ", ".join(dict.fromkeys(c.chosen for c in changed))
        title = translate("Spanledger", "Lightest sections: {names}").format(names=names)
        outcome = opened.outcome

        def change(text: str) -> str:
            for choice in changed:
                elements = elements_of(outcome, choice.marks)
                row = shelf.rows.get(choice.chosen)
                text = decide_members(text, elements, profile=choice.chosen, row=row)
            return text

        self._decide(opened, title, change)

    def _decide(self, opened: Any, title: str, change: Callable[[str], str]) -> None:
        """Decide in the model that the window was opened for, if it is still looked at."""
        if self._desk.opened is not opened:
            words = translate("Spanledger", "'{name}' is no longer the model in front.")
            self._desk.tell(words.format(name=opened.path.name))
            return
        self._desk.decide(title, change)
