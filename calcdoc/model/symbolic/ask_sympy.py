"""Asks SymPy in a process of its own, which is ended when its time is over.

This process never imports SymPy. The child is started by the path of its file, so that it runs
from any folder and from an installed package; it sees nothing of the environment but what it
needs, and its hash seed is fixed so that the same question gets the same answer.
"""

import json
import os
import subprocess
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import Final

from calcdoc.model.symbolic.grouping import name
from calcdoc.model.symbolic.outcome import (
    LARGEST,
    Failure,
    Outcome,
    Refused,
    Roots,
    Solution,
    Step,
)
from calcdoc.model.symbolic.single import is_wrong
from calcdoc.model.symbolic.trees import Relation, readable, spellings
from calcdoc.model.symbolic.wire import Table

SECONDS: Final = 5.0
_CHILD: Final = Path(__file__).with_name("child.py")
_PASSED: Final = ("SYSTEMROOT", "HOME")
"""What Python needs to start and to find what is installed for the user."""
_WORDS: Final = "solve with the symbolic engine"


def ask_sympy(
    relations: Sequence[Relation], keys: Sequence[str], seconds: float = SECONDS
) -> Outcome:
    """Solve relations with SymPy.

    Args:
        relations: Name, left and right side of each.
        keys: The unknowns.
        seconds: Wall time for the whole process, its start included.

    Returns:
        The real roots that can be written as formulas; a failure of kind ``out of time``,
        ``too large`` or ``not solvable`` otherwise.
    """
    labels = tuple(label for label, _, _ in relations)
    table = Table(keys)
    try:
        sides = [[table.encode(left), table.encode(right)] for _, left, right in relations]
        reply = _run({"relations": sides, "unknowns": len(keys), "path": _path()}, seconds)
        found = [[table.decode(each) for each in combination] for combination in reply]
    except Refused as refused:
        return Failure(refused.failure.kind, refused.failure.message, labels)
    except subprocess.TimeoutExpired:
        message = f"the symbolic engine found no solution within {seconds:g} seconds"
        return Failure("out of time", message, labels)
    shown = spellings(relations, keys)
    combinations = []
    for trees in found:
        known = dict(zip(keys, trees, strict=True))
        if any(is_wrong(left, right, known) for _, left, right in relations):
            continue
        if not all(readable(tree, LARGEST) for tree in trees):
            return Failure("too large", "the solution is too long to read", labels)
        combinations.append(
            tuple(
                Solution(key, tree, (Step(_WORDS, name(shown[key]), tree),), "symbolic engine")
                for key, tree in known.items()
            )
        )
    if not combinations:
        return Failure("not solvable", "the symbolic engine found no solution", labels)
    return Roots(tuple(combinations))


def _path() -> list[str]:
    """Where this process finds its packages; never the current folder."""
    return [each for each in sys.path if each and Path(each).is_absolute()]


def _run(request: dict[str, object], seconds: float) -> list[list[object]]:
    """The child's solutions, one list of trees per combination.

    Raises:
        Refused: when it has none.
        subprocess.TimeoutExpired: when its time was over; it has been ended.
    """
    kept = {key: os.environ[key] for key in _PASSED if key in os.environ}
    done = subprocess.run(  # noqa: S603  (our own file, run by this very interpreter)
        [sys.executable, "-P", str(_CHILD)],
        input=json.dumps(request).encode(),
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
        env={"PYTHONHASHSEED": "0", **kept},
        timeout=seconds,
        check=False,
    )
    try:
        reply = json.loads(done.stdout)
    except ValueError:
        message = "the symbolic engine ended without an answer"
        raise Refused(Failure("not solvable", message)) from None
    if "failure" in reply:
        raise Refused(Failure("not solvable", str(reply["failure"])))
    solutions: list[list[object]] = reply["solutions"]
    return solutions
