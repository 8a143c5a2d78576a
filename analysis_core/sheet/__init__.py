"""The calculation sheet: one self-contained HTML file.  Templates only, no analysis."""
