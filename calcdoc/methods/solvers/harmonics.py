"""Harmonics of the line current from its segments, by closed Fourier integrals.

The line current of the second half period is the first one turned over, so only odd orders occur:

    c_n = (2/π)·∫ i(θ)·exp(−jnθ) dθ over the conduction,        I_n = |c_n|/√2.

The terms 1, sin θ, cos θ need E_m = ∫ exp(−jmθ) dθ for m = n − 1, n, n + 1, which is
exp(−jm·θ_mid)·2·sin(m·L/2)/m over a segment of length L; the decay needs

    ∫ exp(−x/T − jnθ) dθ = (exp(−jna) − exp(−q)·exp(−jnb))/(1/T + jn).

Powers of exp(−jθ) come from one another by multiplication, so that forty orders cost one sine.
"""

from typing import Final

import numpy as np
from numpy.typing import NDArray

from calcdoc.methods.solvers.circuit import FloatArray
from calcdoc.methods.solvers.curves import CONST, COS, DECAY, REACH, SIN, START

ORDERS: Final = np.arange(1, 40, 2)
"""The odd orders 1 to 39."""

ComplexArray = NDArray[np.complex128]


def amplitudes(line: FloatArray, end: FloatArray) -> ComplexArray:
    """The complex amplitudes c_n of the odd orders 1 to 39.

    Args:
        line: Curves of the rectified line current over the segments that conduct, shape (7, m, n).
        end: Ends of the segments, radians, shape (m, n).

    Returns:
        Peak values as phasors to exp(jnθ), shape (20, n), in amperes.
    """
    found: ComplexArray = np.zeros((len(ORDERS), line.shape[-1]), dtype=complex)
    for each in range(len(end)):
        columns = np.flatnonzero(end[each] > line[START, each])
        found[:, columns] += _segment(line[:, each, columns], end[each, columns])
    return found


def _segment(of: FloatArray, end: FloatArray) -> ComplexArray:
    """What one segment (7, n) adds to the amplitudes."""
    start, reach = of[START], of[REACH]
    length = end - start
    from_start: ComplexArray = np.exp(-1j * start)
    half: ComplexArray = np.exp(-0.5j * length)
    middle: ComplexArray = from_start * half
    turned: ComplexArray = half * half
    squares: list[ComplexArray] = [each * each for each in (from_start, middle, half, turned)]
    powers = [from_start, middle, half, turned]
    left = np.exp(-length / reach)
    even_before: ComplexArray = length.astype(complex)
    found: ComplexArray = np.empty((len(ORDERS), len(start)), dtype=np.complex128)
    for row, order in enumerate(ORDERS):
        at, at_middle, at_half, at_turn = powers
        odd = at_middle * (-2.0 * at_half.imag / order)
        even_after = (at_middle * middle) * (-2.0 * (at_half * half).imag / (order + 1))
        decay = at * (1.0 - left * at_turn) / (1.0 / reach + 1j * order)
        found[row] = of[CONST] * odd + of[DECAY] * decay
        found[row] += 0.5 * of[COS] * (even_before + even_after)
        found[row] += -0.5j * of[SIN] * (even_before - even_after)
        even_before = even_after
        powers = [each * square for each, square in zip(powers, squares, strict=True)]
    found *= 2.0 / np.pi
    return found
