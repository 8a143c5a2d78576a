"""What a rule set states, as plain data; read from YAML by ``loader``."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from analysis_core.effects.arrangements import Pattern
from analysis_core.effects.faces import FaceRule
from analysis_core.model import LimitState, Nature

Several = Literal["together", "in turn"]


@dataclass(frozen=True, slots=True)
class Figure:
    """A number of a code with its clause.

    ``confirmed``: compared with the standard; else written from memory, ``unsure`` where even that
    was not certain.  ``replaced``: the value that the project put its own in place of.
    """

    name: str
    value: float
    clause: str = ""
    meaning: str = ""
    unit: str = ""
    confirmed: bool = False
    unsure: bool = False
    national: bool = False
    replaced: float | None = None


@dataclass(frozen=True, slots=True)
class ActionClass:
    """A kind of action: a nature, perhaps with a category; its psi values are figures."""

    name: str
    nature: Nature
    group: str = ""
    words: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Group:
    """Kinds of action that act as one; ``several`` cases of it at once or one at a time."""

    name: str
    several: Several
    not_with: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Expression:
    """A sum of factored actions.

    ``permanent`` holds the factor where unfavourable and, if it differs, where favourable.
    ``always``: groups that are part of it, ``one_of``: of each mapping one group at a time.
    ``leading``, ``accompanying``: every other variable group takes the lead in turn; without
    ``leading`` all accompany.  A factor is a product of numbers and names of figures.
    """

    name: str
    prefix: str
    limit_state: LimitState
    kind: str
    clause: str
    permanent: tuple[str, ...]
    always: Mapping[str, str] = field(default_factory=dict)
    one_of: tuple[Mapping[str, str], ...] = ()
    leading: str = ""
    accompanying: str = ""
    needs: str = ""
    confirmed: bool = False
    unsure: bool = False


@dataclass(frozen=True, slots=True)
class PatternSpec:
    """Natures that are arranged together and how; ``elsewhere`` is the share on other spans."""

    natures: tuple[str, ...]
    patterns: tuple[Pattern, ...]
    elsewhere: float = 0.0


@dataclass(frozen=True, slots=True)
class ListedSet:
    """A set of arrangements that a code lists."""

    name: str
    clause: str
    rules: tuple[PatternSpec, ...]
    confirmed: bool = False


@dataclass(frozen=True, slots=True)
class ArrangementRules:
    """How a rule set arranges variable actions: ``by_span`` gives the share left elsewhere."""

    default: str = "every"
    by_span: Mapping[str, float] = field(default_factory=dict)
    permanent_by_span: bool = False
    clause: str = ""
    sets: Mapping[str, ListedSet] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class RuleSet:
    """One rule set, whole."""

    name: str
    title: str
    edition: str
    note: str
    figures: Mapping[str, Figure]
    actions: Mapping[str, ActionClass]
    groups: Mapping[str, Group]
    expressions: tuple[Expression, ...]
    arrangements: ArrangementRules
    redistribution: Mapping[str, str] = field(default_factory=dict)
    """Rule for moment redistribution by category of material."""
    reduction: str = ""
    """Rule for the reduction of imposed load by area."""
    rounding: bool = False
    """Whether peaks over bearings may be rounded."""
    monolithic: bool = False
    """Whether moments at the faces of monolithic supports may be used."""
    faces_clause: str = ""

    def figure(self, name: str) -> float:
        """Return the value of a figure.  Raises KeyError for one that the set does not have."""
        return self.figures[name].value

    def values(self) -> dict[str, float]:
        """Return all figures by name."""
        return {name: figure.value for name, figure in self.figures.items()}

    def face_rule(self) -> FaceRule:
        """Return what the set allows for moments over supports."""
        return FaceRule(
            rounding=self.values().get("face.rounding", 0.0) if self.rounding else 0.0,
            share=self.values().get("face.share", 0.0) if self.monolithic else 0.0,
            clause=self.faces_clause,
        )

    def value(self, factor: str, action: str = "") -> float:
        """Return a factor such as "gamma_Q * psi0" for the named action."""
        result = 1.0
        for word in factor.split("*"):
            word = word.strip()
            name = f"{word}.{action}" if word in PSI else word
            figure = self.figures.get(name)
            if figure is not None:
                result *= figure.value
            elif word in PSI:  # an action without combination values is never reduced
                continue
            else:
                result *= float(word)
        return round(result, 12)  # 0.85 * 1.35 is 1.1475 to a reader


PSI = ("psi0", "psi1", "psi2")
