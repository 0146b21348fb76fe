"""Which inputs an instruction really depends on: derivatives modulo a large prime.

``R/R`` and ``R_1/(R_1 + R_2) + R_2/(R_1 + R_2)`` depend on nothing, which interval arithmetic
cannot see. Each derivative is computed in exact arithmetic modulo a prime at a few random points;
where it is zero at all of them it vanishes identically (a mistake would take a chance below
1e-20). A function that is not rational is a value drawn by a keyed digest from its name and its
argument: equal for equal arguments, independent otherwise. So nothing is claimed that is not
true for *any* function in its place, which makes jumps and kinks safe.
"""

from collections.abc import Callable, Mapping
from fractions import Fraction
from functools import lru_cache
from hashlib import blake2b
from typing import Final

import numpy as np
from numpy.typing import NDArray

from calcdoc.analysis.points import BoolArray
from calcdoc.analysis.tape import Implicit, Instruction, Op, Tape

PRIME: Final = 2**31 - 1
N_POINTS: Final = 3

Residue = int | None  # None: not computable at this point
Residues = tuple[Residue, ...]
Rule = Callable[..., tuple[Residue, tuple[Residue, ...]]]


def dependence(tape: Tape) -> BoolArray:
    """Whether each instruction depends on each input.

    Returns:
        Shape (n_instructions, n_inputs). False is certain: the value is the same whatever the
        input is, wherever it can be computed.
    """
    depends = np.zeros((len(tape.instructions), tape.n_inputs), dtype=bool)
    values: list[Residues] = []
    moves: dict[int, NDArray[np.int64]] = {}
    for at, step in enumerate(tape.instructions):
        args = [values[arg] for arg in step.args]
        rows = [_rule(step, at_point, *p) for at_point, p in enumerate(_points(args))]
        values.append(tuple(value for value, _ in rows))
        if step.op is Op.INPUT:
            assert isinstance(step.value, int)
            moves[at] = np.zeros((N_POINTS, tape.n_inputs), dtype=np.int64)
            moves[at][:, step.value] = 1
            depends[at, step.value] = True
        elif any(arg in moves for arg in step.args):
            _follow(step, at, [slopes for _, slopes in rows], moves, depends)
    return depends


def _points(args: list[Residues]) -> list[tuple[Residue, ...]]:
    """Argument values point by point."""
    return [tuple(arg[k] for arg in args) for k in range(N_POINTS)]


def _follow(
    step: Instruction,
    at: int,
    slopes: list[tuple[Residue, ...]],
    moves: dict[int, NDArray[np.int64]],
    depends: BoolArray,
) -> None:
    """Chain rule at all points for one instruction, and what it tells about dependence."""
    valid = [k for k in range(N_POINTS) if None not in slopes[k]]
    total = None
    structure = np.zeros_like(depends[at])
    for which, arg in enumerate(step.args):
        if arg not in moves:
            continue
        structure |= depends[arg]
        factor = np.array([row[which] or 0 for row in slopes], dtype=np.int64)
        part = factor[:, None] * moves[arg] % PRIME
        total = part if total is None else (total + part) % PRIME
    assert total is not None
    depends[at] = structure & (total[valid].any(axis=0) if valid else True)
    if depends[at].any():
        moves[at] = total


def draw(*key: object) -> int:
    """A residue that looks random and is the same for the same key."""
    digest = blake2b(repr(key).encode(), digest_size=8).digest()
    return int.from_bytes(digest, "big") % PRIME


def _inverse(a: int) -> int:
    return pow(a, -1, PRIME)


