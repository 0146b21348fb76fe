"""Write roots in tests: an unknown in a bracket, with its residual as a formula of terms."""

from collections.abc import Callable
from fractions import Fraction

import numpy as np

from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.tape import Implicit, Op
from tests.helpers.tapes import Term, inputs


def root(
    residual: Callable[..., Term], low: Fraction | float, high: Fraction | float, *args: Term
) -> Term:
    """The unknown x in a bracket at which ``residual(x, *args)`` is zero."""
    inner = residual(*inputs(len(args) + 1))
    value = Implicit(inner.builder.tape(), inner.at, low, high)
    return _added(args, value)


def settled(
    loop: Callable[..., Term], low: Fraction | float, high: Fraction | float, *args: Term
) -> Term:
    """The quantity x in a bracket that is equal to ``loop(x, *args)``."""
    x, *columns = inputs(len(args) + 1)
    gain = loop(x, *columns)
    inner = gain - x
    value = Implicit(inner.builder.tape(), inner.at, low, high, gain.at)
    return _added(args, value)


def _added(args: tuple[Term, ...], value: Implicit) -> Term:
    builder = args[0].builder
    return Term(builder, builder.add(Op.ROOT, *(arg.at for arg in args), value=value))


def at(term: Term, *columns: list[float] | float) -> FloatArray:
    """Values of a term; one list of values for each input."""
    points = np.array([np.atleast_1d(column) for column in columns], dtype=float)
    values: FloatArray = evaluate_points(term.builder.tape(), points)[term.at]
    return values
