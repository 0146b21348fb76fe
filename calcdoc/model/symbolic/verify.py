"""Proves that two formulas are equal, whatever their symbols stand for."""

from typing import Final

from calcdoc.model.symbolic.grouping import ZERO
from calcdoc.model.symbolic.residues import Point, Pole, Unusable
from calcdoc.text.nodes import Node

_N_PLAIN: Final = 3
"""Points enough for a formula of + − · / alone: a mistake takes a chance below 1e-40."""
_N_ROOTS: Final = 128
"""Points enough where each root has its sign by chance."""
_N_TRIES: Final = 1500
_N_QUICK: Final = 8


def is_identity(left: Node, right: Node) -> bool | None:
    """Whether ``left - right`` is zero wherever both have a value.

    Returns:
        True and False are certain, up to a chance that no text can bring about on purpose without
        trying 2^60 of them; None when this way of proving cannot say. The same question always
        gets the same answer.
    """
    wanted, n_equal = _N_PLAIN, 0
    for index in range(_N_TRIES):
        point = Point(index)
        try:
            equal = point.value(left) == point.value(right)
        except Unusable:
            if index >= _N_ROOTS and n_equal * _N_TRIES < wanted * index:
                return None  # too few points count: it would never come to enough of them
            continue
        if not equal:
            return None if point.drawn or point.rooted else False
        n_equal += 1
        wanted = _N_ROOTS if point.rooted else wanted
        if n_equal >= wanted:
            return True
    return None


def differs(left: Node, right: Node) -> bool:
    """Whether two formulas of + − · / are certainly not equal; quick, and no for all others."""
    for index in range(_N_QUICK):
        point = Point(index)
        try:
            equal = point.value(left) == point.value(right)
        except Unusable:
            continue
        return not (equal or point.drawn or point.rooted)
    return False


def is_zero(node: Node) -> bool:
    """Whether a formula is certainly zero, whatever its symbols stand for."""
    return is_identity(node, ZERO) is True


def is_pole(node: Node) -> bool:
    """Whether a formula divides by what is certainly zero."""
    n_poles = 0
    for index in range(_N_ROOTS):
        try:
            Point(index).value(node)
        except Pole:
            n_poles += 1
            if n_poles == _N_PLAIN:
                return True
        except Unusable:
            continue
        else:
            return False
    return False
