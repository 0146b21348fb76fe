"""Several unknowns from as many relations."""

import pytest

from tests.unit.model.symbolic.shown import roots


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("x + y = a; x - y = b", ["x = a - (a - b)/2; y = (a - b)/2"]),
        ("x = a; y = b", ["x = a; y = b"]),
        ("x + y = a; a*x = b", ["x = b/a; y = a - b/a"]),
        ("x + y = 3; x - y = 1", ["x = 2; y = 1"]),
        (
            "x*y = a; x/y = b",
            ["x = a/sqrt(a/b); y = sqrt(a/b)", "x = -a/sqrt(a/b); y = -sqrt(a/b)"],
        ),
    ],
)
def test_two_relations_give_two_unknowns(text: str, expected: list[str]) -> None:
    """Each combination of roots gives both unknowns in known quantities alone."""
    assert roots(text, "x", "y") == expected


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("x + y = a; x + y = b", "contradiction: node contradicts loop unless b - a is zero"),
        ("x + y = a; 2*x + 2*y = 2*a", "dependent: node says nothing that loop does not say"),
        ("x + a = b; x + b = a", "unknown not in relation: y does not stand in loop, node"),
        (
            "x*y = a; 2*x*y = 2*a",
            "dependent: both sides are always equal, so that y can be anything",
        ),
        (
            "x*y = a; x*y = a + 1",
            "contradiction: y drops out, and the sides that are left are not equal",
        ),
        ("x + y = a", "not solvable: 2 unknowns from 1 relation"),
    ],
)
def test_relations_that_do_not_determine_both_are_refused(text: str, expected: str) -> None:
    """Contradiction and dependence are told apart and name the relation."""
    assert roots(text, "x", "y") == [expected]


def test_the_same_unknown_twice_is_refused() -> None:
    """Two unknowns of one name are one."""
    assert roots("x + y = a; x = b", "x", "x") == ["not solvable: 1 unknown from 2 relations"]


def test_three_unknowns_are_eliminated_one_after_the_other() -> None:
    """A ladder of three nodes gives three formulas without an unknown in them."""
    found = roots("x = y + a; y = z + b; x + y + z = c", "x", "y", "z")
    assert found == ["x = (c - a - 2*b)/3 + b + a; y = (c - a - 2*b)/3 + b; z = (c - a - 2*b)/3"]
