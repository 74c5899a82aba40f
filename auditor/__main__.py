"""``python -m auditor``."""

import sys

from auditor.cli import run

if __name__ == "__main__":
    sys.exit(run())
