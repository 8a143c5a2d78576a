"""``python -m analysis_core`` is the command line."""

import sys

from analysis_core.cli import main

if __name__ == "__main__":
    sys.exit(main())
