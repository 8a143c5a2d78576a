"""Splines and Bézier curves by chords (C. de Boor's recurrence)."""

from __future__ import annotations

from typing import Any

import numpy as np

from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.geometry.paths import Coordinates, Measures, Path, scaled, straight_through
from analysis_core.ifc.unreadable import UnreadableShapeError

CHORDS_TO_A_SPLINE_SPAN = 24


def spline(curve: Any, measures: Measures) -> Path:
    """Return a spline or Bézier curve by chords.

    Raises UnreadableShapeError where knots and control points do not fit together.
    """
    degree = int(curve[0])
    control = np.array([scaled(point[0], measures.length) for point in curve[1]])
    weights = np.ones(len(control))
    if curve.is_a("IfcRationalBSplineCurveWithKnots") or curve.is_a("IfcRationalBezierCurve"):
        weights = np.array(curve.WeightsData, dtype=float)
    if curve.is_a("IfcBSplineCurveWithKnots"):
        knots = np.repeat(
            np.array(curve.Knots, dtype=float), [int(m) for m in curve.KnotMultiplicities]
        )
    else:
        # A Bézier curve: spans of ``degree`` control points each.
        spans = max(1, (len(control) - 1) // degree)
        knots = np.repeat(np.arange(spans + 1.0), [degree + 1, *[degree] * (spans - 1), degree + 1])
    if len(knots) != len(control) + degree + 1:
        raise UnreadableShapeError(
            f"the spline #{curve.id()} has {len(knots)} knots; its {len(control)} control points "
            f"of degree {degree} need {len(control) + degree + 1}"
        )
    return straight_through(_spline_points(degree, control, weights, knots), exact=False)


def _spline_points(
    degree: int, control: Floats, weights: Floats, knots: Floats
) -> list[Coordinates]:
    homogeneous = np.column_stack([control * weights[:, None], weights])
    points: list[Coordinates] = []
    for span in range(degree, len(control)):
        low, high = knots[span], knots[span + 1]
        if high <= low:
            continue
        for i in range(CHORDS_TO_A_SPLINE_SPAN + 1):
            if i == 0 and points:
                continue
            value = low + (high - low) * i / CHORDS_TO_A_SPLINE_SPAN
            point = _de_boor(degree, homogeneous, knots, span, float(value))
            points.append(tuple((point[:-1] / point[-1]).tolist()))
    return points


def _de_boor(degree: int, control: Floats, knots: Floats, span: int, value: float) -> Floats:
    rows = control[span - degree : span + 1].copy()
    for level in range(1, degree + 1):
        for j in range(degree, level - 1, -1):
            i = span - degree + j
            share = (value - knots[i]) / (knots[i + degree + 1 - level] - knots[i])
            rows[j] = (1.0 - share) * rows[j - 1] + share * rows[j]
    return np.asarray(rows[degree])
