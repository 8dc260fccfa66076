"""`python -m tardigate`."""

import sys

from tardigate.cli.entry import run

sys.exit(run())
