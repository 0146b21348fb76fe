"""What cannot be computed is said at the smallest wrong place, in the author's words."""

import pytest

from tests.helpers.checking import TITLE, rendered

GIVEN = "```inputs\nk = 1 ± 0.5\nm = 0 ± 1\nn = 5 ± 1\n```\n"


def said(**blocks: str) -> list[str]:
    """The lines of all findings of a design whose first block begins on line 12."""
    text = TITLE + GIVEN
    text += "".join(f"```{word}\n{lines}\n```\n" for word, lines in blocks.items())
    return rendered(text).splitlines()


@pytest.mark.parametrize(
    ("check", "piece", "where", "label", "difference"),
    [
        ("k against m within 50 %", "m", "at the nominal values", "", "k - m"),
        ("m against k - 1 within 50 %", "k - 1", "at the nominal values", "", "m - (k - 1)"),
        ("k against 0 within 1 %", "0", "at the nominal values", "", "k - 0"),
        ("k against k - k within 1 %", "k - k", "at the nominal values", "", "k - (k - k)"),
        ("k against n - 4 within 1 %", "n - 4", "within the band", " at n = 4", "k - (n - 4)"),
    ],
)
def test_share_of_zero(check: str, piece: str, where: str, label: str, difference: str) -> None:
    """A cross-check against a side that is or can be zero is refused at that side."""
    column = check.index(piece, check.index("against")) + 5
    headline, *lines, advice = said(crosschecks=f"K4: {check}")
    assert headline == (
        f"lamp.md:12:{column}: error[division-by-zero]: `{piece}` becomes zero {where}, and nothing"
        " has a share of zero"
    )
    assert lines == [
        "   |",
        f"12 | K4: {check}",
        f"   | {' ' * (column - 1)}{'^' * len(piece)}{label}",
    ]
    assert advice == (
        f"help: limit abs({difference}) in a criterion, as a value with its unit instead of a share"
    )


def test_cross_check_without_a_share() -> None:
    """A cross-check that only sets an order may meet zero."""
    assert said(crosschecks="K4: k not below m - 2\nK5: m - 2 not above 0") == []


@pytest.mark.parametrize(
    ("word", "line", "piece", "shown"),
    [
        ("derive", "x = sum(exp(118.2*n), exp(118.2*n))", "sum(", ""),
        ("criteria", "R1: -exp(118.2*n) <= exp(118.2*n)", "-exp(118.2*n)", ""),
        ("crosschecks", "K1: exp(118.2*n) not above -exp(118.2*n)", "exp(118.2*n)", ""),
        (
            "crosschecks",
            "K1: 2*k against exp(-118.2*n) within 1 %",
            "2*k against exp(-118.2*n)",
            "2*k/exp(-118.2*n)",
        ),
    ],
)
def test_too_large_between(word: str, line: str, piece: str, shown: str) -> None:
    """What is too large only between the pieces that are written is said at what they make."""
    piece = line[4:] if piece == "sum(" else piece
    found = said(**{word: line})
    column = line.index(piece) + 1
    assert found[0] == (
        f"lamp.md:12:{column}: error[too-large]: the value of `{shown or piece}` is too large to"
        " compute within the band"
    )
    assert found[3].split("at")[0].strip(" |") == "^" * len(piece)
    assert found[-1] == "help: check the exponent and the units"


DIVISOR = "error[division-by-zero]: the divisor `{}` becomes zero"
NEGATIVE = "error[out-of-domain]: the square root is taken of a negative value of `{}`"


@pytest.mark.parametrize(
    ("formula", "piece", "what", "point", "at"),
    [
        ("1/p", "p", DIVISOR, "p = 0", "p = 0"),
        ("sqrt(p)", "p", NEGATIVE, "k = 1, p = -1", "p = -1"),
        ("1/(p - k)", "p - k", f"{DIVISOR} within the band", "p = 1.2", "k = 1.2, p = 1.2"),
    ],
)
def test_at_an_operating_point(formula: str, piece: str, what: str, point: str, at: str) -> None:
    """What fails at the values that a criterion sets names the criterion and shows the values."""
    criterion = f"R4: z <= 3 at {point}"
    found = said(inputs="p = 4 ± 1", derive=f"z = {formula}", criteria=criterion)
    column = formula.index(piece) + 5
    assert found == [
        f"lamp.md:15:{column}: {what.format(piece)} at the values that criterion `R4` sets",
        "   |",
        f"15 | z = {formula}",
        f"   | {' ' * (column - 1)}{'^' * len(piece)} at {at}",
        "   --> lamp.md:18:15",
        f"18 | {criterion}",
        f"   | {' ' * 14}{'-' * len(point)} set here",
        "help: set other values in `R4`, or leave the case out with if(condition, a, b)",
    ]
