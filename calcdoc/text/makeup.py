"""What a tolerance is made of: random part, biases, like parts."""

import re
from fractions import Fraction
from typing import Final, NoReturn

from calcdoc.frozen import replace
from calcdoc.problems import Mistake, error
from calcdoc.source import Span
from calcdoc.text import literal
from calcdoc.text.given import (
    MAKEUP_WORD,
    Bias,
    Given,
    Like,
    MakeUp,
    Part,
    change_of,
    check_size,
    signed,
    unparsed,
)
from calcdoc.text.names import LETTER, SYMBOL
from calcdoc.text.nodes import Name, Number, Quantity, UnitText
from calcdoc.text.scan import Scanner
from calcdoc.units import ONE, PLAIN

_SHAPE: Final = re.compile(r"normal\b|triangular\b|rectangular\b")
_K: Final = re.compile(r"k[ \n]*=")
_RANGE: Final = re.compile(r"\.\.")
_LABEL: Final = re.compile(r"\(([^()]*)\)")
_BARE_LABEL: Final = re.compile(rf"[{LETTER}]")
_OF: Final = re.compile(r"of\b")
_SHARED: Final = re.compile(r"shared\b")
_PART: Final = re.compile(r"[+-]?[ \n]*[0-9]")
_INSTEAD: Final = (
    "write the value as a plain number, 0.9 in place of 90 %, and the bias as one",
    "write the bias as a plain number, as in bias -0.02 .. 0",
)
_BIASES_MOST: Final = 20
_K_MOST: Final = 20
_PARTS_MOST: Final = 1_000_000
_DIGIT: Final = re.compile(r"[0-9]")
_NUMBER: Final = re.compile(r"[0-9][0-9.]*")


def with_makeup(scanner: Scanner, value: Given) -> Given:
    """``makeup = ["as" shape] bias* ["each of" count ["shared" share]]``, in any order."""
    base = Part(value.nominal, value.digits, _unit_of(value), value.span)
    units = list(value.units)
    made = MakeUp("rectangular", None, True, value.least, value.greatest)
    first = scanner.look(MAKEUP_WORD)
    if first is None:
        return value
    seen: set[str] = set()
    while found := scanner.take(MAKEUP_WORD):
        word = found[1]
        if word in seen and word != "bias":
            at = scanner.span(*found.span())
            _refuse(at, f"`{word}` stands here twice", "keep one of them")
        seen.add(word)
        if word == "as":
            made = _shape(scanner, made)
        elif word == "bias":
            if len(made.biases) == _BIASES_MOST:
                at = scanner.span(*found.span())
                _refuse(at, f"a value has at most {_BIASES_MOST} biases", "add some of them up")
            made = replace(made, biases=(*made.biases, _bias(scanner, base, units)))
        else:
            made = replace(made, like=_like(scanner))
    _check(scanner.span(first.start(), scanner.at), made, value)
    low = made.low + sum(bias.low for bias in made.biases)
    high = made.high + sum(bias.high for bias in made.biases)
    check_size(value, (low, high, *(end for bias in made.biases for end in (bias.low, bias.high))))
    return replace(value, least=low, greatest=high, makeup=made, units=tuple(units))


def _unit_of(value: Given) -> UnitText | None:
    """The unit of the value itself as written; None for a plain number."""
    words = [unit for unit in value.units if literal.resolve(unit) == value.unit]
    return words[0] if words else None


def _shape(scanner: Scanner, made: MakeUp) -> MakeUp:
    """``shape = "normal" "k" "=" number | "triangular" | "rectangular"``"""
    found = scanner.take(_SHAPE)
    if found is None:
        scanner.refuse(
            "`normal k=3`, `triangular` or `rectangular`",
            advice="normal k=3 puts the limits at three standard deviations",
        )
    k = None
    if found.group() == "normal":
        scanner.expect(_K, "`k=` and how many standard deviations the limits stand for")
        scanner.blanks()
        node = literal.quantity(scanner)
        k = Fraction(node.digits)
        if isinstance(node, Quantity) or not 0 < k <= _K_MOST:
            _refuse(node.span, f"k is a plain number above 0 and up to {_K_MOST}", "write k=3")
    return replace(made, shape=found.group(), k=k, assumed=False)


