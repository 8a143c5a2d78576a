"""The panel beside the strip: facts about the chosen spot, and the decisions it allows.

A decision is sent as a title and a change of the job file's text; nothing is computed here.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING, Any, get_args

from analysis_core.model import RIGID, Action, Nature
from analysis_core.results import LineResult, Outcome
from analysis_core.settings import Settings
from analysis_core.units import DisplayUnits

from ..present import decisions
from ..present.checked import check_facts, deflection_facts
from ..present.diagrams import View
from ..present.inspector import (
    RELEASE_CHOICES,
    SPRING,
    SUPPORT_CHOICES,
    joint_facts,
    line_facts,
    member_facts,
    release_choice,
    stiffness_words,
    support_choice,
)
from ..present.load_path import Path
from ..qt import QtWidgets, Signal
from ..texts import translate
from .fields import button, choice, entry, facts_label, facts_text, heading

if TYPE_CHECKING:
    from analysis_core.checking.members import MemberChecks

Change = Callable[[str], str]


class Inspector(QtWidgets.QScrollArea):
    """Rebuilt for every spot: the forms are small, and stale fields cannot stay."""

    decided = Signal(str, object)
    line_wanted = Signal(int)
    section_wanted = Signal()
    lightest_wanted = Signal()

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self.setObjectName("SpanledgerInspector")
        self.setWidgetResizable(True)
        # A GlobalId, 22 characters without a break, stands whole beside what it is.
        letter = self.fontMetrics().averageCharWidth()
        self.setMinimumWidth(max(270, 46 * letter))
        self.setMaximumWidth(max(380, 60 * letter))
        self.setFrameShape(QtWidgets.QFrame.Shape.NoFrame)
        self.clear()

    def clear(self) -> None:
        """Show nothing."""
        self._begin("")

    def show_line(
        self, result: LineResult, outcome: Outcome, settings: Settings, units: DisplayUnits
    ) -> None:
        """Show facts about a whole line, and the rules that all lines are combined by."""
        self._begin(translate("Spanledger", "Line {mark}").format(mark=result.line.mark))
        self._facts(line_facts(result, outcome, units))
        hint = translate("Spanledger", "Click a bearing, a span or an action to decide on it.")
        label = QtWidgets.QLabel(hint)
        label.setWordWrap(True)
        self._layout.addWidget(label)
        self._members_form()
        self._rules_form(settings.rules.name)
        self._redistribution_form(result.line.mark)
        self._cases_form(outcome)
        self._layout.addStretch(1)

    def show_joint(
        self, result: LineResult, joint: int, view: View, outcome: Outcome, units: DisplayUnits
    ) -> None:
        """Show a bearing and the ways to hold it."""
        at = result.line.joints[joint]
        title = translate("Spanledger", "Joint {number} of {mark}")
        self._begin(title.format(number=joint, mark=result.line.mark))
        self._facts(joint_facts(result, joint, view, dict(outcome.model.names), units))
        where = decisions.where_is(result.line, joint)
        if where is not None:
            self._support_form(result.line.mark, joint, at.support, where, units)
        if at.element and at.support is not None:
            self._movement_form(result.line.mark, joint, at.element, outcome, units)
        self._layout.addStretch(1)

    def show_member(
        self,
        result: LineResult,
        member: int,
        outcome: Outcome,
        checks: Sequence[MemberChecks],
        units: DisplayUnits,
    ) -> None:
        """Show a span, its checks, how its ends are joined, and forms to decide on it."""
        part = result.line.members[member]
        title = translate("Spanledger", "Span {number} of {mark}")
        number = part.span if part.span is not None else part.id
        self._begin(title.format(number=number, mark=result.line.mark))
        self._facts(member_facts(result, member, dict(outcome.model.names), units))
        self._checked = self._facts([])
        self.show_checks(result, member, checks, units)
        for at_end, spring in ((False, part.start_spring), (True, part.end_spring)):
            where = decisions.end_of(result.line, member, at_end=at_end)
            if where is not None:
                self._release_form(result.line.mark, member, at_end, spring, where, units)
        if part.role == "span" and part.element:
            self._members_form()
        if part.element:
            self._action_form(result.line.mark, part.element, outcome, units)
            self._section_form(result.line.mark, part, units)
        self._layout.addStretch(1)

    def show_checks(
        self, result: LineResult, member: int, checks: Sequence[MemberChecks], units: DisplayUnits
    ) -> None:
        """Show the checks of the span that is shown, which come later than its other facts."""
        if self._checked is not None:
            facts = deflection_facts(result, member, units) + check_facts(checks, member)
            self._checked.setText(facts_text(facts))

    def show_action(
        self, result: LineResult, number: int, words: str, text: str, units: DisplayUnits
    ) -> None:
        """Show an action; one from the job file can be changed or taken out."""
        action = result.line.actions[number]
        self._begin(translate("Spanledger", "Action on {mark}").format(mark=result.line.mark))
        self._facts([("Case", action.case), ("Action", words), ("From", action.source or "–")])
        value = decisions.changeable_value(text, action.source)
        if decisions.action_index(action.source) >= 0:
            self._change_form(result.line.mark, action, value, units)
        else:
            hint = translate(
                "Spanledger",
                "This action comes from the model or its self weight; change it there, or add "
                "another one to the span.",
            )
            label = QtWidgets.QLabel(hint)
            label.setWordWrap(True)
            self._layout.addWidget(label)
        self._layout.addStretch(1)

    def show_paths(self, paths: list[Path]) -> None:
        """Show the lines that carry this spot or bear on it, as buttons that lead there."""
        for number, path in enumerate(paths):
            lead = button(f"SpanledgerPath{number}", path.words,
                          translate("Spanledger", "Go to that line"))  # fmt: skip
            lead.clicked.connect(lambda _on=False, line=path.line: self.line_wanted.emit(line))
            self._layout.insertWidget(2 + number, lead)

    # Forms.
    def _members_form(self) -> None:
        section = button(
            "SpanledgerChooseSection", translate("Spanledger", "Section and material…"),
            translate("Spanledger", "Give the members another section or material"),
        )  # fmt: skip
        lightest = button(
            "SpanledgerSeekLightest", translate("Spanledger", "Lightest section…"),
            translate("Spanledger", "Find the lightest section that suffices"),
        )  # fmt: skip
        section.clicked.connect(self.section_wanted)
        lightest.clicked.connect(self.lightest_wanted)
        self._layout.addWidget(section)
        self._layout.addWidget(lightest)

    def _rules_form(self, current: str) -> None:
        from analysis_core.rules import names

        known = list(names())
        rules = choice("SpanledgerRules", known if current in known else [current, *known], current)
        apply = button("SpanledgerDecideRules", translate("Spanledger", "Combine by these"))
        form = self._form(translate("Spanledger", "Rules of all lines"))
        form.addRow(translate("Spanledger", "Rule set"), rules)
        form.addRow(apply)

        def decide() -> None:
            name = rules.currentData()
            title = translate("Spanledger", "Combined by {rules}").format(rules=name)
            self.decided.emit(title, lambda text: decisions.decide_rules(text, name))

        apply.clicked.connect(decide)

    def _redistribution_form(self, mark: str) -> None:
        tip = translate("Spanledger", "Part of the support moments, 0 % for none")
        part = entry("SpanledgerRedistribution", hint="15 %", tip=tip)
        apply = button("SpanledgerDecideRedistribution", translate("Spanledger", "Redistribute"))
        form = self._form(translate("Spanledger", "Moment redistribution"))
        form.addRow(translate("Spanledger", "Part"), part)
        form.addRow(apply)

        def decide() -> None:
            title = translate("Spanledger", "Moments of {mark} redistributed").format(mark=mark)
            words = part.text()
            self.decided.emit(
                title, lambda text: decisions.decide_redistribution(text, mark, words)
            )

        apply.clicked.connect(decide)

    def _cases_form(self, outcome: Outcome) -> None:
        if not outcome.model.cases:
            return
        natures = get_args(Nature)
        case = _case_box("SpanledgerNatureCase", outcome)
        nature = choice("SpanledgerNature", natures, outcome.model.cases[0].nature)
        apply = button("SpanledgerDecideNature", translate("Spanledger", "It is of this nature"))
        form = self._form(translate("Spanledger", "Load cases"))
        form.addRow(translate("Spanledger", "Case"), case)
        form.addRow(translate("Spanledger", "Nature"), nature)
        form.addRow(apply)
        case.currentIndexChanged.connect(
            lambda index: nature.setCurrentIndex(natures.index(outcome.model.cases[index].nature))
        )

        def decide() -> None:
            name, chosen = case.currentText(), nature.currentData()
            title = translate("Spanledger", "Case {case} is {nature}").format(
                case=name, nature=nature.currentText()
            )
            self.decided.emit(title, lambda text: decisions.decide_nature(text, name, chosen))

        apply.clicked.connect(decide)

    def _support_form(
        self, mark: str, joint: int, support: Any, where: Any, units: DisplayUnits
    ) -> None:
        kind = choice(
            "SpanledgerSupport", SUPPORT_CHOICES, support_choice(support),
            translate("Spanledger", "How the joint is held"),
        )  # fmt: skip
        vertical = entry(
            "SpanledgerVertical",
            stiffness_words(support.vertical if support else RIGID, "translational stiffness",
                            units),
            tip=translate("Spanledger", "Stiffness upward: rigid, free, or 25 kN/mm say"),
        )  # fmt: skip
        rotation = entry(
            "SpanledgerRotation",
            stiffness_words(support.rotation if support else 0.0, "rotational stiffness", units),
            tip=translate("Spanledger", "Stiffness against turning: rigid, free, or a value"),
        )
        apply = button("SpanledgerDecideSupport", translate("Spanledger", "Hold it so"))
        form = self._form(translate("Spanledger", "Bearing"))
        form.addRow(translate("Spanledger", "Held"), kind)
        form.addRow(translate("Spanledger", "Vertical"), vertical)
        form.addRow(translate("Spanledger", "Rotation"), rotation)
        form.addRow(apply)

        def only_for_springs() -> None:
            spring = kind.currentData() == SPRING
            vertical.setEnabled(spring)
            rotation.setEnabled(spring)

        def decide() -> None:
            title = translate("Spanledger", "Joint {joint} of {mark}: {how}").format(
                joint=joint, mark=mark, how=kind.currentText()
            )

            def change(text: str) -> str:
                if kind.currentData() != SPRING:
                    return decisions.decide_support(text, where, kind.currentData())
                values = {
                    "vertical": _stiffness(vertical.text(), "translational stiffness", units),
                    "rotation": _stiffness(rotation.text(), "rotational stiffness", units),
                }
                return decisions.decide_support(text, where, values)

            self.decided.emit(title, change)

        only_for_springs()
        kind.currentIndexChanged.connect(lambda _index: only_for_springs())
        apply.clicked.connect(decide)

    def _movement_form(
        self, mark: str, joint: int, element: str, outcome: Outcome, units: DisplayUnits
    ) -> None:
        case = _case_box("SpanledgerMovementCase", outcome)
        down = entry("SpanledgerDown", hint=f"10 {units.symbol('deflection')}",
                     tip=translate("Spanledger", "How far the support sinks"))  # fmt: skip
        apply = button("SpanledgerDecideMovement", translate("Spanledger", "Let it settle"))
        form = self._form(translate("Spanledger", "Settlement"))
        form.addRow(translate("Spanledger", "Case"), case)
        form.addRow(translate("Spanledger", "Down"), down)
        form.addRow(apply)

        def decide() -> None:
            title = translate("Spanledger", "Joint {joint} of {mark} settles").format(
                joint=joint, mark=mark
            )

            def change(text: str) -> str:
                words = decisions.quantity_text(down.text(), "settlement", units)
                return decisions.decide_movement(text, element, case.currentText(), words)

            self.decided.emit(title, change)

        apply.clicked.connect(decide)

    def _release_form(
        self, mark: str, member: int, at_end: bool, spring: float, where: Any, units: DisplayUnits
    ) -> None:
        side = "End" if at_end else "Start"
        kind = choice(f"Spanledger{side}Joined", RELEASE_CHOICES, release_choice(spring))
        value = entry(f"Spanledger{side}Spring",
                      stiffness_words(spring, "rotational stiffness", units))  # fmt: skip
        apply = button(f"SpanledgerDecide{side}", translate("Spanledger", "Join it so"))
        words = translate("Spanledger", "End") if at_end else translate("Spanledger", "Start")
        form = self._form(words)
        form.addRow(translate("Spanledger", "Joined"), kind)
        form.addRow(translate("Spanledger", "Spring"), value)
        form.addRow(apply)
        value.setEnabled(kind.currentData() == SPRING)
        kind.currentIndexChanged.connect(
            lambda _index: value.setEnabled(kind.currentData() == SPRING)
        )

        def decide() -> None:
            title = translate("Spanledger", "{side} of span {member} of {mark}: {how}").format(
                side=words, member=member + 1, mark=mark, how=kind.currentText()
            )

            def change(text: str) -> str:
                rotation = {"continuous": "rigid", "hinge": "free"}.get(kind.currentData(), "")
                if not rotation:
                    rotation = _stiffness(value.text(), "rotational stiffness", units)
                return decisions.decide_release(text, where, rotation)

            self.decided.emit(title, change)

        apply.clicked.connect(decide)

    def _action_form(self, mark: str, element: str, outcome: Outcome, units: DisplayUnits) -> None:
        case = _case_box("SpanledgerActionCase", outcome)
        case.setEditable(True)
        shape = choice("SpanledgerActionShape", decisions.SHAPES)
        value = entry("SpanledgerActionValue", hint=f"12 {units.symbol('line load')}")
        at = entry("SpanledgerActionAt", hint=translate("Spanledger", "2.5 m or 50 %"))
        start = entry("SpanledgerActionFrom", hint=translate("Spanledger", "its start"))
        end = entry("SpanledgerActionTo", hint=translate("Spanledger", "its end"))
        apply = button("SpanledgerDecideAction", translate("Spanledger", "Add the action"))
        form = self._form(translate("Spanledger", "One more action"))
        for words, field in (
            (translate("Spanledger", "Case"), case), (translate("Spanledger", "Shape"), shape),
            (translate("Spanledger", "Value"), value), (translate("Spanledger", "At"), at),
            (translate("Spanledger", "From"), start), (translate("Spanledger", "To"), end),
        ):  # fmt: skip
            form.addRow(words, field)
        form.addRow(apply)

        def suit_shape() -> None:
            spread = shape.currentData() == "uniform"
            at.setEnabled(not spread)
            start.setEnabled(spread)
            end.setEnabled(spread)
            symbol = units.symbol(decisions.action_quantity(shape.currentData()))
            value.setPlaceholderText(f"12 {symbol}")

        def decide() -> None:
            title = translate("Spanledger", "One more action on {mark}").format(mark=mark)
            kind = shape.currentData()
            places = {"start": start.text(), "end": end.text()}
            if kind != "uniform":
                places = {"at": at.text()}

            def change(text: str) -> str:
                words = decisions.quantity_text(
                    value.text(), decisions.action_quantity(kind), units
                )
                where = {k: _position(v, units) for k, v in places.items() if v.strip()}
                return decisions.decide_action(
                    text, element, case=case.currentText(), shape=kind, value=words, **where
                )

            self.decided.emit(title, change)

        suit_shape()
        shape.currentIndexChanged.connect(lambda _index: suit_shape())
        apply.clicked.connect(decide)

    def _section_form(self, mark: str, part: Any, units: DisplayUnits) -> None:
        inertia = entry(
            "SpanledgerInertia",
            hint=units.text(part.section.inertia, "inertia") if part.section else "8356 cm4",
        )
        apply = button("SpanledgerDecideSection", translate("Spanledger", "Take this section"))
        form = self._form(translate("Spanledger", "Section"))
        form.addRow(translate("Spanledger", "Inertia"), inertia)
        form.addRow(apply)

        def decide() -> None:
            title = translate("Spanledger", "Section of {mark}").format(mark=mark)

            def change(text: str) -> str:
                words = decisions.quantity_text(inertia.text(), "inertia", units)
                return decisions.decide_section(text, part.element, {"inertia": words})

            self.decided.emit(title, change)

        apply.clicked.connect(decide)

    def _change_form(
        self, mark: str, action: Action, value: tuple[str, str] | None, units: DisplayUnits
    ) -> None:
        form = self._form(translate("Spanledger", "In the job file"))
        if value is not None:
            shape, words = value
            field = entry("SpanledgerChangeValue", words)
            apply = button("SpanledgerChangeAction", translate("Spanledger", "Change it"))
            form.addRow(translate("Spanledger", "Value"), field)
            form.addRow(apply)

            def decide() -> None:
                title = translate("Spanledger", "An action on {mark} changed").format(mark=mark)

                def change(text: str) -> str:
                    typed = decisions.quantity_text(
                        field.text(), decisions.action_quantity(shape), units
                    )
                    return decisions.change_action(text, action.source, typed)

                self.decided.emit(title, change)

            apply.clicked.connect(decide)
        drop = button(
            "SpanledgerDropAction", translate("Spanledger", "Take it out"),
            translate("Spanledger", "Takes the entry out of the job file, wherever it acts"),
        )  # fmt: skip
        form.addRow(drop)
        drop.clicked.connect(
            lambda: self.decided.emit(
                translate("Spanledger", "An action on {mark} taken out").format(mark=mark),
                lambda text: decisions.drop_action(text, action.source),
            )
        )

    # Parts.
    def _begin(self, title: str) -> None:
        body = QtWidgets.QWidget()
        self._checked = None
        self._layout = QtWidgets.QVBoxLayout(body)
        self._layout.setContentsMargins(6, 2, 6, 6)
        if title:
            self._layout.addWidget(heading(title))
        self._put_away(self.takeWidget())
        self.setWidget(body)
        for part in (body, self.viewport()):
            part.setAutoFillBackground(False)  # a dark style sheet's ground shows through

    def _put_away(self, body: Any) -> None:
        """Delete what was shown once the event is over that it may be in the midst of.

        A button that leads to another line has this called from its own click; it must outlive
        the click, and must not become a window of its own meanwhile.
        """
        if body is not None:
            body.setParent(self)
            body.hide()
            body.deleteLater()

    def _facts(self, facts: list[tuple[str, str]]) -> Any:
        label = facts_label("SpanledgerFacts")
        label.setText(facts_text(facts))
        self._layout.addWidget(label)
        return label

    def _form(self, title: str) -> Any:
        box = QtWidgets.QGroupBox(title)
        form = QtWidgets.QFormLayout(box)
        form.setContentsMargins(6, 4, 6, 4)
        self._layout.addWidget(box)
        return form


def _case_box(name: str, outcome: Outcome) -> Any:
    box = QtWidgets.QComboBox()
    box.setObjectName(name)
    for case in outcome.model.cases:
        box.addItem(case.name)
    return box


def _stiffness(typed: str, quantity: str, units: DisplayUnits) -> str:
    words = typed.strip().lower()
    return words if words in ("rigid", "free") else decisions.quantity_text(typed, quantity, units)


def _position(typed: str, units: DisplayUnits) -> str:
    words = typed.strip()
    return words if words.endswith("%") else decisions.quantity_text(words, "length", units)
