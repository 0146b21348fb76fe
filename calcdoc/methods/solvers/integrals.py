"""Exact integrals over segments of curves and of products of two curves.

With x = θ − a over a segment from a to b, L = b − a and q = L/T, the products of the terms 1,
sin θ, cos θ and exp(−x/T) integrate in closed form; those with the decay are parts of

    ∫ exp(jθ − x/T) dθ = T·(exp(ja) − exp(jb − q))/(1 − j·T).

The ramp meets only the constant, in the blocking segments.
"""

from dataclasses import dataclass

import numpy as np

from calcdoc.methods.solvers.circuit import FloatArray
from calcdoc.methods.solvers.curves import CONST, COS, DECAY, RAMP, REACH, SIN, START


@dataclass(frozen=True, slots=True)
class Terms:
    """Integrals of the terms and of their products over segments, each of shape (..., n)."""

    one: FloatArray
    ramp: FloatArray
    sin: FloatArray
    cos: FloatArray
    decay: FloatArray
    sin_sin: FloatArray
    sin_cos: FloatArray
    cos_cos: FloatArray
    sin_decay: FloatArray
    cos_decay: FloatArray
    decay_decay: FloatArray


def terms(start: FloatArray, end: FloatArray, reach: FloatArray) -> Terms:
    """The integrals between two phases of terms whose decay begins at the first of them."""
    length, middle = end - start, 0.5 * (start + end)
    sin_a, cos_a, sin_b, cos_b = np.sin(start), np.cos(start), np.sin(end), np.cos(end)
    chord = 2.0 * np.sin(0.5 * length)
    sin_m, cos_m = np.sin(middle), np.cos(middle)
    double = 0.5 * np.sin(length) * (cos_m * cos_m - sin_m * sin_m)
    left = np.exp(-length / reach)
    scale = reach / (1.0 + reach * reach)
    real, imaginary = cos_a - left * cos_b, sin_a - left * sin_b
    return Terms(
        one=length,
        ramp=0.5 * length * length,
        sin=chord * sin_m,
        cos=chord * cos_m,
        decay=-reach * np.expm1(-length / reach),
        sin_sin=0.5 * length - double,
        cos_cos=0.5 * length + double,
        sin_cos=np.sin(length) * sin_m * cos_m,
        cos_decay=scale * (real - reach * imaginary),
        sin_decay=scale * (imaginary + reach * real),
        decay_decay=-0.5 * reach * np.expm1(-2.0 * length / reach),
    )


def over(of: FloatArray, end: FloatArray) -> Terms:
    """The integrals of the terms of curves (7, ...) from their start to an end (...)."""
    return terms(of[START], end, of[REACH])


def integral(of: FloatArray, by: Terms) -> FloatArray:
    """The integral of curves over their segments, shape (...)."""
    found: FloatArray = of[CONST] * by.one + of[RAMP] * by.ramp + of[DECAY] * by.decay
    found += of[SIN] * by.sin + of[COS] * by.cos
    return found


def product(first: FloatArray, second: FloatArray, by: Terms) -> FloatArray:
    """The integral of the product of two curves that share start and decay, shape (...).

    Of curves with a ramp only the products of the ramp with a constant are formed: that is all
    there is where the ramp occurs.
    """
    a, b = first, second
    found: FloatArray = a[CONST] * integral(b, by) + b[CONST] * (
        a[RAMP] * by.ramp + a[SIN] * by.sin + a[COS] * by.cos + a[DECAY] * by.decay
    )
    found += a[SIN] * b[SIN] * by.sin_sin + a[COS] * b[COS] * by.cos_cos
    found += a[DECAY] * b[DECAY] * by.decay_decay
    found += (a[SIN] * b[COS] + a[COS] * b[SIN]) * by.sin_cos
    found += (a[SIN] * b[DECAY] + a[DECAY] * b[SIN]) * by.sin_decay
    found += (a[COS] * b[DECAY] + a[DECAY] * b[COS]) * by.cos_decay
    return found
