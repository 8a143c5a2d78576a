"""The last resort for bodies this reader has no rule for: faces from the geometry library.

Slow and made for the eye, so it is not on the road of ordinary bodies; the library is loaded
only when the first such body is met.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from analysis_core.ifc.body_items import Mesh


def library_mesh(definition: Any) -> Mesh | None:
    """Return the faces of the body of an IfcProductDefinitionShape, in its own coordinates.

    None where the library cannot make anything of it either.
    """
    try:
        import ifcopenshell.geom  # half a second to load, and seldom wanted

        settings = ifcopenshell.geom.settings()  # type: ignore[no-untyped-call]
        for representation in definition[2]:
            if (representation[1] or "").lower() in ("body", "facetation", "tessellation", ""):
                shape = ifcopenshell.geom.create_shape(settings, representation)
                return _mesh(shape, representation)
    except Exception:  # whatever the library raises: there is no body then, and a finding says so
        return None
    return None


def _mesh(shape: Any, representation: Any) -> Mesh | None:
    geometry = getattr(shape, "geometry", shape)
    points = np.array(geometry.verts, dtype=np.float64).reshape(-1, 3)
    triangles = np.array(geometry.faces, dtype=np.int64).reshape(-1, 3)
    if len(points) < 4:
        return None
    kinds = {item.is_a() for item in representation[3] or ()}
    return Mesh(points, tuple((tuple(row),) for row in triangles.tolist()), " ".join(sorted(kinds)))
