"""What bodies are made of: prisms, meshes and curved sweeps.

A *prism* is a profile carried along a straight vector: what an extrusion is, whether mapped,
clipped, cut by openings, stretched by its mapping or one part of a boolean tree.  Everything
with faces is a *mesh*.  Anything swept along a curve or an angle is *curved*.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, NamedTuple

import numpy as np

from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import Frame, Vector
from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.geometry.paths import Path
from analysis_core.ifc.sections.reader import Profile


class Cut(NamedTuple):
    """A half-space taken away: everything on the side of ``normal`` beyond ``point``.

    ``reach`` (n, 2) bounds it in the plane of ``frame`` (its x, y axes), or None: unbounded.
    """

    point: Vector
    normal: Vector
    frame: Frame | None = None
    reach: Floats | None = None

    def moved(self, frame: Frame) -> Cut:
        """Return the cut after ``frame`` was applied (its axes nearly at right angles)."""
        back = frames.inverse(frame)
        # A normal goes with the transposed inverse.
        normal = (
            back[0] * self.normal[0] + back[1] * self.normal[1] + back[2] * self.normal[2],
            back[3] * self.normal[0] + back[4] * self.normal[1] + back[5] * self.normal[2],
            back[6] * self.normal[0] + back[7] * self.normal[1] + back[8] * self.normal[2],
        )
        return Cut(
            frames.point(frame, *self.point),
            normal,
            frames.compose(frame, self.frame) if self.frame else None,
            self.reach,
        )


class Prism(NamedTuple):
    """A profile in the x, y plane of ``frame``, carried along ``vector``.

    ``entity`` is the profile's entity, ``end_profile`` the profile at the far end of a taper.
    """

    profile: Profile
    frame: Frame
    vector: Vector
    entity: Any = None
    end_profile: Profile | None = None
    end_entity: Any = None
    cuts: tuple[Cut, ...] = ()
    holes: tuple[Prism, ...] = ()
    """Prisms taken away from it: notches, fittings, holes."""
    remark: str = ""
    """What had to be assumed to see a prism in the body."""

    def moved(self, frame: Frame) -> Prism:
        """Return the prism after ``frame`` was applied."""
        return self._replace(
            frame=frames.compose(frame, self.frame),
            vector=frames.direction(frame, *self.vector),
            cuts=tuple(cut.moved(frame) for cut in self.cuts),
            holes=tuple(hole.moved(frame) for hole in self.holes),
        )


class Mesh(NamedTuple):
    """Faces as lists of loops of indices into ``points`` (n, 3); no faces: a cloud of points."""

    points: Floats
    faces: tuple[tuple[tuple[int, ...], ...], ...]
    ifc_class: str

    def moved(self, frame: Frame) -> Mesh:
        """Return the mesh after ``frame`` was applied."""
        return self._replace(points=frames.images(frame, self.points))


class Curved(NamedTuple):
    """A sweep along a curve: points (n, 3) of its line, and what it is."""

    points: Floats
    ifc_class: str
    profile: Profile | None = None

    def moved(self, frame: Frame) -> Curved:
        """Return the sweep after ``frame`` was applied."""
        return self._replace(points=frames.images(frame, self.points))


Item = Prism | Mesh | Curved


class Shape(NamedTuple):
    """What a product's representation says: its axis, its body, and what was not understood."""

    axis: Path | None = None
    items: tuple[Item, ...] = ()
    troubles: tuple[str, ...] = ()
    box_only: bool = False


NOTHING = Shape()


def together(meshes: Sequence[Mesh]) -> Mesh:
    """Return several meshes as one."""
    points: list[Floats] = []
    faces: list[tuple[tuple[int, ...], ...]] = []
    count = 0
    for mesh in meshes:
        points.append(mesh.points)
        faces += [tuple(tuple(i + count for i in loop) for loop in face) for face in mesh.faces]
        count += len(mesh.points)
    return Mesh(np.vstack(points), tuple(faces), meshes[0].ifc_class)
