"""Formulas of fixed-end moments as the sheet prints them, against integration by quadrature."""

import re

import numpy as np
import pytest

from analysis_core.calculation.fixed_end_rows import fixed_end_rows
from analysis_core.distribution.record import distribute
from analysis_core.model import RIGID, DistributedForce, Joint, Line, Member, Piece, Support
from analysis_core.report.record_rows import record_tables
from analysis_core.units import display_units

METRIC = display_units("metric", {})
LENGTH = 6.4


def row(action, shear=None):
    joints = (Joint(0, 0.0, 0.0, (0.0, 0.0, 0.0)), Joint(1, LENGTH, 0.0, (LENGTH, 0.0, 0.0)))
    member = Member(0, 0, 1, (Piece(LENGTH, (1e7,), shear=shear),))
    ((_, _, formula, start, end),) = fixed_end_rows(Line("L", joints, (member,), (action,)), METRIC)
    return formula, float(start), float(end)


def integrated(low, high, w):
    """Moments of both ends held, by Gauss quadrature of the influence lines, kN·m."""
    points, weights = np.polynomial.legendre.leggauss(8)
    s = low + (points + 1) / 2 * (high - low)
    part = weights * (high - low) / 2 * w(s) / 1e3
    return (-float((part * s * (LENGTH - s) ** 2).sum() / LENGTH**2),
            float((part * s**2 * (LENGTH - s)).sum() / LENGTH**2))  # fmt: skip


def test_a_uniform_load_on_a_part_by_its_closed_form():
    formula, start, end = row(DistributedForce("G", 0, 1.1, 4.9, (7.3e3,)))
    assert (start, end) == pytest.approx(integrated(1.1, 4.9, lambda s: 7.3e3 + 0 * s), abs=0.006)
    a, b, span = (float(n) for n in re.findall(r"(\d+\.\d{3})", formula))

    def first(s):
        return s**2 * (6 * span**2 - 8 * span * s + 3 * s**2)

    def last(s):
        return s**3 * (4 * span - 3 * s)

    assert "s² (6 L² - 8 L s + 3 s²)" in formula
    assert "s³ (4 L - 3 s)" in formula
    assert -7.3 / 12 / span**2 * (first(b) - first(a)) == pytest.approx(start, abs=0.006)
    assert 7.3 / 12 / span**2 * (last(b) - last(a)) == pytest.approx(end, abs=0.006)


def test_a_load_that_grows_along_the_member_by_its_closed_form():
    formula, start, end = row(DistributedForce("G", 0, 0.0, LENGTH, (2e3, 1.5e3)))
    assert (start, end) == pytest.approx(
        integrated(0.0, LENGTH, lambda s: 2e3 + 1.5e3 * s), abs=0.006
    )
    w1, w2, span = (float(n) for n in re.findall(r"(\d+\.\d+)", formula))
    assert (w1, w2) == pytest.approx((2.0, 2.0 + 1.5 * LENGTH), abs=0.006)
    assert -(3 * w1 + 2 * w2) * span**2 / 60 == pytest.approx(start, abs=0.02)
    assert (2 * w1 + 3 * w2) * span**2 / 60 == pytest.approx(end, abs=0.02)


def test_shear_lowers_what_both_ends_turn_alike_and_nothing_else():
    """Both moments in one sense over 1 + Φ: 12 EI/(G A_s L²) = 12 · 1e7/(3e7 · 6.4²)."""
    load = DistributedForce("G", 0, 1.1, 3.9, (7.3e3,))
    _, start, end = row(load)
    formula, start_, end_ = row(load, shear=(3e7,))
    phi = float(re.search(r"Φ = ([\d.]+)", formula)[1])
    assert phi == pytest.approx(12e7 / (3e7 * LENGTH**2), abs=5e-5)
    turned, alike = (start - end) / 2, (start + end) / (2 * (1 + phi))
    assert (start_, end_) == pytest.approx((turned + alike, -turned + alike), abs=0.02)
    assert "Φ" not in row(DistributedForce("G", 0, 0.0, LENGTH, (7.3e3,)), shear=(3e7,))[0]


def test_stiffness_with_shear_follows_from_the_note_of_the_table():
    """The table's stiffness and carry-over redone from Φ as printed, for a fixed far end."""
    fixed = Support(RIGID, RIGID, RIGID)
    joints = tuple(
        Joint(i, x, 0.0, (x, 0.0, 0.0), fixed if i != 1 else Support(RIGID))
        for i, x in enumerate((0.0, LENGTH, LENGTH + 4.0))
    )
    members = (
        Member(0, 0, 1, (Piece(LENGTH, (1e7,), shear=(3e7,)),), span=1),
        Member(1, 1, 2, (Piece(4.0, (1e7,), shear=(3e7,)),), span=2),
    )
    load = DistributedForce("G", 0, 0.0, LENGTH, (7.3e3,))
    (table,) = record_tables(distribute(Line("L", joints, members, (load,)), "G"), METRIC)
    rows = {row.kind: row.cells for row in table.rows}
    note = next(n for n in table.notes if n.startswith("Flexible in shear"))
    values = [float(v) for v in re.findall(r"(\d\.\d{4}) for", note)]

    assert len(values) == 2
    at = table.columns.index("1-0")
    phi = values[0]
    stiffness = (4 + phi) / (1 + phi) * 1e7 / LENGTH / 1e3
    assert float(rows["stiffness"][at]) == pytest.approx(stiffness, rel=1e-3)
    assert float(rows["carry"][at]) == pytest.approx((2 - phi) / (4 + phi), abs=2e-4)
