"""Numbers and units: after a number a word is a unit, never a symbol.

A unit is the longest run of known unit words joined by ``·`` or ``/`` without blanks, so in
``1 s/tau`` and ``60 s/(R*C)`` the unit is ``s``.
"""

import re
from fractions import Fraction
from typing import Final

from calcdoc.frozen import replace
from calcdoc.problems import Mistake, error
from calcdoc.text.names import CLAUSE_WORDS, FUNCTIONS, LETTER, MARK
from calcdoc.text.nodes import Number, Quantity, UnitText, UnitWord
from calcdoc.text.scan import Scanner, shown
from calcdoc.text.unparse import unit_text
from calcdoc.units import Unit, known_word, nearest_word, unit_of

NUMBER: Final = re.compile(r"[0-9]+(?:\.[0-9]+)?(?:[eE]([+-]?[0-9]+))?")
_GLUED: Final = re.compile(rf"[{LETTER}0-9_.%°]+")
_DECIMAL_COMMA: Final = re.compile(r",[0-9]")
_RANGE: Final = re.compile(r"\.\.")
_NUMBER_AGAIN: Final = re.compile(r" [0-9](?!/)|  +1/|  +[0-9]")
_PER: Final = re.compile(r" 1/")
_IDENTIFIER: Final = re.compile(rf"%|°[A-Za-z]*|[{LETTER}][{LETTER}{MARK}0-9_]*")
_SPACED: Final = re.compile(r"[ \n]+")
_EXPONENT: Final = re.compile(r"\^(-?[0-9]{1,2})(?![0-9])|([⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]{1,2})")
_POWER: Final = re.compile(rf"\^-?[{LETTER}{MARK}0-9_.]*|[⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+")
_ODD_POWER: Final = re.compile(r"\.[0-9]+|\^|[⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+")
_LOWERED: Final = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
_DIGITS_MOST: Final = 60
_EXPONENT_MOST: Final = 99
_POWER_MOST: Final = 9
_WORDS_MOST: Final = 12
_FACTOR_MOST: Final = 10**120


def quantity(scanner: Scanner, *, comma_separates: bool = False) -> Number | Quantity:
    """``quantity = number [" " unit]``"""
    digits, start = _number(scanner, comma_separates=comma_separates)
    unit = unit_after_number(scanner)
    span = scanner.span(start, scanner.at)
    return Quantity(digits, unit, span) if unit else Number(digits, span)


def _number(scanner: Scanner, *, comma_separates: bool) -> tuple[str, int]:
    """``number = digits ["." digits] ["e" ["+" | "-"] digits]``"""
    found = scanner.take(NUMBER)
    if found is None:
        scanner.refuse("a number")
    start, text = found.start(), scanner.passage.text
    glued = _GLUED.match(text, scanner.at)
    if glued and not _RANGE.match(text, scanner.at):
        _refuse_glued(scanner, start, glued.end())
    if not comma_separates and _DECIMAL_COMMA.match(text, scanner.at):
        end = _GLUED.match(text, scanner.at + 1)
        _number_mistake(
            scanner,
            start,
            end.end() if end else scanner.at + 2,
            "the decimal marker is a point, not a comma",
            f"write {found.group()}.{text[scanner.at + 1 : (end or found).end()]}",
        )
    if _NUMBER_AGAIN.match(text, scanner.at):
        again = NUMBER.search(text, scanner.at)
        assert again is not None
        _number_mistake(
            scanner,
            start,
            again.end(),
            "a number is written without blanks",
            f"write {found.group()}{again.group()} if it is one number",
        )
    if len(found.group()) > _DIGITS_MOST or abs(int(found[1] or 0)) > _EXPONENT_MOST:
        _number_mistake(
            scanner,
            start,
            found.end(),
            "this number is too long or too large",
            f"write at most {_DIGITS_MOST} characters and powers of ten up to {_EXPONENT_MOST}",
        )
    return found.group(), start


def _refuse_glued(scanner: Scanner, start: int, end: int) -> None:
    """Say what is wrong with what follows a number without a blank."""
    text = scanner.passage.text
    digits, rest = text[start : scanner.at], text[scanner.at : end]
    if rest.startswith("."):
        _number_mistake(
            scanner,
            start,
            end,
            f"{shown(digits + rest)} is not a number",
            "a decimal point has digits on both sides, as in 0.5",
        )
    if known_word(rest):
        _number_mistake(
            scanner,
            start,
            end,
            "a blank is missing between number and unit",
            f"write {digits} {rest}",
        )
    _number_mistake(
        scanner,
        start,
        end,
        f"{shown(digits + rest)} is neither a number nor a symbol",
        "write a number, one blank, and its unit, as in 4.7 kΩ; a symbol begins with a letter",
    )


def _number_mistake(scanner: Scanner, start: int, end: int, message: str, advice: str) -> None:
    raise Mistake(error("number-form", message, scanner.span(start, end), help=advice))


def unit_after_number(scanner: Scanner) -> UnitText | None:
    """``" " unit``, where a clause word is no unit."""
    text, at = scanner.passage.text, scanner.at
    per = _PER.match(text, at)
    if per and _IDENTIFIER.match(text, per.end()):
        scanner.at = per.end()
        return _unit(scanner, at + 1, first_joint="/")
    spaced = _SPACED.match(text, at)
    word = _IDENTIFIER.match(text, spaced.end()) if spaced else None
    if spaced is None or word is None or word.group() in CLAUSE_WORDS:
        return None
    if spaced.group() != " ":
        raise Mistake(
            error(
                "number-form",
                "one blank stands between a number and its unit",
                scanner.span(at, word.end()),
                help=f"write one blank before {word.group()}",
            )
        )
    scanner.at = word.start()
    return _unit(scanner, scanner.at, first_joint="")