def _bias(scanner: Scanner, base: Part, units: list[UnitText]) -> Bias:
    """``bias = "bias" part ".." part ["(" label ")"]``; adds its units to ``units``."""
    if not scanner.look(_PART):
        scanner.refuse("where the bias begins and where it ends, as in bias -12 % .. 0 %")
    begin = scanner.at
    low = signed(scanner)
    scanner.expect(_RANGE, "`..` and the other end of the bias, as in bias -12 % .. 0 %")
    high = signed(scanner)
    units += [part.unit for part in (low, high) if part.unit]
    low = replace(low, unit=high.unit) if low.unit is None else low
    span = low.span.to(high.span)
    if scanner.look(_BARE_LABEL) and not scanner.look(MAKEUP_WORD):
        scanner.refuse(
            "the end of the bias, or its cause in parentheses",
            advice="write the cause as in bias -12 % .. 0 % (temperature)",
        )
    label = scanner.take(_LABEL)
    text = " ".join(scanner.passage.text[begin : scanner.at].split())
    ends = (change_of(base, low, _INSTEAD), change_of(base, high, _INSTEAD))
    if ends[0] > ends[1]:
        _refuse(
            span,
            "a bias goes from its lower to its higher end",
            f"write {unparsed(high)} .. {unparsed(low)}",
        )
    if label and not label[1].strip():
        _refuse(
            scanner.span(*label.span()),
            "these parentheses say nothing",
            "name the cause, as in (temperature), or leave them out",
        )
    return Bias(ends[0], ends[1], text)


def _like(scanner: Scanner) -> Like:
    """``"each of" (SYMBOL | whole) ["shared" share]``"""
    scanner.expect(_OF, "`of` after `each`")
    if scanner.look(_DIGIT):
        found = scanner.take(_NUMBER)
        assert found is not None
        at, digits = scanner.span(*found.span()), found.group()
        few = digits.isdigit() and len(digits) <= len(str(_PARTS_MOST))
        if not few or not 1 <= int(digits) <= _PARTS_MOST:
            _refuse(
                at,
                f"a number of parts is a whole number from 1 to {_PARTS_MOST}",
                "write each of 12",
            )
        count: Name | Number = Number(digits, at)
    else:
        found = scanner.take(SYMBOL)
        if found is None:
            scanner.refuse("how many like parts there are, as in each of n_LED")
        count = Name(found.group(), scanner.span(*found.span()))
    shared = Fraction(0)
    if scanner.take(_SHARED):
        part = signed(scanner)
        unit = literal.resolve(part.unit) if part.unit else PLAIN
        shared = part.value * unit.factor
        if unit.dimension != ONE or not 0 <= shared <= 1:
            _refuse(part.span, "a share lies between 0 % and 100 %", "write shared 60 %")
    return Like(count, shared)


def _check(at: Span, made: MakeUp, value: Given) -> None:
    below, above = value.nominal - made.low, made.high - value.nominal
    if made.shape == "normal" and below != above:
        _refuse(
            at,
            "a normal part has limits at equal distances from the value",
            "write ± and put the rest into a bias",
        )
    if below == above == 0 and (made.shape != "rectangular" or made.like or not made.assumed):
        _refuse(at, "a value without a tolerance has no distribution", "write its band first")
    total = [sum(getattr(bias, end) for bias in made.biases) for end in ("low", "high")]
    if made.low + total[0] > value.nominal or made.high + total[1] < value.nominal:
        _refuse(
            at,
            "the biases leave out the value itself",
            "state the value as it is when new, and how it moves from there",
        )


def _refuse(span: Span, message: str, advice: str) -> NoReturn:
    raise Mistake(error("tolerance", message, span, help=advice))
