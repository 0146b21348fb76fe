"""One relation, one unknown, by own steps: isolation, then linear and quadratic relations."""

from calcdoc.model.symbolic.build import subtract
from calcdoc.model.symbolic.isolate import isolate
from calcdoc.model.symbolic.outcome import LARGEST, Failure, Solution
from calcdoc.model.symbolic.polynomial import dropped, polynomial
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.trees import mentions, readable, replaced, spelling
from calcdoc.model.symbolic.verify import differs, is_pole
from calcdoc.text.nodes import Node, names


def single(label: str, left: Node, right: Node, key: str) -> tuple[Solution, ...] | Failure | None:
    """Solve one relation for one unknown; None when own steps cannot."""
    shown = spelling((left, right), key)
    if not (mentions(left, key) or mentions(right, key)):
        message = f"{shown} does not stand in {label}"
        return Failure("unknown not in relation", message, (key, label))
    found = isolate(left, right, key)
    if found is None:
        one, other = simplified(left), simplified(right)
        if not (mentions(one, key) or mentions(other, key)):
            return dropped(left, right, subtract(one, other), key)
        answer = polynomial(left, right, key)
        if not isinstance(answer, tuple):
            return answer
        found = answer
    kept = tuple(each for each in found if not is_wrong(left, right, {key: each.tree}))
    if not kept:
        return Failure("not solvable", f"no value of {shown} satisfies {label}", (key, label))
    if not all(readable(each.tree, LARGEST) for each in kept):
        return Failure("too large", f"the formula of {shown} is too long to read", (key, label))
    return kept


def is_wrong(left: Node, right: Node, trees: dict[str, Node]) -> bool:
    """Whether putting in solutions divides by zero or leaves sides that certainly differ."""
    one, other = replaced(left, trees), replaced(right, trees)
    if is_pole(one) or is_pole(other):
        return True
    if not any(True for side in (one, other) for _ in names(side)):
        one, other = simplified(one), simplified(other)  # roots of numbers come out
    return differs(one, other)
