"""The command line: one file per command."""

import sys
from typing import NoReturn

from calcdoc.commands.main import run


def main() -> NoReturn:
    """Run the command line and leave with its exit status."""
    sys.exit(run(sys.argv[1:]))
