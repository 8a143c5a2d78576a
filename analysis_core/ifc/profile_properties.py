"""Section values stated in the property sets of a profile."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from analysis_core.findings import Finding
from analysis_core.ifc.outline import Matrix, Moments
from analysis_core.model import Section


class Stated:
    def section(self, name: str, matrix: Matrix) -> Section | None: ...
    def applied(self, section: Section, moments: Moments, matrix: Matrix) -> Section:
        return section

    def compared(self, name: str, moments: Moments) -> list[Finding]:
        return []


def stated_for(profile: Any, units: Any) -> Stated | None:
    return None