def _rule(step: Instruction, point: int, *args: Residue) -> tuple[Residue, tuple[Residue, ...]]:
    """Value of an instruction at one point and its slopes to its arguments, modulo the prime."""
    known = tuple(arg for arg in args if arg is not None)
    if len(known) < len(args):
        return None, (None,) * len(args)
    try:
        if step.op is Op.INPUT:
            return draw("input", step.value, point), ()
        if step.op is Op.CONST:
            assert isinstance(step.value, Fraction | float | int)
            return _constant(step.value), ()
        if step.op is Op.POWER:
            assert isinstance(step.value, Fraction | int)
            return _power(Fraction(step.value), *known)
        if (rule := _RULES.get(step.op)) is not None:
            return rule(*known)
    except ValueError:  # no inverse of zero, here alone
        return None, (None,) * len(args)
    if isinstance(step.value, Implicit):
        return _root(step.value, known)
    slopes = tuple(draw(step.op.value, which, known) for which in range(len(args)))
    return draw(step.op.value, known), slopes


def _root(implicit: Implicit, known: tuple[int, ...]) -> tuple[Residue, tuple[Residue, ...]]:
    """A root as any function of the arguments that its residual depends on.

    Its slopes are drawn, not derived from the residual: with several roots in the bracket it may
    jump from one to another, so that x*y need not be constant where x*y = 1 is one of the roots.
    """
    matters = dependence_of_residual(implicit)
    key = "root", repr(implicit), tuple(a if m else 0 for a, m in zip(known, matters, strict=True))
    return draw(key), tuple(
        draw(key, which) if matter else 0 for which, matter in enumerate(matters)
    )


@lru_cache(maxsize=64)
def dependence_of_residual(implicit: Implicit) -> tuple[bool, ...]:
    """Whether the root may depend on each argument."""
    depends = dependence(implicit.tape)[implicit.residual]
    return tuple(bool(each) for each in depends[1:])


def _constant(value: Fraction | float) -> Residue:
    """Residue of a number; a float is the fraction that it is."""
    exact = Fraction(value)
    return exact.numerator * _inverse(exact.denominator) % PRIME


def _power(exponent: Fraction, a: int) -> tuple[Residue, tuple[Residue, ...]]:
    """a^(n/d) as the n-th power of a drawn d-th root.

    The slope of the root comes from root^d = a, never from root/a: the drawn root does not know
    its sign, so that ``sqrt(x^2)/x``, which jumps at zero, is not taken for a constant.
    """
    n, d = exponent.numerator, exponent.denominator
    root = a if d == 1 else draw("root", d, a)
    slope = n * _inverse(d) * pow(root, n - d, PRIME) % PRIME
    return pow(root, n, PRIME), (slope,)


def _quotient(a: int, b: int) -> tuple[Residue, tuple[Residue, ...]]:
    inverse = _inverse(b)
    value = a * inverse % PRIME
    return value, (inverse, -value * inverse % PRIME)


def _exponential(a: int) -> tuple[Residue, tuple[Residue, ...]]:
    value = draw("exp", a)
    return value, (value,)


def _logarithm10(a: int) -> tuple[Residue, tuple[Residue, ...]]:
    scale = _inverse(draw("ln", 10))
    return draw("ln", a) * scale % PRIME, (_inverse(a) * scale % PRIME,)


_RULES: Final[Mapping[Op, Rule]] = {
    Op.ADD: lambda a, b: ((a + b) % PRIME, (1, 1)),
    Op.SUB: lambda a, b: ((a - b) % PRIME, (1, PRIME - 1)),
    Op.MUL: lambda a, b: (a * b % PRIME, (b, a)),
    Op.NEG: lambda a: (-a % PRIME, (PRIME - 1,)),
    Op.DIV: _quotient,
    Op.SQRT: lambda a: _power(Fraction(1, 2), a),
    Op.EXP: _exponential,
    Op.LN: lambda a: (draw("ln", a), (_inverse(a),)),
    Op.LOG10: _logarithm10,
    Op.SIN: lambda a: (draw("sin", a), (draw("cos", a),)),
    Op.COS: lambda a: (draw("cos", a), (-draw("sin", a) % PRIME,)),
}
