"""Checks that go wrong on purpose; processes that start afresh can import them."""

import os
import time

from calcdoc.commands.checked import Checked, check_file


def dying(name: str) -> Checked:
    """Check a file, unless it is one the process dies of, as when memory is short."""
    if name.startswith("deadly"):
        os._exit(9)
    return check_file(name)


def endless(name: str) -> Checked:
    """Never come back, and leave a file that says who is at work."""
    with open(f"{name}.pid", "w", encoding="ascii") as file:  # noqa: PTH123  (as short as it gets)
        file.write(str(os.getpid()))
    time.sleep(20)
    return check_file(name)
