"""Relations that are linear or quadratic in one unknown once denominators are cleared."""

from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.model.symbolic.build import (
    add,
    divide,
    multiply,
    negate,
    number,
    power,
    root,
    subtract,
    terms,
)
from calcdoc.model.symbolic.grouping import ZERO, is_plain, name, plain, split_sign
from calcdoc.model.symbolic.outcome import Failure, Solution, Step
from calcdoc.model.symbolic.ratio import Poly, common, denominator, over, ratio, shown
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.trees import spelling, words
from calcdoc.model.symbolic.verify import is_identity, is_zero
from calcdoc.text.nodes import Node

_QUADRATIC: Final = 2


class _Sides(Frozen, frozen=True):
    """A relation between two polynomials in the unknown, denominators cleared."""

    unknown: Node
    key: str
    left: Poly
    right: Poly
    steps: tuple[Step, ...]


def polynomial(left: Node, right: Node, key: str) -> tuple[Solution, ...] | Failure | None:
    """Solve a relation of degree 1 or 2 in the unknown.

    A leading coefficient that is identically zero does not count.

    Returns:
        The solutions, among them those that only clearing the denominators brought in; a failure
        when the unknown drops out of the relation or no real number solves it; None when this is
        no polynomial of degree 1 or 2.
    """
    sides = _cleared(left, right, key)
    if sides is None:
        return None
    length = max(len(sides.left), len(sides.right))
    differences = [subtract(_at(sides.left, n), _at(sides.right, n)) for n in range(length)]
    degree = max((n for n, each in enumerate(differences) if not is_zero(each)), default=0)
    if degree == 0:
        return dropped(left, right, differences[0], key)
    if degree > _QUADRATIC:
        return None
    return _linear(sides) if degree == 1 else _quadratic(sides)


def dropped(left: Node, right: Node, difference: Node, key: str) -> Failure:
    """What to say when an unknown drops out of its relation."""
    shown = spelling((left, right), key)
    if is_zero(difference):
        message = f"both sides are always equal, so that {shown} can be anything"
        return Failure("dependent", message, (key,))
    if is_identity(difference, ZERO) is False:
        message = f"{shown} drops out, and the sides that are left are not equal"
        return Failure("contradiction", message, (key,))
    return Failure("unknown not in relation", f"{shown} drops out of the relation", (key,))


def _cleared(left: Node, right: Node, key: str) -> _Sides | None:
    one, other = ratio(left, key), ratio(right, key)
    if one is None or other is None:
        return None
    under = common(one.under, other.under)
    tops = over(one, under, key), over(other, under, key)
    unknown = name(spelling((left, right), key))
    steps: tuple[Step, ...] = ()
    if under:
        said = f"multiply both sides by {words(denominator(under))}"
        steps = (Step(said, shown(tops[0], unknown), shown(tops[1], unknown)),)
    return _Sides(unknown, key, *tops, steps)


def _at(poly: Poly, degree: int) -> Node:
    return poly[degree] if degree < len(poly) else ZERO


def _minuses(*nodes: Node) -> int:
    return sum(terms(each)[0][0] for each in nodes)


def _linear(sides: _Sides) -> tuple[Solution, ...]:
    """``factor*x = rest``, on the side where fewer minus signs stand."""
    l_0, l_1 = _at(sides.left, 0), _at(sides.left, 1)
    r_0, r_1 = _at(sides.right, 0), _at(sides.right, 1)
    forward = simplified(subtract(l_1, r_1)), simplified(subtract(r_0, l_0))
    backward = simplified(subtract(r_1, l_1)), simplified(subtract(l_0, r_0))
    factor, rest = min(forward, backward, key=lambda pair: _minuses(*pair))
    x, steps = sides.unknown, list(sides.steps)
    _note(steps, Step(f"collect the terms with {words(x)}", multiply(factor, x), rest))
    tree = rest
    if not is_plain(factor, 1):
        tree = simplified(divide(rest, factor))
        steps.append(Step(f"divide both sides by {words(factor)}", x, tree))
    return (Solution(sides.key, tree, tuple(steps), "linear"),)


def _quadratic(sides: _Sides) -> tuple[Solution, ...] | Failure:
    """``a*x^2 + b*x + c = 0`` with a positive sign in front."""
    c, b, a = (simplified(subtract(_at(sides.left, n), _at(sides.right, n))) for n in range(3))
    if split_sign(terms(a)[0][1])[0] or terms(a)[0][0]:
        a, b, c = negate(a), negate(b), negate(c)
    b, c = (ZERO if is_zero(each) else each for each in (b, c))
    x = sides.unknown
    said = f"collect the terms with {words(x)}"
    if b == ZERO:
        square = multiply(a, power(x, 2))
        before = list(sides.steps)
        _note(before, Step(said, square, negate(c)))
        return _pure(sides, a, c, tuple(before))
    steps = (*sides.steps, Step(said, shown((c, b, a), x), ZERO))
    if c == ZERO:
        trees: tuple[Node, ...] = (ZERO, simplified(negate(divide(b, a))))
        word = f"one factor is zero: {words(x)} or {words(add(multiply(a, x), b))}"
        return tuple(_root(sides, steps, word, tree) for tree in trees)
    discriminant = simplified(
        subtract(power(b, 2), multiply(multiply(number(4), a), c)),
    )
    value = plain(discriminant)
    if value is not None and value < 0:
        return _no_real_root(x, sides.key)
    spread = ZERO if is_zero(discriminant) else root(discriminant)
    twice = simplified(multiply(number(2), a))
    trees = tuple(
        simplified(divide(simplified(make(negate(b), spread)), twice)) for make in (add, subtract)
    )
    word = "solve the quadratic equation"
    first = _root(sides, steps, f"{word}, root with the plus sign", trees[0])
    second = _root(sides, steps, f"{word}, root with the minus sign", trees[1])
    return (first,) if first.tree == second.tree else (first, second)


def _note(steps: list[Step], step: Step) -> None:
    """Add a step that changes something."""
    if not steps or (steps[-1].left, steps[-1].right) != (step.left, step.right):
        steps.append(step)


def _root(sides: _Sides, steps: tuple[Step, ...], word: str, tree: Node) -> Solution:
    return Solution(sides.key, tree, (*steps, Step(word, sides.unknown, tree)), "quadratic")


def _pure(
    sides: _Sides, a: Node, c: Node, steps: tuple[Step, ...]
) -> tuple[Solution, ...] | Failure:
    """``a*x^2 = -c``."""
    x, square = sides.unknown, simplified(divide(negate(c), a))
    if not is_plain(a, 1):
        said = f"divide both sides by {words(a)}"
        steps = (*steps, Step(said, power(x, 2), square))
    value = plain(square)
    if value is not None and value < 0:
        return _no_real_root(x, sides.key)
    word, tree = "take the square root of both sides", root(square)
    first = _root(sides, steps, word, tree)
    if is_plain(tree, 0):
        return (first,)
    return first, _root(sides, steps, f"{word}, with the minus sign", negate(tree))


def _no_real_root(x: Node, key: str) -> Failure:
    return Failure("not solvable", f"no real number {words(x)} solves it", (key,))
