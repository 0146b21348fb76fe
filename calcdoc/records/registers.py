"""Registers: assumptions with what rests on them, references with who cites them, the tally."""

import re
from collections.abc import Iterator

from calcdoc.model.model import Model, Variable
from calcdoc.records import record as r
from calcdoc.records.naming import Naming, case_key, rests_on
from calcdoc.records.wording import counted
from calcdoc.text.statements import (
    Acceptance,
    AnyOf,
    Basis,
    CaseStatement,
    CrosscheckStatement,
    Definition,
    GivenStatement,
    Inequality,
    Kind,
    Measurement,
    SentenceStatement,
    Uncalculated,
)


def assumptions(model: Model, naming: Naming) -> tuple[r.Assumption, ...]:
    """The assumptions register, in the author's order."""
    rows = []
    for statement in model.document.statements:
        if isinstance(statement, GivenStatement) and statement.kind is Kind.ASSUMPTION:
            rows.append(_quantity(model, naming, statement))
        elif isinstance(statement, SentenceStatement):
            rows.append(_sentence(model, naming, statement))
    return tuple(rows)


def _quantity(model: Model, naming: Naming, statement: GivenStatement) -> r.Assumption:
    key = statement.symbol.key
    return r.Assumption(
        id=statement.id.name if statement.id else "",
        text=statement.text,
        symbol=statement.symbol.name,
        reason=statement.description,
        state=statement.state,
        note=statement.basis.text,
        rests_on_it=rests_on(model, naming, key),
        line=naming.lines[key],
    )


def _sentence(model: Model, naming: Naming, statement: SentenceStatement) -> r.Assumption:
    return r.Assumption(
        id=statement.id.name,
        text=statement.text,
        symbol="",
        reason=statement.reason,
        state=statement.state,
        note=statement.basis.text,
        rests_on_it=tuple(_naming_it(model, naming, statement.id.name)),
        line=naming.lines[statement.id.key],
    )


def _naming_it(model: Model, naming: Naming, name: str) -> Iterator[str]:
    """Lines and criteria whose basis names a sentence's id, and what rests on those lines."""
    word = re.compile(rf"(?<!\w){re.escape(name)}(?!\w)")
    found: dict[str, None] = {}
    for statement, basis in _bases(model):
        if not word.search(basis.text):
            continue
        if isinstance(statement, GivenStatement | Definition):
            key = statement.symbol.key
            found[naming.lines[key]] = None
            found.update(dict.fromkeys(rests_on(model, naming, key)))
        else:
            found[_name(naming, statement)] = None
    yield from found


Based = (
    GivenStatement
    | Definition
    | SentenceStatement
    | Inequality
    | Uncalculated
    | AnyOf
    | CrosscheckStatement
    | Measurement
    | CaseStatement
    | Acceptance
)


def _name(naming: Naming, statement: Based) -> str:
    """What a statement is called where it is listed: its line or its id."""
    match statement:
        case GivenStatement() | Definition():
            return naming.lines[statement.symbol.key]
        case CaseStatement():
            return naming.lines[case_key(statement.name.name)]
        case Acceptance():
            return statement.criterion.name
        case _:
            return statement.id.name


def _bases(model: Model) -> Iterator[tuple[Based, Basis]]:
    for each in model.document.statements:
        if isinstance(each, Based):
            yield each, each.basis


def references(model: Model, naming: Naming) -> tuple[r.Reference, ...]:
    """References in the author's order with the lines and criteria that cite them."""
    cited: dict[str, list[str]] = {each.key: [] for each in model.references}
    for statement, basis in _bases(model):
        name = _name(naming, statement)
        for citation in basis.citations:
            if name not in cited[citation.key]:
                cited[citation.key].append(name)
    return tuple(
        r.Reference(key=each.key, title=each.title, edition=each.edition, held=each.held,
                    cited_by=tuple(cited[each.key]))
        for each in model.references
    )  # fmt: skip


def tally(criteria: tuple[r.Criterion, ...], register: tuple[r.Assumption, ...]) -> r.Tally:
    """How many criteria have which verdict, and what is open."""
    counted_ones = [each for each in criteria if not each.route_of]

    def count(verdict: str) -> int:
        return sum(each.verdict == verdict for each in counted_ones)

    numbers = {
        "passed": count("pass"),
        "failed": count("fail"),
        "accepted": sum(each.accepted is not None for each in counted_ones),
        "undecided": count("not decided"),
        "not_applicable": count("not applicable"),
        "by_test": count("by test"),
        "by_inspection": count("by inspection"),
        "open_assumptions": sum(each.state == "open" for each in register),
        "unverified": sum(bool(each.unverified) for each in criteria),
    }
    return r.Tally(**numbers, bottom_line=_bottom_line(numbers))


def _bottom_line(numbers: dict[str, int]) -> str:
    """``5 pass, 1 fail, 1 by test``: what was calculated first, what is open last."""
    words = (
        ("passed", "pass"),
        ("failed", "fail"),
        ("undecided", "not decided"),
        ("not_applicable", "not applicable"),
        ("by_test", "by test"),
        ("by_inspection", "by inspection"),
    )
    said = [
        f"{numbers[key]} {word}{_accepted(numbers) if key == 'failed' else ''}"
        for key, word in words
        if numbers[key]
    ]
    return ", ".join(said) or "no criteria"


def _accepted(numbers: dict[str, int]) -> str:
    """Accepted failures are failures, counted apart."""
    if not numbers["accepted"]:
        return ""
    if numbers["accepted"] == numbers["failed"]:
        return " (accepted)"
    return f" ({numbers['accepted']} of them accepted)"


def unsourced(model: Model) -> tuple[str, ...]:
    """Notices: inputs and conditions without a basis."""
    missing = [variable.symbol for variable in model.variables.values() if _lacks_source(variable)]
    if not missing:
        return ()
    return (f"{counted(len(missing), 'input')} without a source: {', '.join(missing)}",)


def _lacks_source(variable: Variable) -> bool:
    stated = variable.stated
    return stated is not None and stated.kind is not Kind.ASSUMPTION and not stated.basis.text
