"""Curves, outlines and placements of the standard, in metres."""
