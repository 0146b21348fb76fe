"""Which of several roots is meant: the one for which ``where`` holds over the whole band."""

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.hazards import hazards
from calcdoc.analysis.points import evaluate_points
from calcdoc.analysis.tape import Op
from calcdoc.model.model import Root, Solved
from calcdoc.problems import Finding, Mistake, error
from calcdoc.text.scan import shown
from calcdoc.text.unparse import unparse

if TYPE_CHECKING:
    from calcdoc.analysis.working import Working


def choose(compiler: "Working", solved: Solved) -> int:
    """The number of the one combination that is left.

    Raises:
        Mistake: when none is left, or more than one; the roots are listed.
    """
    combinations = solved.combinations
    if len(combinations) == 1 and solved.where is None:
        return 0
    left = [
        at
        for at, roots in enumerate(combinations)
        if solved.where is None or _holds(compiler, solved, roots)
    ]
    if len(left) == 1:
        return left[0]
    raise Mistake(_refusal(solved, left))


def _holds(compiler: "Working", solved: Solved, roots: Sequence[Root]) -> bool:
    """Whether a combination can be computed and meets its condition over the whole band."""
    assert solved.where is not None
    for key, root in zip(solved.unknowns, roots, strict=True):
        compiler.variables[key] = compiler.node(root.tree)
    one, none = compiler.constant(1.0), compiler.constant(0.0)
    met = compiler.builder.add(Op.IF, compiler.node(solved.where), one, none)
    targets = [met, *(compiler.variables.pop(key) for key in solved.unknowns)]
    tape, box = compiler.builder.tape(), compiler.box
    if hazards(tape, targets, box.low, box.nominal, box.high):
        return False
    at_nominal = evaluate_points(tape, box.nominal[:, None])[met, 0]
    worst = extremes(tape, [Question(met, False, box.low, box.nominal, box.high)])[0]
    return bool(at_nominal == 1.0 and np.isclose(worst.value, 1.0))


def _refusal(solved: Solved, left: Sequence[int]) -> Finding:
    names = ", ".join(solved.unknowns)
    roots = "; ".join(
        ", ".join(unparse(root.tree) for root in combination) for combination in solved.combinations
    )
    span = solved.span_of.span
    if not left:
        return error(
            "several-roots",
            f"no root of {shown(names)} meets the condition over the whole band",
            span,
            help=f"the roots are: {roots}",
        )
    return error(
        "several-roots",
        f"{len(left)} roots are left for {shown(names)}",
        span,
        help=f"leave one with `where` and a condition on {names}; the roots are: {roots}",
    )
