"""The job file: read safely, checked, changed as text."""
