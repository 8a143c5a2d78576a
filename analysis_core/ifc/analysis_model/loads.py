"""The actions of a line as actions of an analysis model, in the axes of that model."""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.findings import Finding
from analysis_core.ifc.analysis_model.bars import Stretch, actions_on, bar_at, straight, stretches
from analysis_core.ifc.analysis_model.items import WrittenBar, WrittenLine, clockwise
from analysis_core.ifc.analysis_model.text import ModelText, Vector
from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    JointForce,
    JointMovement,
    MemberAction,
    PointForce,
    PointMoment,
)

_FORCES = ("FORCEUNIT",) * 3 + ("TORQUEUNIT",) * 3
_MOVEMENTS = ("LENGTHUNIT",) * 3 + ("PLANEANGLEUNIT",) * 3
_NIL: Vector = (0.0, 0.0, 0.0)


class LoadWriter:
    """Writes the actions of lines; ``cases`` holds what belongs to each load case."""

    def __init__(self, text: ModelText) -> None:
        self._text = text
        self._count = 0
        self.cases: dict[str, list[int]] = {}
        self.findings: list[Finding] = []

    def write(self, written: WrittenLine) -> None:
        """Write all actions of a line."""
        line = written.line
        for member in line.members:
            bars = written.bars[member.id]
            for action in actions_on(line, member):
                self._on_member(written, bars, action)
        for each in line.actions:
            if isinstance(each, JointForce | JointMovement):
                self._on_node(written, each)

    def _on_member(
        self, written: WrittenLine, bars: Sequence[WrittenBar], action: MemberAction
    ) -> None:
        if isinstance(action, DistributedForce):
            if not straight(action):
                self._report(written, "action-approximated", _APPROXIMATED)
            for bar in bars:
                for stretch in stretches(action, bar.bar):
                    self._stretch(bar, stretch, action.case, action.source)
        elif isinstance(action, ImposedCurvature):
            self._report(written, "curvature-not-written", _NO_CURVATURE)
        else:
            place = bar_at([bar.bar for bar in bars], action)
            bar = next(each for each in bars if each.bar is place)
            self._point(written, bar, action)

    def _stretch(self, bar: WrittenBar, stretch: Stretch, case: str, source: str) -> None:
        first, last = (
            _plus(bar.down, stretch.transverse[i], bar.along, stretch.axial[i]) for i in (0, 1)
        )
        if not any((*first, *last)):
            return
        whole = stretch.start <= 1e-9 and stretch.end >= bar.bar.length - 1e-9
        if self._text.old:
            number = self._old_stretch(bar, stretch, first, last, source, whole=whole)
        else:
            number = self._new_stretch(stretch, first, last, source, whole=whole)
        self._belongs(number, bar.number, case)

    def _new_stretch(
        self, stretch: Stretch, first: Vector, last: Vector, source: str, *, whole: bool
    ) -> int:
        """From IFC4 on: a plain load, or a configuration with two locations."""
        text = self._text
        load, shape = self._linear(first), ".CONST."
        if not whole or first != last:
            places = ",".join(
                f"({text.measured(place, 'LENGTHUNIT')})" for place in (stretch.start, stretch.end)
            )
            load = text.lines.add(
                f"IFCSTRUCTURALLOADCONFIGURATION($,(#{load},#{self._linear(last)}),({places}))"
            )
            shape = ".LINEAR."
        return self._action(
            "IFCSTRUCTURALCURVEACTION", source, "$", "$", f"#{load}", ".GLOBAL_COORDS.", ".F.",
            ".TRUE_LENGTH.", shape,
        )  # fmt: skip

    def _old_stretch(
        self,
        bar: WrittenBar,
        stretch: Stretch,
        first: Vector,
        last: Vector,
        source: str,
        *,
        whole: bool,
    ) -> int:
        """IFC2X3: an edge says how far the load reaches, points where its values are."""
        text = self._text
        placement = shape = "$"
        ends = [text.vertex(bar.point(s)) for s in (stretch.start, stretch.end)]
        if not whole or first != last:
            placement = text.placement()
            shape = text.shape("Edge", text.lines.add(f"IFCEDGE(#{ends[0]},#{ends[1]})"))
        plain = ("$" if shape == "$" else shape, f"#{self._linear(first)}", ".GLOBAL_COORDS.",
                 ".F.", "$", ".TRUE_LENGTH.")  # fmt: skip
        if first == last:
            return self._action("IFCSTRUCTURALLINEARACTION", source, placement, *plain)
        places = ",".join(f"#{text.topology('Vertex', vertex)}" for vertex in ends)
        aspect = text.lines.add(f"IFCSHAPEASPECT(({places}),$,$,.F.,{shape})")
        return self._action(
            "IFCSTRUCTURALLINEARACTIONVARYING", source, placement, *plain, f"#{aspect}",
            f"(#{self._linear(last)})",
        )  # fmt: skip

    def _point(
        self, written: WrittenLine, bar: WrittenBar, action: PointForce | PointMoment
    ) -> None:
        force, moment = _NIL, _NIL
        if isinstance(action, PointForce):
            force = _plus(bar.down, action.transverse, bar.along, action.axial)
        else:
            moment = _times(clockwise(written.line), action.moment)
        if not any((*force, *moment)):
            return
        text = self._text
        vertex = text.vertex(bar.point(action.position - bar.bar.start))
        load = self._six("IFCSTRUCTURALLOADSINGLEFORCE", force, moment, _FORCES)
        number = self._action(
            "IFCSTRUCTURALPOINTACTION", action.source, text.placement(),
            text.shape("Vertex", vertex), f"#{load}", ".GLOBAL_COORDS.", ".F.", *self._caused(),
        )  # fmt: skip
        self._belongs(number, bar.number, action.case)

    def _on_node(self, written: WrittenLine, action: JointForce | JointMovement) -> None:
        turn = action.moment if isinstance(action, JointForce) else action.rotation
        if self._text.old:  # in the axes of the node: along the line, across it, up
            first = (action.horizontal, 0.0, -action.vertical)
            second = (0.0, turn, 0.0)
        else:
            x, y, _ = written.line.axis
            first = (action.horizontal * x, action.horizontal * y, -action.vertical)
            second = _times(clockwise(written.line), turn)
        if not any((*first, *second)):
            return
        if isinstance(action, JointForce):
            load = self._six("IFCSTRUCTURALLOADSINGLEFORCE", first, second, _FORCES)
        else:
            load = self._six("IFCSTRUCTURALLOADSINGLEDISPLACEMENT", first, second, _MOVEMENTS)
        number = self._action(
            "IFCSTRUCTURALPOINTACTION", action.source, "$", "$", f"#{load}", ".GLOBAL_COORDS.",
            ".F.", *self._caused(),
        )  # fmt: skip
        self._belongs(number, written.nodes[action.joint], action.case)

    def _caused(self) -> list[str]:
        return ["$"] if self._text.old else []

    def _action(self, keyword: str, source: str, *attributes: str) -> int:
        self._count += 1
        return self._text.object(keyword, f"action {self._count}", source or "Action", *attributes)

    def _belongs(self, number: int, item: int, case: str) -> None:
        """Tie an action to what it acts on, and remember its case."""
        self._text.rooted(
            "IFCRELCONNECTSSTRUCTURALACTIVITY", f"action {self._count}/item", f"#{item}",
            f"#{number}",
        )  # fmt: skip
        self.cases.setdefault(case, []).append(number)

    def _linear(self, force: Vector) -> int:
        values = ",".join(self._text.measured(c, "LINEARFORCEUNIT") for c in force)
        return self._text.lines.shared(f"IFCSTRUCTURALLOADLINEARFORCE($,{values},$,$,$)")

    def _six(self, keyword: str, first: Vector, second: Vector, kinds: Sequence[str]) -> int:
        values = ",".join(
            self._text.measured(c, kind) for c, kind in zip((*first, *second), kinds, strict=True)
        )
        return self._text.lines.shared(f"{keyword}($,{values})")

    def _report(self, written: WrittenLine, slug: str, message: str) -> None:
        line = written.line
        finding = Finding(
            "note", slug, f"Line {line.mark}: {message}", line.elements, line.mark
        )  # fmt: skip
        if finding not in self.findings:
            self.findings.append(finding)


_APPROXIMATED = (
    "an action that is neither constant nor linear was written into the analysis model in straight "
    "parts, which changes the effects a little."
)
_NO_CURVATURE = (
    "curvature imposed by temperature was not written into the analysis model: it would need the "
    "depth of every section. Put the temperatures there, or analyse from the physical model."
)


def _plus(a: Vector, p: float, b: Vector, q: float) -> Vector:
    return a[0] * p + b[0] * q, a[1] * p + b[1] * q, a[2] * p + b[2] * q


def _times(a: Vector, p: float) -> Vector:
    return a[0] * p, a[1] * p, a[2] * p