def _unit(scanner: Scanner, start: int, *, first_joint: str) -> UnitText:
    """``unit = ["1/"] word [exponent] (("·" | "/") word [exponent])*``"""
    words = [_unit_word(scanner, first_joint)]
    text = scanner.passage.text
    while text[scanner.at : scanner.at + 1] in ("·", "/"):
        following = _IDENTIFIER.match(text, scanner.at + 1)
        if not following or not _joins(text, following):
            break
        joint = text[scanner.at]
        scanner.at = following.start()
        words.append(_unit_word(scanner, joint))
        if len(words) > _WORDS_MOST:
            raise Mistake(
                error(
                    "number-form",
                    f"a unit has at most {_WORDS_MOST} words",
                    scanner.span(following.start(), scanner.at),
                    help="define a part of it on a line of its own",
                )
            )
    unit = UnitText(tuple(words), scanner.span(start, scanner.at))
    _refuse_ambiguous(unit)
    if not Fraction(1, _FACTOR_MOST) < resolve(unit).factor < _FACTOR_MOST:
        raise Mistake(
            error(
                "number-form",
                "this unit is too large or too small to compute with",
                unit.span,
                help="use other prefixes or smaller powers",
            )
        )
    return unit


def _refuse_ambiguous(unit: UnitText) -> None:
    """``W/m²·K``: whether what follows ``·`` is divided by as well, nobody can tell."""
    joints = [word.joint for word in unit.words]
    if "/" not in joints:
        return
    at = next((n for n, joint in enumerate(joints) if joint == "·" and n > joints.index("/")), None)
    if at is None:
        return
    words = unit.words
    rest = tuple(replace(each, joint="/") for each in words[at:])
    first, *more = (each for each in words if each.joint != "/")
    below = (each for each in words if each.joint == "/")
    divided = unit_text(UnitText((*words[:at], *rest), unit.span))
    multiplied = unit_text(UnitText((replace(first, joint=""), *more, *below), unit.span))
    raise Mistake(
        error(
            "two-readings",
            f"`{unit_text(unit)}` has two readings: it multiplies after it divides",
            unit.span,
            help=f"write {divided} or {multiplied}",
        )
    )


def _joins(text: str, word: re.Match[str]) -> bool:
    """Whether a word after ``·`` or ``/`` belongs to the unit: known, and not a function call."""
    return known_word(word.group()) and text[word.end() : word.end() + 1] not in ("(", "[")


def _unit_word(scanner: Scanner, joint: str) -> UnitWord:
    """``exponent = "^" ["-"] digits | superscript digits``"""
    text, start = scanner.passage.text, scanner.at
    word = _IDENTIFIER.match(text, start)
    assert word is not None
    if not known_word(word.group()):
        _refuse_word(scanner, word)
    if word.group() in FUNCTIONS and text[word.end() : word.end() + 1] == "(":
        raise Mistake(
            error(
                "unknown-unit",
                f"after a number {shown(word.group())} is the unit, not the function",
                scanner.span(*word.span()),
                help=f"write * between the number and {word.group()}(...)",
            )
        )
    exponent = _EXPONENT.match(text, word.end())
    scanner.at = exponent.end() if exponent else word.end()
    power = int((exponent[1] or exponent[2]).translate(_LOWERED)) if exponent else 1
    odd = _ODD_POWER.match(text, scanner.at) if exponent else _POWER.match(text, scanner.at)
    if odd or not 0 < abs(power) <= _POWER_MOST:
        raise Mistake(
            error(
                "number-form",
                f"the power of a unit is a whole number from -{_POWER_MOST} to {_POWER_MOST}",
                scanner.span(word.end(), max(scanner.at, odd.end() if odd else 0)),
                help=f"for a power of the whole quantity write brackets: (2 {word.group()})^2.5",
            )
        )
    return UnitWord(word.group(), power, joint, scanner.span(start, scanner.at))


def _refuse_word(scanner: Scanner, word: re.Match[str]) -> None:
    nearest = nearest_word(word.group())
    advice = f"the nearest unit is {nearest}; " if nearest else ""
    raise Mistake(
        error(
            "unknown-unit",
            f"after a number a word is a unit, and {shown(word.group())} is not one",
            scanner.span(*word.span()),
            help=f"{advice}to multiply by a symbol write * before {word.group()}",
        )
    )


_OPEN: Final = re.compile(r"\[")
_CLOSE: Final = re.compile(r"\]")
_PER_BARE: Final = re.compile(r"1/")


def bracketed_unit(scanner: Scanner) -> UnitText:
    """``display unit = "[" unit "]"``"""
    opened = scanner.expect(_OPEN, "`[`")
    scanner.blanks()
    start = scanner.at
    joint = "/" if scanner.take(_PER_BARE) else ""
    if not _IDENTIFIER.match(scanner.passage.text, scanner.at):
        scanner.refuse("a unit")
    word = _IDENTIFIER.match(scanner.passage.text, scanner.at)
    assert word is not None
    if not known_word(word.group()):
        nearest = nearest_word(word.group())
        raise Mistake(
            error(
                "unknown-unit",
                f"{shown(word.group())} is not a unit",
                scanner.span(*word.span()),
                help=f"the nearest unit is {nearest}" if nearest else "",
            )
        )
    unit = _unit(scanner, start, first_joint=joint)
    scanner.expect(_CLOSE, "`]` after the unit", opened=opened)
    return unit


def resolve(unit: UnitText) -> Unit:
    """The unit that a written unit stands for."""
    return unit_of(
        (each.word, -each.exponent if each.joint == "/" else each.exponent) for each in unit.words
    )
