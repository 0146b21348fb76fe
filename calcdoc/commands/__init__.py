"""The command line: one file per command."""

import gc
import sys
from typing import NoReturn

_SELDOM = 100_000
"""New objects between two searches for garbage; the usual 700 would search while modules load."""


def main() -> NoReturn:
    """Run the command line and leave with its exit status."""
    # A command makes little garbage, but each search walks all that the libraries made: together
    # with those at exit that is a sixth of a short command.
    gc.set_threshold(_SELDOM)
    from calcdoc.commands.main import run  # noqa: PLC0415  (loads the libraries)

    status = run(sys.argv[1:])
    gc.freeze()
    sys.exit(status)
