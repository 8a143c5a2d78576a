"""Sections and materials chosen by the engineer, written into the model itself."""

from analysis_core.ifc.updating.road import Change, Updated, Wish, update

__all__ = ["Change", "Updated", "Wish", "update"]
