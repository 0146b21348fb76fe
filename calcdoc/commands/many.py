"""Many files at once: processes side by side, with a bar on a terminal.

What comes back is in the order of the arguments and the same as one file after the other would
give.
"""

import gc
import os
import signal
import sys
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Future, ProcessPoolExecutor, as_completed
from concurrent.futures.process import BrokenProcessPool
from contextlib import contextmanager
from multiprocessing import active_children, get_context
from threading import active_count
from typing import Final

from calcdoc.commands.bars import Tick, file_bar
from calcdoc.commands.checked import WORLD_IS_WRONG, Checked, check_file
from calcdoc.frozen import Frozen, replace

Check = Callable[[str], Checked]
_SELDOM: Final = 100_000
"""As on the command line: a search for garbage costs more than it finds."""


class _Work(Frozen, frozen=True):
    """What is done to each file, in how many processes, and how those start."""

    check: Check
    method: str
    workers: int


def check_many(names: Sequence[str], check: Check = check_file, method: str = "") -> list[Checked]:
    """Check files side by side; one whose process dies is said to, the others are reported.

    Args:
        names: Files as the user named them.
        check: Checks one of them; a function that a new process can import.
        method: How processes start, ``fork`` or ``spawn``; the quicker one that is safe when empty.
    """
    workers = min(len(names), os.cpu_count() or 1)
    work = _Work(check, method or _method(), workers)
    with file_bar(len(names)) as tick:
        if workers > 1:
            return _side_by_side(names, work, tick)
        return [_ticked(check(name), tick) for name in names]


def _ticked(checked: Checked, tick: Tick) -> Checked:
    tick()
    return checked


def _side_by_side(names: Sequence[str], work: _Work, tick: Tick) -> list[Checked]:
    """When a process dies, its pool goes with it: what is left is then done by one at a time.

    One process takes its files in order, so the first that has no answer is the one it died of.
    """
    done: dict[int, Checked] = {}
    while left := [index for index in range(len(names)) if index not in done]:
        done |= _in_a_pool({index: names[index] for index in left}, work, tick)
        lost = [index for index in left if index not in done]
        if lost and work.workers == 1:
            name = names[lost[0]]
            said = f"{name}: the process that checked it has died; is there too little memory?"
            done[lost[0]] = Checked(name, WORLD_IS_WRONG, said)
            tick()
        work = replace(work, workers=1)
    return [done[index] for index in range(len(names))]


def _in_a_pool(names: dict[int, str], work: _Work, tick: Tick) -> dict[int, Checked]:
    """Every file that was checked before a process died, by its index."""
    done: dict[int, Checked] = {}
    before = set(active_children())
    pool = ProcessPoolExecutor(work.workers, get_context(work.method), initializer=_begin)
    try:
        with _no_interrupt():  # the processes start here, and never see Ctrl-C
            waiting = _submit(pool, names, work.check)
        for future in as_completed(waiting):
            try:
                done[waiting[future]] = future.result()
            except BrokenProcessPool:
                continue
            tick()
    except BaseException:
        for child in set(active_children()) - before:
            child.terminate()
        raise
    finally:
        pool.shutdown(cancel_futures=True)
    return done


def _submit(
    pool: ProcessPoolExecutor, names: dict[int, str], check: Check
) -> dict[Future[Checked], int]:
    """A future for each file, as far as the pool lives."""
    waiting = {}
    for index, name in names.items():
        try:
            waiting[pool.submit(check, name)] = index
        except BrokenProcessPool:
            break
    return waiting


def _method() -> str:
    """How processes start: as copies of this one where that is safe.

    A copy starts at once, while a new process first loads the libraries, which takes as long as a
    quick file. A copy of a process with threads may hang in a lock one of them held; those of
    NumPy's OpenBLAS do not count, as they are idle before the first file and prepare for a copy.
    """
    return "fork" if sys.platform == "linux" and active_count() == 1 else "spawn"


def _begin() -> None:
    """Set up a process."""
    gc.set_threshold(_SELDOM)


@contextmanager
def _no_interrupt() -> Iterator[None]:
    """Hold Ctrl-C back; processes that start meanwhile never get it, and are ended by us."""
    if not hasattr(signal, "pthread_sigmask"):
        yield
        return
    before = signal.pthread_sigmask(signal.SIG_BLOCK, {signal.SIGINT})
    try:
        yield
    finally:
        signal.pthread_sigmask(signal.SIG_SETMASK, before)
