"""Makes this folder importable, so that tests in its subfolders can use ``ifc_makers``."""
