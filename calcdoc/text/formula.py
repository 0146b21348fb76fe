"""The formula grammar, one function per rule; each docstring begins with its rule."""

import re
from functools import lru_cache
from typing import Final

from calcdoc.problems import Mistake, error
from calcdoc.text import literal
from calcdoc.text.names import FUNCTIONS, OF_METHOD, SYMBOL, nearest
from calcdoc.text.nodes import (
    Binary,
    Call,
    Comparison,
    Element,
    Group,
    Logic,
    Name,
    Negate,
    Node,
    Not,
    Text,
    children,
)
from calcdoc.text.passage import Passage, passage_of
from calcdoc.text.scan import Scanner, one_dot, shown

DEEPEST: Final = 60
"""Parentheses and functions within each other."""
TALLEST: Final = 150
"""Operations one upon the other; a sum of so many terms reaches it."""
LONGEST: Final = 20_000
"""Characters of one statement."""

_WORD: Final = re.compile(r"[A-Za-z]+")
_COMPARE: Final = re.compile(r"<=|>=|<|>")
_ADD: Final = re.compile(r"[+-]")
_MULTIPLY: Final = re.compile(r"\*(?!\*)|[/·×]")
_MINUS: Final = re.compile(r"-")
_POWER: Final = re.compile(r"\^")
_DIGIT: Final = re.compile(r"[0-9]")
_OPEN: Final = re.compile(r"\(")
_CLOSE: Final = re.compile(r"\)")
_COMMA: Final = re.compile(r",")
_BRACKET: Final = re.compile(r"\[")
_BRACKET_END: Final = re.compile(r"\]")
_TEXT: Final = re.compile(r'"([^"\n]*)"')
_OR: Final = re.compile(r"or\b")
_AND: Final = re.compile(r"and\b")
_NOT: Final = re.compile(r"not\b")
SIGN_ALIKE: Final = {"·": "*", "×": "*"}


class _Parser:
    """One pass over a scanner; it counts how deep it stands."""

    def __init__(self, scanner: Scanner) -> None:
        self.scanner = scanner
        self.depth = 0

    def condition(self) -> Node:
        """``condition = conjunction ("or" conjunction)*``"""
        left = self.conjunction()
        while self.scanner.take(_OR):
            right = self.conjunction()
            left = Logic("or", left, right, left.span.to(right.span))
        return left

    def conjunction(self) -> Node:
        """``conjunction = negation ("and" negation)*``"""
        left = self.negation()
        while self.scanner.take(_AND):
            right = self.negation()
            left = Logic("and", left, right, left.span.to(right.span))
        return left

    def negation(self) -> Node:
        """``negation = "not" negation | comparison``"""
        word = self.scanner.take(_NOT)
        if word is None:
            return self.comparison()
        self._enter(word.start())
        operand = self.negation()
        self.depth -= 1
        return Not(operand, self.scanner.span(*word.span()).to(operand.span))

    def comparison(self) -> Node:
        """``comparison = sum (("<=" | ">=" | "<" | ">") sum)*``"""
        operands, operators = [self.sum()], []
        while found := self.scanner.take(_COMPARE):
            operators.append(found.group())
            operands.append(self.sum())
        if not operators:
            return operands[0]
        return Comparison(tuple(operands), tuple(operators), operands[0].span.to(operands[-1].span))

    def sum(self) -> Node:
        """``sum = product (("+" | "-") product)*``"""
        left = self.product()
        while found := self.scanner.take(_ADD):
            left = self._binary(found, left, self.product())
        return left

    def product(self) -> Node:
        """``product = sign (("*" | "·" | "×" | "/") sign)*``"""
        left = self.sign()
        while found := self.scanner.take(_MULTIPLY):
            left = self._binary(found, left, self.sign())
        return left

    def sign(self) -> Node:
        """``sign = "-" sign | power``"""
        found = self.scanner.take(_MINUS)
        if found is None:
            return self.power()
        self._enter(found.start())
        operand = self.sign()
        self.depth -= 1
        return Negate(operand, self.scanner.span(*found.span()).to(operand.span))

    def power(self) -> Node:
        """``power = atom ["^" sign]``, so ``a^b^c`` is ``a^(b^c)`` and ``-2^2`` is −4."""
        base = self.atom()
        found = self.scanner.take(_POWER)
        if found is None:
            return base
        self._enter(found.start())
        exponent = self.sign()
        self.depth -= 1
        return self._binary(found, base, exponent)

    def atom(self) -> Node:
        """``atom = quantity | text | "(" condition ")" | call | element | name``"""
        if self.scanner.look(_DIGIT):
            return literal.quantity(self.scanner, comma_separates=self.depth > 0)
        if found := self.scanner.take(_TEXT):
            return Text(found[1], self.scanner.span(*found.span()))
        if found := self.scanner.take(_OPEN):
            return self._group(found)
        if found := self.scanner.look(SYMBOL):
            return self._named(found)
        return self.scanner.refuse("a value")

    def _group(self, opened: re.Match[str]) -> Node:
        self._enter(opened.start())
        start = self.scanner.span(*opened.span())
        inner = self.condition()
        end = self.scanner.expect(_CLOSE, "`)`", opened=start)
        self.depth -= 1
        return Group(inner, start.to(end))

    def _named(self, found: re.Match[str]) -> Node:
        """``call = function "(" condition ("," condition)* ")"``; ``element = name "[" sum "]"``"""
        name, text = found.group(), self.scanner.passage.text
        follows = text[found.end() : found.end() + 1]
        if follows == "(":
            return self._call(found)
        if name in FUNCTIONS or name in ("and", "or", "not"):
            wanted = "a value" if name not in FUNCTIONS else f"`(` after the function {shown(name)}"
            if name in FUNCTIONS:
                self.scanner.at = found.end()
            return self.scanner.refuse(wanted)
        whole = OF_METHOD.match(text, found.start())
        assert whole is not None
        name, span = whole.group(), self.scanner.span(*whole.span())
        self.scanner.at = whole.end()
        one_dot(self.scanner, whole)
        if text[whole.end() : whole.end() + 1] == "[":
            return self._element(name, whole)
        return Name(name, span)

    def _call(self, found: re.Match[str]) -> Node:
        name, name_span = found.group(), self.scanner.span(*found.span())
        if name not in FUNCTIONS:
            near = nearest(name, FUNCTIONS)
            raise Mistake(
                error(
                    "unknown-function",
                    f"there is no function {shown(name)}",
                    name_span,
                    help=(f"did you mean {near}(...)? or, " if near else "")
                    + f"to multiply, write {name}*(...)",
                )
            )
        self.scanner.at = found.end()
        opened = self.scanner.expect(_OPEN, "`(`")
        self._enter(found.start())
        arguments = [self.condition()]
        while self.scanner.take(_COMMA):
            arguments.append(self.condition())
        end = self.scanner.expect(_CLOSE, "`,` or `)`", opened=opened)
        self.depth -= 1
        least, most = FUNCTIONS[name]
        span = name_span.to(end)
        if not least <= len(arguments) <= most:
            raise Mistake(
                error(
                    "argument-count",
                    f"{name} takes {_count(least, most)}, here it has {len(arguments)}",
                    span,
                )
            )
        return Call(name, tuple(arguments), span, name_span)

    def _element(self, name: str, found: re.Match[str]) -> Node:
        opened = self.scanner.expect(_BRACKET, "`[`")
        self._enter(found.start())
        index = self.sum()
        end = self.scanner.expect(_BRACKET_END, "`]`", opened=opened)
        self.depth -= 1
        return Element(name, index, self.scanner.span(*found.span()).to(end))

    def _binary(self, found: re.Match[str], left: Node, right: Node) -> Node:
        op = SIGN_ALIKE.get(found.group(), found.group())
        return Binary(op, left, right, left.span.to(right.span), self.scanner.span(*found.span()))

    def _enter(self, at: int) -> None:
        self.depth += 1
        if self.depth > DEEPEST:
            raise Mistake(
                error(
                    "formula-size",
                    f"the formula is nested more than {DEEPEST} deep",
                    self.scanner.span(at, at + 1),
                    help="define a part of it on a line of its own",
                )
            )


