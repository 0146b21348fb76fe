"""What a tolerance is made of: random part, biases, like parts."""

import re
from fractions import Fraction
from typing import Final, NoReturn

from calcdoc.frozen import replace
from calcdoc.problems import Mistake, error
from calcdoc.text import literal
from calcdoc.text.given import MAKEUP_WORD, Bias, Given, Like, MakeUp, Part, change_of, signed
from calcdoc.text.names import SYMBOL
from calcdoc.text.nodes import Name, Number, Quantity
from calcdoc.text.scan import Scanner

_SHAPE: Final = re.compile(r"normal\b|triangular\b|rectangular\b")
_K: Final = re.compile(r"k[ \n]*=")
_RANGE: Final = re.compile(r"\.\.")
_LABEL: Final = re.compile(r"\(([^()]*)\)")
_OF: Final = re.compile(r"of\b")
_SHARED: Final = re.compile(r"shared\b")
_DIGIT: Final = re.compile(r"[0-9]")


def with_makeup(scanner: Scanner, value: Given) -> Given:
    """``makeup = ["as" shape] bias* ["each of" count ["shared" share]]``, in any order."""
    base = Part(
        value.nominal, value.digits, value.units[0] if value.unit.words else None, value.span
    )
    made = MakeUp("rectangular", None, True, value.least, value.greatest)
    first = scanner.look(MAKEUP_WORD)
    if first is None:
        return value
    seen: set[str] = set()
    while found := scanner.take(MAKEUP_WORD):
        word = found[1]
        if word in seen and word != "bias":
            _refuse(scanner, found.start(), f"`{word}` stands here twice", "keep one of them")
        seen.add(word)
        if word == "as":
            made = _shape(scanner, made)
        elif word == "bias":
            made = replace(made, biases=(*made.biases, _bias(scanner, base)))
        else:
            made = replace(made, like=_like(scanner))
    _check(scanner, first.start(), made, value)
    low = made.low + sum(bias.low for bias in made.biases)
    high = made.high + sum(bias.high for bias in made.biases)
    return replace(value, least=low, greatest=high, makeup=made)


def _shape(scanner: Scanner, made: MakeUp) -> MakeUp:
    """``shape = "normal" "k" "=" number | "triangular" | "rectangular"``"""
    found = scanner.take(_SHAPE)
    if found is None:
        scanner.refuse("`normal k=3`, `triangular` or `rectangular`")
    k = None
    if found.group() == "normal":
        scanner.expect(_K, "`k=` and how many standard deviations the limits stand for")
        scanner.blanks()
        node = literal.quantity(scanner)
        k = Fraction(node.digits)
        if isinstance(node, Quantity) or k <= 0:
            _refuse(scanner, found.start(), "k is a plain number above zero", "write k=3")
    return replace(made, shape=found.group(), k=k, assumed=False)


def _bias(scanner: Scanner, base: Part) -> Bias:
    """``bias = "bias" part ".." part ["(" label ")"]``"""
    scanner.blanks()
    begin = scanner.at
    low = signed(scanner)
    scanner.expect(_RANGE, "`..` and the other end of the bias, as in bias -12 % .. 0 %")
    high = signed(scanner)
    if low.unit is None and high.unit is not None:
        low = replace(low, unit=high.unit)
    label = scanner.take(_LABEL)
    text = " ".join(scanner.passage.text[begin : scanner.at].split())
    ends = (change_of(base, low), change_of(base, high))
    if ends[0] > ends[1] or (label and not label[1].strip()):
        _refuse(
            scanner, begin, "a bias goes from its lower to its higher end", "write -12 % .. 0 %"
        )
    return Bias(ends[0], ends[1], text)


def _like(scanner: Scanner) -> Like:
    """``"each of" (SYMBOL | whole) ["shared" share]``"""
    scanner.expect(_OF, "`of` after `each`")
    scanner.blanks()
    begin = scanner.at
    if scanner.look(_DIGIT):
        node = literal.quantity(scanner)
        whole = isinstance(node, Number) and Fraction(node.digits).denominator == 1
        if not whole or Fraction(node.digits) < 1:
            _refuse(scanner, begin, "a number of parts is a whole number", "write each of 12")
        count: Name | Number = Number(node.digits, node.span)
    else:
        found = scanner.take(SYMBOL)
        if found is None:
            scanner.refuse("how many like parts there are, as in each of n_LED")
        count = Name(found.group(), scanner.span(*found.span()))
    shared = Fraction(0)
    if scanner.take(_SHARED):
        scanner.blanks()
        at = scanner.at
        part = signed(scanner)
        factor = literal.resolve(part.unit).factor if part.unit else Fraction(1)
        shared = part.value * factor
        if not 0 <= shared <= 1:
            _refuse(scanner, at, "a share lies between 0 % and 100 %", "write shared 60 %")
    return Like(count, shared)


def _check(scanner: Scanner, at: int, made: MakeUp, value: Given) -> None:
    below, above = value.nominal - made.low, made.high - value.nominal
    if made.shape == "normal" and below != above:
        _refuse(
            scanner, at, "a normal part has limits at equal distances from the value",
            "write ± and put the rest into a bias",
        )  # fmt: skip
    if below == above == 0 and (made.shape != "rectangular" or made.like or not made.assumed):
        _refuse(
            scanner, at, "a value without a tolerance has no distribution", "write its band first"
        )
    total = [sum(getattr(bias, end) for bias in made.biases) for end in ("low", "high")]
    if made.low + total[0] > value.nominal or made.high + total[1] < value.nominal:
        _refuse(
            scanner, at, "the biases leave out the value itself",
            "state the value as it is when new, and how it moves from there",
        )  # fmt: skip


def _refuse(scanner: Scanner, at: int, message: str, advice: str) -> NoReturn:
    raise Mistake(
        error("tolerance", message, scanner.span(at, max(scanner.at, at + 1)), help=advice)
    )
