"""`python -m tardigate`."""

import sys

from tardigate.cli.main import run

sys.exit(run())
