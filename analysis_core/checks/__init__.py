"""Resistance of members, clause by clause: pure functions of section, material and effects.

Every check keeps its working, so that a sheet can show formula, numbers and clause.  A section or
material outside the scope of a check is "not checked", with the reason; never a pass.
"""
