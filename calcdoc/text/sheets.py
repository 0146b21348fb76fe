"""The rules of `takes`, `gives` and `use` blocks: what a method is applied to and what it gives."""

import re
from typing import Final

from calcdoc.problems import Mistake, error
from calcdoc.source import SourceFile, Span
from calcdoc.text import literal
from calcdoc.text.cells import basis, columns, label, plain
from calcdoc.text.formula import formula
from calcdoc.text.names import SYMBOL
from calcdoc.text.nodes import Name, Node
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner, shown
from calcdoc.text.statements import (
    Basis,
    Binding,
    Clauses,
    Give,
    Inequality,
    Label,
    Limit,
    Take,
)

TAKES_COLUMNS: Final = ("statement", "description", "basis")
_EQUALS: Final = re.compile(r"=(?!=)")
_BRACKET: Final = re.compile(r"\[")
_COMPARE: Final = re.compile(r"<=|>=|<|>")
_USE: Final = re.compile(r"use\s+(?P<method>\S+)\s+as\s+(?P<name>\S+)\s*")
METHOD: Final = re.compile(r"[a-z][a-z0-9]*(?:-[a-z0-9]+)*|\./[^\s\\]+\.md")
"""A name of the library, or a sheet of the project by its path."""
MOST_SIDES: Final = 3


def take(statement: Passage) -> tuple[Take | None, Limit | None]:
    """``SYMBOL [unit] ["=" sum | compare sum] | condition``, then description and basis.

    ``V_s [V] > 0 V`` says both what is taken and where the method is valid.
    """
    first, description, source = columns(statement, TAKES_COLUMNS)
    scanner = Scanner(first)
    said = (plain(description), basis(source))
    symbol = scanner.look(SYMBOL)
    if symbol is None:
        return None, _limit(scanner, None, *said)
    at = scanner.at
    named = label(scanner, "a symbol, as in V_drop [V] = 0 V")
    unit = literal.bracketed_unit(scanner) if scanner.look(_BRACKET) else None
    plain_number = unit is None and (scanner.ended or scanner.look(_EQUALS))
    if unit is None and not plain_number:
        scanner.at = at
        return None, _limit(scanner, None, *said)
    if scanner.look(_COMPARE):
        made = Take(named, literal.resolve(unit) if unit else None, unit, None, *said, first.whole)
        return made, _limit(scanner, Label(named.name, named.span), "", said[1])
    default = formula(scanner) if scanner.take(_EQUALS) else None
    if not scanner.ended:
        scanner.refuse("`=` and a default, <= or another comparison, or the end of the line")
    unit_of = literal.resolve(unit) if unit else None
    return Take(named, unit_of, unit, default, *said, first.whole), None


def _limit(scanner: Scanner, left: Label | None, description: str, source: Basis) -> Limit:
    """``limit = sum compare sum [compare sum]``, both signs pointing the same way."""
    operands: list[Node] = [Name(left.name, left.span)] if left else [formula(scanner)]
    operators: list[str] = []
    while found := scanner.take(_COMPARE):
        operators.append(found.group())
        operands.append(formula(scanner))
    if not scanner.ended or not operators:
        scanner.refuse("<=, >=, < or >, or the end of the limit of validity")
    span = operands[0].span.to(operands[-1].span)
    if len(operands) > MOST_SIDES or len({sign[0] for sign in operators}) > 1:
        raise Mistake(
            error(
                "criterion-form",
                "a limit of validity has one or two sides that point the same way",
                span,
                help="write the least first: a <= x <= b; further limits are lines of their own",
            )
        )
    name = Label("valid", span)
    whole = Inequality(
        name, tuple(operands), tuple(operators), Clauses(), description, source, span
    )
    return Limit(whole, description)


def give(statement: Passage) -> Give:
    """``SYMBOL | description``"""
    first, description = columns(statement, ("symbol", "description"))
    scanner = Scanner(first)
    symbol = label(scanner, "a symbol that the sheet defines")
    if not scanner.ended:
        scanner.refuse("`|` and what it means (its unit stands where it is defined)")
    return Give(symbol, plain(description))


def binding(statement: Passage) -> Binding:
    """``SYMBOL "=" sum``"""
    first, *more = statement.columns()
    if more:
        raise Mistake(
            error(
                "columns",
                "a line of a `use` block has no columns",
                more[0].whole if more[0].text else statement.whole,
                help="what it means stands in the sheet; a value with its basis is an input",
            )
        )
    scanner = Scanner(first)
    symbol = label(scanner, "what the method takes, as in C = C_res")
    if scanner.look(_BRACKET):
        scanner.refuse("`=` (the method says the unit)")
    scanner.expect(_EQUALS, "`=` and what it is in this design")
    tree = formula(scanner)
    if not scanner.ended:
        scanner.refuse("an operator or the end of the line")
    return Binding(symbol, tree)


def opening(source: SourceFile, word: Span) -> tuple[Label, Label]:
    """``"use" METHOD "as" NAME``, the first line of a block.

    Args:
        source: The text.
        word: Where ``use`` stands.

    Raises:
        Mistake: when the line is of another form.
    """
    number, column = source.position(word.start)
    line = source.line(number)[column - 1 :]
    found = _USE.fullmatch(line)
    if found is None:
        raise Mistake(
            error(
                "use-form",
                "expected `use METHOD as NAME`",
                source.span(word.start, word.start + len(line.rstrip())),
                help="name a method and what it is called here, as in"
                " use residual-voltage as discharge",
            )
        )
    method, name = (
        Label(
            found[part], source.span(word.start + found.start(part), word.start + found.end(part))
        )
        for part in ("method", "name")
    )
    if not METHOD.fullmatch(method.name):
        raise Mistake(
            error(
                "use-form",
                f"{shown(method.name)} is neither a method of the library nor a sheet",
                method.span,
                help="a sheet of the project is named from the folder of the design, as in"
                " ./sheets/bleed.md",
            )
        )
    if not SYMBOL.fullmatch(name.name):
        raise Mistake(
            error(
                "use-form",
                f"{shown(name.name)} is no name",
                name.span,
                help="a name is made like a symbol: a letter, then letters and digits",
            )
        )
    return method, name
