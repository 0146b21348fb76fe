"""From unit words to units, with factors and dimensions from Pint and our own registry file."""

import re
from collections.abc import Iterable
from fractions import Fraction
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Final, cast

from calcdoc.units.dimension import BASE_NAMES, Dimension, whole
from calcdoc.units.unit import Unit
from calcdoc.units.words import ALONE, NICKNAMES, PREFIXED, PREFIXES, SPELLED

if TYPE_CHECKING:
    import pint

_NAME: Final = re.compile(r"[a-z]+")
_LOOK_ALIKES: Final = str.maketrans({"\u03bc": "µ", "\u2126": "Ω"})


@cache
def _registry() -> "pint.UnitRegistry[Fraction]":
    """Pint without its own units: exact fractions, and what our file defines once it is used."""
    import pint  # noqa: PLC0415  (slow, and needed only once a unit is read)

    return pint.UnitRegistry(
        None, non_int_type=Fraction, on_redefinition="raise", cache_folder=None
    )


@cache
def _definitions() -> dict[str, str]:
    """Lines of our registry file by the name they define; the name of a prefix ends in a dash."""
    text = Path(__file__).with_name("registry.txt").read_text(encoding="utf-8")
    return {line.partition(" = ")[0]: line for line in text.splitlines() if " = " in line}


@cache
def _define(name: str) -> None:
    """Give Pint one definition of our file, once, after those it is made of."""
    line = _definitions()[name]
    for part in _NAME.findall(line.partition(" = ")[2]):
        if part in _definitions():
            _define(part)
    _registry().define(line)


@cache
def _split(word: str) -> tuple[str, str] | None:
    """A unit word as prefix and base word as printed, or None when it is not on the list."""
    word = word.translate(_LOOK_ALIKES)
    word = SPELLED.get(word, word)
    if word in PREFIXED or word in ALONE:
        return "", word
    for written in (*PREFIXES, "u"):
        base = word.removeprefix(written)
        base = SPELLED.get(base, base)
        if word.startswith(written) and base in PREFIXED:
            return "µ" if written == "u" else written, base
    return None


def known_word(word: str) -> bool:
    """Whether a word is on the closed list of unit words, with or without prefix."""
    return _split(word) is not None


@cache
def _atom(word: str) -> tuple[str, Fraction, Dimension]:
    """Printed form, exact factor to the coherent SI unit, and dimension of one known word."""
    parts = _split(word)
    assert parts is not None, word
    prefix, base = parts
    name = PREFIXED.get(base) or ALONE[base]
    _define(name)
    if prefix:
        _define(PREFIXES[prefix] + "-")
        name = PREFIXES[prefix] + name
    factor, _ = _registry().get_base_units(name)
    found = _registry().get_dimensionality(name)
    exponents = tuple(whole(Fraction(str(found.get(each, 0)))) for each in BASE_NAMES)
    # Pint's root of mass is the gram; the coherent unit is the kilogram.
    in_kilograms = cast("Fraction", factor) / Fraction(1000) ** int(exponents[1])
    return prefix + base, in_kilograms, Dimension(exponents)


def unit_of(words: Iterable[tuple[str, int]]) -> Unit:
    """The unit of words with exponents, all of them known.

    >>> unit_of([("uF", 1)]).text
    'µF'
    >>> unit_of([("°C", 1), ("W", -1)]).text
    'K/W'
    """
    merged: dict[str, int] = {}
    factor, dimension = Fraction(1), Dimension()
    pairs = list(words)
    celsius = [each for each, _ in pairs] in (["°C"], ["degC"]) and pairs[0][1] == 1
    for word, power in pairs:
        printed, size, of_word = _atom(word)
        if printed == "°C" and not celsius:
            printed = "K"
        merged[printed] = merged.get(printed, 0) + power
        factor *= size**power
        dimension *= of_word**power
    kept = tuple((word, power) for word, power in merged.items() if power)
    return Unit(kept, factor, dimension, celsius)


@cache
def _all_words() -> tuple[str, ...]:
    common = [p + b for p in ("p", "n", "µ", "m", "k", "M", "G") for b in PREFIXED]
    return (*PREFIXED, *ALONE, *common)


@cache
def _written_out() -> dict[str, str]:
    """Unit words by what people write in their place, in small letters and without plural."""
    found = dict(NICKNAMES)
    for prefix, prefix_name in (("", ""), *PREFIXES.items()):
        for base, name in PREFIXED.items():
            found.setdefault(prefix_name + name, prefix + base)
        for spelled, base in SPELLED.items():
            if base in PREFIXED:
                found.setdefault(prefix.lower() + spelled, prefix + base)
    return found | {name: base for base, name in ALONE.items() if base not in ("°", "°C")}


def nearest_word(word: str) -> str | None:
    """The listed unit word most like an unknown one, or None when nothing is like it."""
    for candidate in _all_words():
        if candidate.lower() == word.lower():
            return candidate
    if written_out := _written_out().get(word.lower().removesuffix("s")):
        return written_out
    import difflib  # noqa: PLC0415  (needed only for a mistake)

    close = difflib.get_close_matches(word, _all_words(), n=1, cutoff=0.6)
    return close[0] if close else None
