"""The working of a check: each formula with its numbers, its value and its clause."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

Status = Literal["satisfied", "not satisfied", "not checked"]


@dataclass(frozen=True, slots=True)
class Step:
    """One line of working: ``symbol`` = ``formula`` = numbers = ``value``.

    ``formula`` has its operands in braces: "{W_pl} {f_y} / {gamma_M0}"; ``operands`` are their SI
    values and quantities ("" for a pure number).  ``note`` says in words what decides, where there
    is no formula.  ``confirmed``: whether the clause was compared with the standard.
    """

    symbol: str
    formula: str
    value: float
    quantity: str
    clause: str = ""
    operands: tuple[tuple[str, float, str], ...] = ()
    note: str = ""
    confirmed: bool = False


@dataclass(frozen=True, slots=True)
class Check:
    """One check of one member: demand against resistance, SI units.

    ``use`` is demand over resistance.  ``source`` names the combination and arrangement, ``x`` the
    place (m from the member's start).  ``not_covered`` says what the check leaves out.
    """

    name: str
    status: Status
    clause: str
    demand: float = 0.0
    resistance: float = 0.0
    quantity: str = ""
    use: float = 0.0
    x: float = 0.0
    source: str = ""
    steps: tuple[Step, ...] = ()
    reason: str = ""
    not_covered: str = ""


_ROUNDING = 1e-9
"""By which a use may exceed 1 that is 1 by its formula: reinforcement made to just suffice."""


@dataclass(slots=True)
class Working:
    """Collects the steps of a check as they are computed."""

    steps: list[Step] = field(default_factory=list)

    def step(
        self,
        symbol: str,
        formula: str,
        value: float,
        quantity: str,
        clause: str = "",
        *,
        note: str = "",
        **operands: tuple[float, str],
    ) -> float:
        """Write a step down and return its value.  Operands: symbol=(value, quantity)."""
        known = tuple((name, v, q) for name, (v, q) in operands.items())
        self.steps.append(Step(symbol, formula, value, quantity, clause, known, note))
        return value

    def check(
        self,
        name: str,
        clause: str,
        *,
        demand: float,
        resistance: float,
        quantity: str,
        x: float = 0.0,
        source: str = "",
        not_covered: str = "",
    ) -> Check:
        """Return the finished check with the steps so far."""
        use = abs(demand) / resistance if resistance > 0.0 else float("inf")
        status: Status = "satisfied" if use <= 1.0 + _ROUNDING else "not satisfied"
        return Check(
            name, status, clause, demand, resistance, quantity, use, x, source,
            tuple(self.steps), not_covered=not_covered,
        )  # fmt: skip


def not_checked(name: str, reason: str, clause: str = "") -> Check:
    """Return a check that was not made, with the reason."""
    return Check(name, "not checked", clause, reason=reason)


@dataclass(frozen=True, slots=True)
class Figure:
    """A number that a standard gives or leaves to the nation: value, clause, meaning."""

    value: float
    clause: str
    meaning: str
    national: bool = False
    confirmed: bool = False


class Figures:
    """The figures of a code with the project's own values in their place."""

    def __init__(self, given: Mapping[str, Figure], replaced: Mapping[str, float]) -> None:
        unknown = set(replaced) - set(given)
        if unknown:
            raise KeyError(sorted(unknown)[0])
        self._given = given
        self._replaced = replaced

    def __getitem__(self, name: str) -> float:
        return self._replaced.get(name, self._given[name].value)

    def items(self) -> list[tuple[str, Figure, float]]:
        """Return name, figure as the standard has it, and the value used."""
        return [(name, figure, self[name]) for name, figure in self._given.items()]
