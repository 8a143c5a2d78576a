"""Profiles of the standard as outlines, and what their sections are worth."""