def formula(scanner: Scanner, *, conditions: bool = False) -> Node:
    """Read one formula where the scanner stands; with ``conditions`` also comparisons and logic.

    Raises:
        Mistake: at the first character that cannot go on, or when the formula is too large.
    """
    scanner.blanks()
    start = scanner.at
    if len(scanner.passage.text) - start > LONGEST:
        raise Mistake(
            error(
                "formula-size",
                "the statement is too long",
                scanner.span(start, start + 1),
                help=f"keep a statement under {LONGEST} characters",
            )
        )
    parser = _Parser(scanner)
    node = parser.condition() if conditions else parser.sum()
    if _height(node) > TALLEST:
        raise Mistake(
            error(
                "formula-size",
                f"the formula has more than {TALLEST} operations in a row",
                node.span,
                help="define a part of it on a line of its own",
            )
        )
    return node


def whole_formula(passage: Passage, *, conditions: bool = False) -> Node:
    """The formula that fills a passage."""
    scanner = Scanner(passage)
    node = formula(scanner, conditions=conditions)
    if not scanner.ended:
        scanner.refuse("an operator or the end of the formula")
    return node


@lru_cache(maxsize=4096)
def parse_text(text: str) -> Node:
    """The tree of a formula or comparison in a record, where many texts stand in several places.

    Raises:
        ValueError: when the text is not a formula.
    """
    try:
        return whole_formula(passage_of("", text), conditions=True)
    except Mistake as mistake:
        raise ValueError(mistake.finding.message) from mistake


def grammar() -> tuple[str, ...]:
    """The rules as shown to users, collected from the docstrings."""
    rules = [
        getattr(_Parser, name).__doc__ or ""
        for name in (
            "condition",
            "conjunction",
            "negation",
            "comparison",
            "sum",
            "product",
            "sign",
            "power",
            "atom",
            "_named",
        )
    ]
    return tuple(part for rule in rules for part in re.findall(r"``(\w+ = .*?)``", rule))


def _height(node: Node) -> int:
    highest, waiting = 0, [(node, 1)]
    while waiting:
        each, height = waiting.pop()
        highest = max(highest, height)
        waiting.extend((child, height + 1) for child in children(each))
    return highest


def _count(least: int, most: int) -> str:
    if least != most:
        return f"at least {least} argument" + "s" * (least != 1)
    return f"{least} argument" + "s" * (least != 1)
