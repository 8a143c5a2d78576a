"""Diagrams, extremes, envelopes and what follows from them; knows nothing of files or solvers."""
