"""The group of commands, and the one place where trouble becomes an exit status.

0 all passes, 1 a criterion fails or is not decided, 2 the text has errors, 3 the world is wrong.
"""

import sys
from collections.abc import Sequence
from typing import Final

import click

from calcdoc import __version__
from calcdoc.commands.check import check
from calcdoc.commands.explain import explain
from calcdoc.commands.methods import methods
from calcdoc.commands.new import new
from calcdoc.commands.write import write
from calcdoc.errors import CalcdocError

WORLD_IS_WRONG: Final = 3
COMMANDS: Final = (check, write, methods, new, explain)


@click.group(context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(version=__version__, message="calcdoc %(version)s")
def calcdoc() -> None:
    """Turn a design text into a calculation record that a reviewer can check and sign."""


for _command in COMMANDS:
    calcdoc.add_command(_command)


def run(arguments: Sequence[str]) -> int:
    """Run one command and return its exit status; what a user can type never gives a traceback."""
    try:
        status = calcdoc.main(args=list(arguments), prog_name="calcdoc", standalone_mode=False)
    except click.ClickException as trouble:
        trouble.show()
        return WORLD_IS_WRONG
    except click.Abort:
        return WORLD_IS_WRONG
    except CalcdocError as trouble:
        click.echo(f"calcdoc: {trouble}", err=True)
        return WORLD_IS_WRONG
    except BrokenPipeError:
        # The reader of our output has gone (as `| head` does); say nothing more.
        sys.stderr.close()
        return 0
    except Exception as trouble:  # noqa: BLE001  (a fault of ours must not look like one of theirs)
        from calcdoc.commands.faults import our_fault  # noqa: PLC0415  (seldom needed)

        click.echo(f"calcdoc: {our_fault(trouble)}", err=True)
        return WORLD_IS_WRONG
    return int(status or 0)
