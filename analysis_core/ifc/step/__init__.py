"""The bytes of a STEP file: read, proven, indexed, added to and replaced as a whole."""
