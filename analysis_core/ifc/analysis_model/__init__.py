"""The idealisation as an analysis model of the open standard."""
