"""The figures that the checks of a sheet rest on, those of a nation among them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from analysis_core.checking.members import FIGURES
from analysis_core.checks.working import Figure
from analysis_core.units import DisplayUnits


def check_figures(
    codes: Iterable[str], replaced: Mapping[str, float], units: DisplayUnits
) -> list[tuple[str, str, str, str, str]]:
    """Return figure, value used, meaning, clause and who settled it, for each code in use.

    A figure that several codes share stands once for each.
    """
    rows = []
    for code in sorted(set(codes) & set(FIGURES)):
        for name, figure in FIGURES[code].items():
            value, words = _shown(replaced.get(name, figure.value), figure, units)
            if name in replaced:
                by = f"job file, for {_shown(figure.value, figure, units)[0]}"
            else:
                by = "recommended, national" if figure.national else "code or practice"
            rows.append((name, value, words, f"{figure.clause} †", by))
    return rows


def _shown(value: float, figure: Figure, units: DisplayUnits) -> tuple[str, str]:
    """A value in display units, and its meaning without the unit that it is kept in."""
    for unit, quantity in ((", Pa", "stress"), (", m", "section length")):
        if figure.meaning.endswith(unit) or f"{unit}:" in figure.meaning:
            return units.text(value, quantity), figure.meaning.replace(unit, "")
    return f"{value:g}", figure.meaning
