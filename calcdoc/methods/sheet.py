"""A sheet: the text of a method, read and checked on its own.

Whatever a sheet names it takes or defines itself, so that it means the same in every design.
"""

from collections.abc import Iterator

from calcdoc.frozen import Frozen
from calcdoc.methods.naming import spoken
from calcdoc.problems import Finding, Place, error
from calcdoc.problems.views import has_errors
from calcdoc.source import SourceFile
from calcdoc.text import prose
from calcdoc.text.document import Document, mentions, read_document, walk
from calcdoc.text.names import CONSTANTS, fold, nearest, taken_as
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    Acceptance,
    AnyOf,
    CrosscheckStatement,
    Definition,
    Give,
    Inequality,
    Label,
    Limit,
    Measurement,
    RelationStatement,
    SolvedStatement,
    Statement,
    Take,
    Uncalculated,
)
from calcdoc.text.titleblock import TitleBlock

_CONSTANTS = frozenset(map(fold, CONSTANTS))


class Sheet(Frozen, frozen=True):
    """A method as its sheet says it."""

    source: SourceFile
    title: TitleBlock
    takes: tuple[Take, ...]
    limits: tuple[Limit, ...]
    """Where it is valid."""
    gives: tuple[Give, ...]
    own: frozenset[str]
    """Keys of every name it takes or defines, ids included."""
    ids: frozenset[str]
    """Keys of criteria and cross-checks."""
    body: tuple[prose.Block, ...]

    @property
    def statements(self) -> tuple[Statement, ...]:
        """Every statement, in the author's order."""
        return _statements(self.body)


def read_sheet(source: SourceFile) -> tuple[Sheet | None, tuple[Finding, ...]]:
    """Read and check a sheet; None when it has errors."""
    document, findings = read_document(source, sheet=True)
    if document is None:
        return None, findings
    blocks = tuple(walk(document.body))
    takes = tuple(t for each in blocks if isinstance(each, prose.Takes) for t in each.takes)
    limits = tuple(a for each in blocks if isinstance(each, prose.Takes) for a in each.limits)
    gives = tuple(g for each in blocks if isinstance(each, prose.Gives) for g in each.gives)
    labels = [*(each.symbol for each in takes), *defined(document.statements)]
    ids = frozenset(label.key for each in document.statements for label in _ids(each))
    own = frozenset(label.key for label in labels)
    sheet = Sheet(source, document.title, takes, limits, gives, own, ids, document.body)
    wrong = (
        *findings,
        *_wrong_names(labels),
        *_unknown(sheet, document),
        *_not_given(sheet, document),
        *_out_of_place(sheet),
    )
    return (None if has_errors(wrong) else sheet), wrong


def _statements(body: tuple[prose.Block, ...]) -> tuple[Statement, ...]:
    return tuple(
        statement
        for each in walk(body)
        if isinstance(each, prose.Statements)
        for statement in each.statements
    )


def defined(statements: tuple[Statement, ...]) -> Iterator[Label]:
    """Every name that statements of a sheet define."""
    for each in statements:
        match each:
            case Definition():
                yield each.symbol
            case SolvedStatement():
                yield from (unknown.symbol for unknown in each.unknowns)
            case RelationStatement():
                yield each.name
            case _:
                yield from _ids(each)


def _ids(statement: Statement) -> Iterator[Label]:
    match statement:
        case Inequality() | Uncalculated() | AnyOf() | CrosscheckStatement() | Measurement():
            yield statement.id
        case _:
            pass


def _wrong_names(labels: list[Label]) -> Iterator[Finding]:
    """Names that are taken, or stand for two things."""
    first: dict[str, Label] = {}
    for label in labels:
        if taken := taken_as(label.name):
            yield error(
                "reserved-word",
                f"{shown(label.name)} is {taken}",
                label.span,
                help="give it a subscript or another name",
            )
        elif label.key in first:
            yield error(
                "defined-twice",
                f"{shown(label.name)} is defined twice",
                label.span,
                related=(Place(first[label.key].span, "first here"),),
                help="a sheet takes a quantity or defines it, once",
            )
        first.setdefault(label.key, label)


def _unknown(sheet: Sheet, document: Document) -> Iterator[Finding]:
    """Names that the sheet neither takes nor defines: a design's are out of its sight."""
    pieces = [
        *(each.default for each in sheet.takes),
        *(each.inequality.operands for each in sheet.limits),
        *document.statements,
    ]
    named = [label for each in pieces for label in spoken(each)]
    named += [Label(each.name, each.span) for each in mentions(document.body)]
    known = sheet.own | _CONSTANTS | document.broken
    spelled = [*(each.symbol.name for each in sheet.takes)]
    spelled += [label.name for label in defined(document.statements)]
    for label in named:
        if label.key in known:
            continue
        near = nearest(label.name, spelled)
        yield error(
            "unknown-symbol",
            f"there is no symbol {shown(label.name)} in this sheet",
            label.span,
            help=f"did you mean {near}?"
            if near
            else "take it in `takes` or define it in `derive`; a sheet sees no names of a design",
        )


def _not_given(sheet: Sheet, document: Document) -> Iterator[Finding]:
    """What it says to give is there."""
    if not sheet.gives:
        yield error(
            "sheet-form",
            "this sheet gives nothing",
            document.title.span
            if document.title.span.end
            else sheet.source.span(0, min(1, len(sheet.source.text))),
            help="name in a `gives` block what a design may use: V_res | residual voltage",
        )
    for each in sheet.gives:
        symbols = sheet.own - sheet.ids
        if each.symbol.key not in symbols and not document.is_broken(each.symbol.key):
            yield error(
                "sheet-form",
                f"this sheet gives {shown(each.symbol.name)}, but does not define it",
                each.symbol.span,
                help="define it in `derive`, or leave it out",
            )


def _out_of_place(sheet: Sheet) -> Iterator[Finding]:
    """Statements that only a design can make."""
    for each in sheet.statements:
        if isinstance(each, Acceptance | Measurement):
            what = "accepts no failure" if isinstance(each, Acceptance) else "holds no measurement"
            yield error(
                "sheet-form", f"a sheet {what}", each.span, help="say it in the design instead"
            )
        elif isinstance(each, Inequality) and each.clauses.scope and each.clauses.scope.names:
            yield error(
                "sheet-form",
                "a sheet knows no case by name",
                each.clauses.scope.span,
                help="write `in every case` or `in every fault`",
            )
