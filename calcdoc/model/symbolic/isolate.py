"""Isolates an unknown that stands once: what was done to it last is undone first.

Each step is named as a reviewer would say it. What has two inverses (an even power, ``abs``,
``sin``, ``cos``) gives two solutions.
"""

from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.model.symbolic.build import (
    add,
    divide,
    multiply,
    negate,
    product,
    subtract,
    terms,
    total,
)
from calcdoc.model.symbolic.grouping import ONE, bare, is_plain
from calcdoc.model.symbolic.inverse import Move, undo_call, undo_power
from calcdoc.model.symbolic.outcome import Solution, Step
from calcdoc.model.symbolic.trees import count, mentions, words
from calcdoc.model.symbolic.verify import is_zero
from calcdoc.text.nodes import Binary, Call, Group, Name, Negate, Node, Number, Quantity

_ROOTS_MOST: Final = 8


class _State(Frozen, frozen=True):
    """A relation with the unknown on the left, and the steps that led to it."""

    left: Node
    right: Node
    steps: tuple[Step, ...]


def isolate(left: Node, right: Node, key: str) -> tuple[Solution, ...] | None:
    """Solve ``left = right`` for an unknown that stands exactly once.

    Returns:
        One solution for each branch; roots that do not satisfy the relation for some values of
        its symbols (squaring adds such) are among them. None when the unknown stands not once,
        or inside something that has no inverse here (``min``, ``if``, ``floor``).
    """
    if count(left, key) + count(right, key) != 1:
        return None
    start = _State(left, right, ())
    if mentions(right, key):
        start = _State(right, left, (Step("swap the sides", bare(right), bare(left)),))
    waiting, found = [start], []
    while waiting:
        state = waiting.pop()
        inner = bare(state.left)
        if isinstance(inner, Name):
            found.append(Solution(key, bare(state.right), state.steps, "isolated"))
            continue
        moves = _undo(inner, state.right, key)
        if not moves or len(found) + len(waiting) + len(moves) > _ROOTS_MOST:
            return None
        waiting.extend(_after(state, move) for move in reversed(moves))
    return tuple(found)


def _after(state: _State, move: Move) -> _State:
    step = Step(move.words, bare(move.left), bare(move.right))
    return _State(move.left, move.right, (*state.steps, step))


def _undo(left: Node, right: Node, key: str) -> list[Move]:
    """What may be done next; more than one where there are two branches, none where it ends."""
    match left:
        case Negate(operand):
            return [Move("change the sign of both sides", operand, negate(right))]
        case Binary("+" | "-"):
            return [_undo_sum(left, right, key)]
        case Binary("*" | "/"):
            return _undo_product(left, right, key)
        case Binary("^"):
            return undo_power(left, right, key)
        case Call():
            return undo_call(left, right)
        case _:
            return []


def _undo_sum(left: Node, right: Node, key: str) -> Move:
    """Take away the known terms: first those with a minus sign, then the others."""
    plus: list[Node] = []
    minus: list[Node] = []
    unknown, negative = left, False
    for is_minus, term in terms(left):
        if mentions(term, key):
            unknown, negative = term, is_minus
        else:
            (minus if is_minus else plus).append(term)
    if minus:
        rest = negate(unknown) if negative else unknown
        kept = [rest if term is unknown else term for term in _kept(left, plus, unknown)]
        for each in minus:
            right = add(right, each)
        return Move(f"add {words(total(minus))} to both sides", total(kept), right)
    taken = words(total(plus))
    if negative:
        return Move(f"subtract both sides from {taken}", unknown, subtract(total(plus), right))
    for each in plus:
        right = subtract(right, each)
    return Move(f"subtract {taken} from both sides", unknown, right)


def _kept(left: Node, plus: list[Node], unknown: Node) -> list[Node]:
    """The terms that stay, in the order in which they stand."""
    return [term for _, term in terms(left) if term is unknown or any(term is p for p in plus)]


def _undo_product(left: Node, right: Node, key: str) -> list[Move]:
    """Multiply by what the unknown is divided by, then divide by its known factors."""
    above, below = fraction(left)
    over = [each for each in above if not mentions(each, key)]
    under = [each for each in below if not mentions(each, key)]
    unknown = next((each for each in above if mentions(each, key)), None)
    if unknown is None:
        return _undo_quotient(over, under, product(e for e in below if mentions(e, key)), right)
    if under:
        factor = product(under)
        moved = Move(
            f"multiply both sides by {words(factor)}", product(above), times(right, factor)
        )
        return [] if is_zero(factor) else [moved]
    factor = product(over)
    if is_zero(factor):
        return []
    return [Move(f"divide both sides by {words(factor)}", unknown, divide(right, factor))]


def _undo_quotient(over: list[Node], under: list[Node], unknown: Node, right: Node) -> list[Move]:
    """The unknown stands below the fraction bar: ``over/(under*unknown) = right``."""
    if is_zero(right):
        return []
    known = divide(product(over), product(under))
    if is_plain(known, 1):
        return [Move("take the reciprocal of both sides", unknown, divide(ONE, right))]
    if is_zero(known):
        return []
    return [Move(f"divide {words(known)} by both sides", unknown, divide(known, right))]


def times(node: Node, factor: Node) -> Node:
    """A product with numbers and symbols before functions and sums: ``2*R``, ``R*ln(x)``."""
    if isinstance(bare(factor), Number | Quantity):
        return multiply(factor, node)
    inner = bare(node)
    comes_last = isinstance(inner, Call) or (isinstance(inner, Binary) and inner.op in "+-")
    return multiply(factor, node) if comes_last else multiply(node, factor)


def fraction(node: Node) -> tuple[list[Node], list[Node]]:
    """The factors above and below the fraction bar in order, through parentheses and signs."""
    match node:
        case Group(inner) if isinstance(bare(inner), Binary) and _factored(bare(inner)):
            return fraction(bare(inner))
        case Binary("*" | "/" as op, left, right):
            above, below = fraction(left)
            more, less = fraction(right)
            if op == "/":
                more, less = less, more
            return above + more, below + less
        case _:
            return [node], []


def _factored(node: Node) -> bool:
    return isinstance(node, Binary) and node.op in "*/"
