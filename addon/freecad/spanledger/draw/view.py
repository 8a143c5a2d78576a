"""The view provider: all beam lines, supports and diagrams of a model as one batch of nodes.

One line set and two face sets serve the whole building; one node per beam would be a hundred
times slower.  A click on any part of a member answers with its component name "Member12".
"""

from __future__ import annotations

from typing import Any

import numpy as np
from pivy import coin

from ..document import scene_in, supports_in
from ..present.layout import DOWNWARD
from ..present.look import VIEW
from ..present.scene import Scene, filled, support_lines, symbol_size
from ..present.shades import Shade
from .nodes import Body, Faces, Labels, Lines

LINES, DIAGRAMS = "Lines", "Lines and diagrams"
_ICON = "spanledger.svg"
# Colours below and above the axis.
_COLOURS = {
    "moment": ("sagging", "hogging"),
    "shear": ("shear", "shear"),
    "deflection": ("deflection", "deflection"),
}


class BeamLinesView:
    """View provider of ``document.BeamLines``; it keeps nodes only."""

    def __init__(self, view_object: Any) -> None:
        view_object.Proxy = self

    def attach(self, view_object: Any) -> None:
        """Build the nodes once; FreeCAD calls it on creation and on reopening."""
        self.scene: Scene | None = None
        self.chosen_line: int | None = None
        # What was drawn last, with the scene that it was drawn of.
        self._shaded_as: tuple[Any, ...] = ()
        self._chosen_as: tuple[Any, ...] = ()
        palette = VIEW
        self.lines = Lines(palette.parts("line"), 2.5, casing=palette.parts("ground"))
        self.supports = Lines(
            palette.parts("support"), 1.5, casing=palette.parts("ground"), pickable=False
        )
        self.sagging = Faces(palette.parts("sagging"))
        self.hogging = Faces(palette.parts("hogging"))
        self.shaded = coin.SoSeparator()
        self.chosen = Lines(palette.parts("chosen"), 4.5, nearer=4, pickable=False)
        self.labels = Labels(palette.parts("ink"))
        self.building = Body(palette.parts("faint"))
        plain, full = coin.SoSeparator(), coin.SoSeparator()
        for root in (plain, full):
            model = coin.SoLightModel()
            model.model = coin.SoLightModel.BASE_COLOR
            root.addChild(model)
            for part in (self.lines, self.supports, self.labels):
                root.addChild(part.node)
            root.addChild(self.shaded)
            root.addChild(self.chosen.node)
        for faces in (self.sagging, self.hogging):
            full.addChild(faces.node)
        for root in (plain, full):
            root.addChild(self.building.node)
        self.root = full
        view_object.addDisplayMode(plain, LINES)
        view_object.addDisplayMode(full, DIAGRAMS)
        self.fill(view_object.Object)

    def fill(self, obj: Any) -> None:
        """Draw what the object keeps."""
        self.scene = scene_in(obj)
        self.lines.set_segments(self.scene.ends)
        size = symbol_size(self.scene)
        self.supports.set_polylines(*support_lines(supports_in(obj), size))
        self.fill_diagram(obj)
        self.choose(None)

    def fill_diagram(self, obj: Any) -> None:
        """Draw the diagram that the object keeps: above and below the axis apart."""
        count = len(self.scene.ends) if self.scene is not None else 0
        if not obj.Stations or len(obj.Upper) != count * obj.Stations:
            self.sagging.clear()
            self.hogging.clear()
            return
        upper = np.array(obj.Upper).reshape(count, obj.Stations)
        lower = np.array(obj.Lower).reshape(count, obj.Stations)
        below, above = _COLOURS.get(obj.Quantity, _COLOURS["moment"])
        self.sagging.set_colour(VIEW.parts(below))
        self.hogging.set_colour(VIEW.parts(above))
        if not DOWNWARD.get(obj.Quantity, True):
            upper, lower = -lower, -upper
        self.sagging.set_filled(filled(self.scene, upper, obj.Height, positive=True))
        self.hogging.set_filled(filled(self.scene, lower, obj.Height, positive=False))

    def show_building(self, shape: Any) -> None:
        """Show the bodies of the building faintly; None shows none."""
        if shape is None:
            self.building.clear()
        else:
            points = 1000.0 * shape.points - np.array(self.scene.origin)
            self.building.set(points, shape.triangles, shape.edges)

    def shade(self, classes: tuple[Shade, ...], numbers: list[int]) -> None:
        """Draw the lines of each class in its own colour and stroke, over the plain ones."""
        wanted = classes, numbers, self.scene
        if self._shaded_as == wanted:
            return
        self._shaded_as = wanted
        self.shaded.removeAllChildren()
        if len(classes) < 2 or len(numbers) <= int(self.scene.line_index.max(initial=-1)):
            return
        of_member = np.array(numbers, dtype=int)[self.scene.line_index]
        for number, shade in enumerate(classes):
            batch = Lines(
                VIEW.parts(shade.role), shade.width, casing=VIEW.parts("ground"), nearer=3,
                pickable=False, pattern=shade.pattern,
            )  # fmt: skip
            batch.set_segments(self.scene.ends[of_member == number])
            self.shaded.addChild(batch.node)

    def choose(self, line: int | None, labels: list[tuple[Any, str]] | None = None) -> None:
        """Mark one line, with texts at points; None marks nothing."""
        wanted = line, labels, self.scene
        if wanted == self._chosen_as:
            return
        self._chosen_as, self.chosen_line = wanted, line
        which = np.zeros(0, dtype=int) if line is None else self.members_of(line)
        self.chosen.set_segments(self.scene.ends[which])
        self.labels.set(labels or [])

    def members_of(self, line: int) -> np.ndarray:
        """Return the rows of the members of a line."""
        return np.nonzero(self.scene.line_index == line)[0]

    def look_at(self, view: Any, members: list[int]) -> None:
        """Move the camera so that it shows these members, from where it looks now."""
        points = self.scene.ends[members].reshape(-1, 3)
        low, high = points.min(axis=0), points.max(axis=0)
        margin = 0.15 * float(np.linalg.norm(high - low))
        box = coin.SbBox3f(*(low - margin).tolist(), *(high + margin).tolist())
        window = view.getViewer().getSoRenderManager()
        window.getCamera().viewBoundingBox(box, window.getViewportRegion().getViewportAspectRatio(),
                                           1.0)  # fmt: skip

    def extent(self) -> tuple[tuple[float, ...], tuple[float, ...]]:
        """Return the lowest and highest corner (mm) of all that is drawn."""
        action = coin.SoGetBoundingBoxAction(coin.SbViewportRegion(100, 100))
        action.apply(self.root)
        box = action.getBoundingBox()
        return tuple(box.getMin().getValue()), tuple(box.getMax().getValue())

    def updateData(self, obj: Any, name: str) -> None:  # noqa: N802  # FreeCAD's name
        if getattr(self, "scene", None) is None:
            return
        if name == "DiagramDrawn":
            self.fill_diagram(obj)
        elif name == "LinesDrawn":
            self.fill(obj)

    def getDisplayModes(self, _view_object: Any) -> list[str]:  # noqa: N802
        return [LINES, DIAGRAMS]

    def getDefaultDisplayMode(self) -> str:  # noqa: N802
        return DIAGRAMS

    def setDisplayMode(self, mode: str) -> str:  # noqa: N802
        return mode

    def useNewSelectionModel(self) -> bool:  # noqa: N802
        return True

    def getElement(self, detail: Any) -> str:  # noqa: N802
        """Return the component that a picked detail belongs to; only lines can be picked."""
        if detail.isOfType(coin.SoLineDetail.getClassTypeId()):
            return f"Member{coin.cast(detail, 'SoLineDetail').getLineIndex()}"
        return ""

    def getIcon(self) -> str:  # noqa: N802
        from ..resources import icon

        return icon(_ICON)

    def dumps(self) -> None:
        return None

    def loads(self, _state: object) -> None:
        return None

    __getstate__ = dumps  # names of 0.20
    __setstate__ = loads
