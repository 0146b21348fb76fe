"""Checks that need no types: citations have their references, prose names what exists."""

from collections.abc import Callable, Iterator
from typing import Final

from calcdoc.model.methods import out_of_sight
from calcdoc.model.namespace import MEASURED, Namespace
from calcdoc.problems import Finding, Place, error
from calcdoc.text.document import Document, inlines, mentions
from calcdoc.text.names import fold, nearest
from calcdoc.text.prose import Brace
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    Basis,
    FigureStatement,
    HazardStatement,
    Label,
    ReferenceStatement,
    RestateStatement,
    SensitivityStatement,
    Statement,
)


def check_references(document: Document, _: Namespace) -> list[Finding]:
    """Keys are unique, and every citation has its reference."""
    keys: dict[str, ReferenceStatement] = {}
    findings = []
    for each in document.statements:
        if isinstance(each, ReferenceStatement):
            if each.key in keys:
                findings.append(
                    error(
                        "defined-twice",
                        f"the reference {shown(each.key)} stands here twice",
                        each.span,
                        related=(Place(keys[each.key].span, "first here"),),
                        help="keep one of them",
                    )
                )
            keys.setdefault(each.key, each)
    for basis in _bases(document.statements):
        for citation in basis.citations:
            if citation.key not in keys:
                near = nearest(citation.key, keys)
                findings.append(
                    error(
                        "unknown-citation",
                        f"there is no reference {shown(citation.key)}",
                        citation.span,
                        help=f"did you mean [{near}]?"
                        if near
                        else "add it to a `references` block: KEY | title | edition | where held",
                    )
                )
    return findings


def _bases(statements: tuple[Statement, ...]) -> Iterator[Basis]:
    without = (
        HazardStatement
        | ReferenceStatement
        | RestateStatement
        | SensitivityStatement
        | FigureStatement
    )
    for each in statements:
        if not isinstance(each, without):
            yield each.basis


def check_mentions(document: Document, space: Namespace) -> list[Finding]:
    """Every ``{name}`` in prose is a symbol, or without a form the id of a criterion."""
    ids = {key for key, what in space.ids.items() if what == "criterion"}
    findings = []
    for mention in mentions(document.body):
        key = fold(mention.name)
        known = key in space.quantities or (key in ids and not mention.form)
        if hidden := out_of_sight(Label(mention.name, mention.span), document):
            findings.append(hidden)
            continue
        if known or document.is_broken(key):
            continue
        if key in ids:
            findings.append(
                error(
                    "unknown-name",
                    f"{shown(mention.name)} is a criterion, it has no {mention.form}",
                    mention.span,
                    help=f"write {{{mention.name}}}",
                )
            )
            continue
        if space.ids.get(key) == MEASURED:
            findings.append(
                error(
                    "unknown-name",
                    f"{shown(mention.name)} is a measured value, prose names what is calculated",
                    mention.span,
                    help="write its number, or name what it is compared with",
                )
            )
            continue
        near = nearest(mention.name, [*space.spelled(), *(space.labels[each].name for each in ids)])
        findings.append(
            error(
                "unknown-name",
                f"there is no symbol or criterion {shown(mention.name)}",
                mention.span,
                help=f"did you mean {{{near}}}?" if near else "for a plain brace write \\{",
            )
        )
    return findings


def check_braces(document: Document, space: Namespace) -> list[Finding]:
    """Braces that begin with a known name are a mention, not text that prints as it stands."""
    findings = []
    for brace in inlines(document.body):
        if not isinstance(brace, Brace) or fold(brace.name) not in space.labels:
            continue
        key, name = fold(brace.name), brace.name
        forms = ""
        if space.ids.get(key) == "criterion":
            forms = f"write {{{name}}}; "
        elif key in space.quantities:
            forms = f"write {{{name}}}, {{{name}:value}}, {{{name}:least}} or {{{name}:greatest}}; "
        findings.append(
            error(
                "unknown-name",
                f"{shown(brace.written)} is no form in which prose names a value",
                brace.span,
                help=f"{forms}for a plain brace write \\{{",
            )
        )
    return findings


Check = Callable[[Document, Namespace], list[Finding]]
CHECKS: Final[tuple[Check, ...]] = (check_references, check_mentions, check_braces)
"""Extend by adding a line."""
