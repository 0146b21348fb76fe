"""Bars on standard error that are gone when all is done; nothing where it is no terminal.

They are drawn at each step and have no thread of their own, which would slow the start of
processes.
"""

import os
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from time import monotonic
from typing import Final

Tick = Callable[[], object]
Told = Callable[[int, int], object]
_NO_BAR: Final = ("dumb", "unknown")
"""Terminals that cannot draw over a line."""
PATIENCE: Final = 2.0
"""Seconds without a bar: what is done by then needs none."""
_OFTEN: Final = 0.1
"""Seconds between two drawings of it."""


def _terminal() -> bool:
    return sys.stderr.isatty() and os.environ.get("TERM") not in _NO_BAR


@contextmanager
def file_bar(total: int) -> Iterator[Tick]:
    """A bar over files, from the start; the function moves it on by one."""
    if not _terminal():
        yield lambda: None
        return
    from rich.console import Console  # noqa: PLC0415  (only for a terminal)
    from rich.progress import BarColumn, MofNCompleteColumn, Progress  # noqa: PLC0415

    columns = ("checking", BarColumn(), MofNCompleteColumn())
    console = Console(stderr=True)
    with Progress(*columns, console=console, transient=True, auto_refresh=False) as progress:
        task = progress.add_task("", total=total)
        progress.refresh()
        yield lambda: progress.update(task, advance=1, refresh=True)


@contextmanager
def draw_bar(clock: Callable[[], float] = monotonic) -> Iterator[Told | None]:
    """A bar over draws, once they have taken two seconds; told how many of how many are done."""
    if not _terminal():
        yield None
        return
    bar = _DrawBar(clock)
    try:
        yield bar
    finally:
        bar.end()


class _DrawBar:
    """Draws nothing at first, and no more often than one can see."""

    def __init__(self, clock: Callable[[], float]) -> None:
        self.clock, self.last = clock, clock() + PATIENCE
        self.end: Callable[[], object] = lambda: None
        self.show: Callable[[int, int], object] = self._open

    def __call__(self, done: int, total: int) -> None:
        if (now := self.clock()) >= self.last:
            self.last = now + _OFTEN
            self.show(done, total)

    def _open(self, done: int, total: int) -> None:
        from rich.console import Console  # noqa: PLC0415  (only when it takes long)
        from rich.progress import BarColumn, Progress, TaskProgressColumn  # noqa: PLC0415

        console = Console(stderr=True)
        columns = ("drawing parts", BarColumn(), TaskProgressColumn())
        progress = Progress(*columns, console=console, transient=True, auto_refresh=False)
        progress.start()
        task = progress.add_task("", total=total)
        self.end = progress.stop
        self.show = lambda done, total: progress.update(
            task, completed=done, total=total, refresh=True
        )
        self.show(done, total)
