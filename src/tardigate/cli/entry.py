"""Where a process begins: so little that an interrupt during the imports of the rest is told in one line.

Takes the process's own words, gives the exit status.
"""

import sys


def run() -> int:
    """Run `tardigate`; return the exit status."""
    try:
        from tardigate.cli.main import run as run_words

        return run_words()
    except KeyboardInterrupt:
        sys.stderr.write("tardigate: interrupted\n")
        return 130
