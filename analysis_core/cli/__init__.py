"""The command line.  What was asked for goes to stdout, progress and messages to stderr."""

from analysis_core.cli.run import main

__all__ = ["main"]
