"""Figures: pictures computed from the model, one statement each."""

import re
from collections.abc import Callable, Mapping
from typing import Final, NoReturn

from calcdoc.frozen import replace
from calcdoc.problems import Mistake, error
from calcdoc.text.cells import columns, plain, used
from calcdoc.text.formula import formula
from calcdoc.text.given import Given, Style, given, no_makeup
from calcdoc.text.names import LETTER, nearest
from calcdoc.text.nodes import Node
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner, not_yet, shown
from calcdoc.text.statements import FigureStatement

FIGURE_COLUMNS: Final = ("figure", "caption")
_WORD: Final = re.compile(rf"[{LETTER}]+")
_AGAINST: Final = re.compile(r"against\b")
_FROM: Final = re.compile(r"from\b")
_TO: Final = re.compile(r"to\b")
_WITH: Final = re.compile(r"with\b")
_OF: Final = re.compile(r"of\b")
_LATER: Final = ("waveform",)


def figure(statement: Passage) -> FigureStatement:
    """``(curve | spread | sensitivities | margins) "|" caption``"""
    first, caption = columns(statement, FIGURE_COLUMNS)
    scanner = Scanner(first)
    found = scanner.look(_WORD)
    if found is None:
        scanner.refuse(f"the kind of the figure: {_KINDS}")
    rule = _RULES.get(found.group())
    if rule is None:
        _refuse_kind(scanner, found)
    scanner.at = found.end()
    made = rule(scanner)
    if not scanner.ended:
        scanner.refuse(_ENDS.get(made.kind, "the end of the figure") if not made.limit else _END)
    if not caption.text:
        raise Mistake(
            error(
                "figure-form",
                "this figure has no caption",
                first.whole,
                help="say behind a bar what it shows, as in margins | Distance to the limits",
            )
        )
    return replace(made, caption=plain(caption))


def _curve(scanner: Scanner) -> FigureStatement:
    """``"curve" SYMBOL "against" SYMBOL "from" value "to" value ["with" sum]``"""
    symbol = used(scanner, "the symbol of the curve")
    scanner.expect(_AGAINST, "`against` and the quantity along the axis")
    against = used(scanner, "the symbol of the quantity along the axis")
    scanner.expect(_FROM, "`from` and where the axis begins, as in from 4.7 µF to 22 µF")
    low = _value(scanner)
    scanner.expect(_TO, "`to` and where the axis ends")
    high = _value(scanner)
    limit = _limit(scanner)
    passage = scanner.passage
    return FigureStatement(
        "curve", symbol, against, low, high, limit, "", plain(passage), passage.whole
    )


def _value(scanner: Scanner) -> Given:
    """One value of the axis, without a band."""
    value = given(scanner)
    if value.style is not Style.FIXED:
        raise Mistake(
            error(
                "figure-form",
                "an end of the axis is one value without a band",
                value.span,
                help="write from 4.7 µF to 22 µF",
            )
        )
    no_makeup(scanner)
    return value


def _limit(scanner: Scanner) -> Node | None:
    return formula(scanner) if scanner.take(_WITH) else None


def _spread(scanner: Scanner) -> FigureStatement:
    """``"spread" "of" SYMBOL ["with" sum]``"""
    scanner.expect(_OF, "`of` and a symbol")
    symbol = used(scanner, "the symbol whose spread is drawn")
    limit = _limit(scanner)
    passage = scanner.passage
    return FigureStatement(
        "spread", symbol, None, None, None, limit, "", plain(passage), passage.whole
    )


def _sensitivities(scanner: Scanner) -> FigureStatement:
    """``"sensitivities" "of" SYMBOL``"""
    scanner.expect(_OF, "`of` and a symbol")
    symbol = used(scanner, "the symbol whose sensitivities are drawn")
    passage = scanner.passage
    return FigureStatement(
        "sensitivities", symbol, None, None, None, None, "", plain(passage), passage.whole
    )


def _margins(scanner: Scanner) -> FigureStatement:
    """``"margins"``"""
    passage = scanner.passage
    return FigureStatement(
        "margins", None, None, None, None, None, "", plain(passage), passage.whole
    )


_RULES: Final[Mapping[str, Callable[[Scanner], FigureStatement]]] = {
    "curve": _curve,
    "spread": _spread,
    "sensitivities": _sensitivities,
    "margins": _margins,
}
_KINDS: Final = "curve, spread, sensitivities or margins"
_LIMIT_OR_END: Final = "`with` and a limit, or the end of the figure"
_END: Final = "an operator or the end of the limit"
_ENDS: Final = {"curve": _LIMIT_OR_END, "spread": _LIMIT_OR_END}


def _refuse_kind(scanner: Scanner, found: re.Match[str]) -> NoReturn:
    word, span = found.group(), scanner.span(*found.span())
    if word in _LATER:
        raise Mistake(not_yet(f"the figure `{word}`", span))
    near = nearest(word, (*_RULES, *_LATER))
    raise Mistake(
        error(
            "figure-form",
            f"there is no kind of figure {shown(word)}",
            span,
            help=f"did you mean {near}?" if near else f"the kinds are {_KINDS}",
        )
    )
