"""The window in which members are given another section or material."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

from analysis_core.findings import Finding
from analysis_core.units import DisplayUnits

from ..present.member_decisions import decide_members, drop_members
from ..present.profiles import HOST, compared
from ..present.scopes import Scope
from ..profile_shelf import Shelf
from ..qt import QtWidgets, Signal
from ..texts import translate
from .fields import button
from .profile_table import ProfileTable

Change = Callable[[str], str]


class SectionDialog(QtWidgets.QDialog):
    """Stays open beside FreeCAD's window; sends a decision, which the desk takes."""

    decided = Signal(str, object)

    def __init__(
        self, scopes: Sequence[Scope], shelf: Shelf, units: DisplayUnits, parent: Any = None
    ) -> None:
        super().__init__(parent)
        self.setObjectName("SpanledgerSection")
        self.setWindowTitle(translate("Spanledger", "Section and material"))
        self._scopes, self._shelf, self._units = scopes, shelf, units
        self._candidates = shelf.every()
        self._by_name = {c.name: c for c in self._candidates}
        self.scope = _box("SpanledgerSectionScope", translate("Spanledger", "Members to change"))
        for scope in scopes:
            self.scope.addItem(scope.words)
        self.now = _words("SpanledgerSectionNow")
        self.table = ProfileTable()
        self.others = QtWidgets.QCheckBox(
            translate("Spanledger", "Sections of other materials too")
        )
        self.others.setObjectName("SpanledgerOtherMaterials")
        self.change = _words("SpanledgerSectionChange")
        self.material = _box("SpanledgerMaterial", translate("Spanledger", "Material"))
        self.take = button(
            "SpanledgerTakeSection", translate("Spanledger", "Take these"),
            translate("Spanledger", "Solves the lines with them; can be undone"),
        )  # fmt: skip
        self.take.setDefault(True)
        self.as_is = button(
            "SpanledgerAsModelled", translate("Spanledger", "As the model has it"),
            translate("Spanledger", "Takes back what these members were given"),
        )  # fmt: skip
        close = button("SpanledgerSectionClose", translate("Spanledger", "Close"))
        self._lay_out(close)
        self.scope.currentIndexChanged.connect(lambda _index: self._show_scope())
        self.material.currentIndexChanged.connect(lambda _index: self._show_candidates())
        self.others.toggled.connect(lambda _on: self._show_candidates())
        self.table.picked.connect(lambda _candidate: self._show_change())
        self.take.clicked.connect(self._take)
        self.as_is.clicked.connect(self._take_back)
        close.clicked.connect(self.reject)
        self._show_scope()
        self.table.words.setFocus()

    @property
    def chosen(self) -> Scope:
        """What is to be changed."""
        return self._scopes[self.scope.currentIndex()]

    def _lay_out(self, close: Any) -> None:
        form = QtWidgets.QFormLayout()
        form.addRow(translate("Spanledger", "Change"), self.scope)
        form.addRow(translate("Spanledger", "Now"), self.now)
        form.addRow(translate("Spanledger", "Material"), self.material)
        buttons = QtWidgets.QHBoxLayout()
        buttons.addWidget(self.as_is)
        buttons.addStretch(1)
        buttons.addWidget(self.take)
        buttons.addWidget(close)
        layout = QtWidgets.QVBoxLayout(self)
        layout.addLayout(form)
        layout.addWidget(self.table, 1)
        layout.addWidget(self.others)
        layout.addWidget(self.change)
        layout.addLayout(buttons)
        self.resize(820, 660)

    def _show_scope(self) -> None:
        scope = self.chosen
        have = ", ".join(name or "–" for name in scope.sections)
        of = ", ".join(name or "–" for name in scope.materials)
        self.now.setText(f"{have} · {of}")
        self.material.blockSignals(True)
        self.material.clear()
        self.material.addItem(translate("Spanledger", "as it is: {names}").format(names=of), "")
        for name in self._shelf.materials:
            self.material.addItem(name, name)
        self.material.blockSignals(False)
        self._show_candidates()

    def _show_candidates(self) -> None:
        """Offer what can be made of the material that the members have or are to get."""
        scope = self.chosen
        material = self.material.currentData() or scope.materials[0]
        shown = self._candidates if self.others.isChecked() else self._shelf.made_of(material)
        known = self._shelf.materials.get(material)
        density = known.density if known is not None else scope.density
        self.table.show_candidates(shown, density, self._units)
        if len(scope.sections) == 1 and self.table.candidate() is None:
            self.table.pick(scope.sections[0])
        self._show_change()

    def _show_change(self) -> None:
        profile, material = self._wanted()
        self.take.setEnabled(bool(profile or material))
        candidate, words = self._by_name.get(profile), ""
        if candidate is not None:
            scope = self.chosen
            old = self._by_name.get(scope.sections[0]) if len(scope.sections) == 1 else None
            known = self._shelf.materials.get(material)
            density = known.density if known is not None else scope.density
            words = compared(old, candidate, (scope.density, density), self._units)
            if candidate.origin == HOST:
                words += "\n" + "\n".join(f.message for f in self._shelf.findings if _matters(f))
        self.change.setText(words)

    def _wanted(self) -> tuple[str, str]:
        """Names of the section and the material that differ from what is there; "" for none."""
        scope, candidate = self.chosen, self.table.candidate()
        profile = candidate.name if candidate is not None else ""
        material = self.material.currentData() or ""
        return (
            "" if scope.sections == (profile,) else profile,
            "" if scope.materials == (material,) else material,
        )

    def _take(self) -> None:
        scope, (profile, material) = self.chosen, self._wanted()
        row = self._shelf.rows.get(profile)
        title = translate("Spanledger", "{names} for {members}").format(
            names=", ".join(filter(None, (profile, material))), members=scope.words
        )
        self.accept()
        self.decided.emit(
            title,
            lambda text: decide_members(
                text, scope.elements, profile=profile, material=material, row=row
            ),
        )

    def _take_back(self) -> None:
        scope = self.chosen
        title = translate("Spanledger", "{members} as modelled").format(members=scope.words)
        self.accept()
        self.decided.emit(title, lambda text: drop_members(text, scope.elements))


def _matters(finding: Finding) -> bool:
    """Whether a note on the host's list bears on each section in it."""
    return finding.slug == "profile-without-fillets"


def _box(name: str, spoken: str) -> Any:
    box = QtWidgets.QComboBox()
    box.setObjectName(name)
    box.setAccessibleName(spoken)
    return box


def _words(name: str) -> Any:
    label = QtWidgets.QLabel()
    label.setObjectName(name)
    label.setWordWrap(True)
    return label
