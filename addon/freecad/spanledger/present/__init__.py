"""What is shown, worked out without a window: rows, curves, symbols and texts.

Imports neither Qt nor FreeCAD, so plain tests can read every number and word.
"""
