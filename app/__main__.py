"""Runs the command: ``python -m app``."""

import sys

from app.command import main

if __name__ == "__main__":
    sys.exit(main())
