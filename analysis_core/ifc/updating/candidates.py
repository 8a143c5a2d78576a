"""The profiles to choose from: those of a model by name, or those of a section table."""

from __future__ import annotations

from dataclasses import replace

from analysis_core.ifc.sections.reader import SectionReader, measures_of
from analysis_core.ifc.source import Source
from analysis_core.ifc.updating.chosen import Chooser
from analysis_core.ifc.updating.editor import Editor
from analysis_core.model import Section
from analysis_core.settings import Settings


def of_model(source: Source) -> dict[str, Section]:
    """Return the sections of all profiles that have a name and can be read, by their names."""
    reader = SectionReader(measures_of(source.units))
    found: dict[str, Section] = {}
    for profile in source.file.by_type("IfcProfileDef"):
        name = str(profile[1] or "").strip()
        section = reader.section(profile) if name and name not in found else None
        if section is not None and section.shape:
            found[name] = section
    return found


def of_table(source: Source, settings: Settings) -> dict[str, Section]:
    """Return the sections of the job's section table, as they would be written into the model.

    Raises JobError where one cannot be drawn, or is another than the model's of the same name.
    The source is changed in memory alone.
    """
    chooser = Chooser(Editor(source), settings)
    found = {}
    for row in settings.section_table:
        section = chooser.sections.section(chooser.profile(row.name))
        if section is not None:
            found[row.name] = replace(section, name=row.name)
    return found
