"""From document to model: the checks in order, each reporting all it finds."""

from collections.abc import Iterator, Mapping
from contextlib import contextmanager

from calcdoc.frozen import Working, replace
from calcdoc.model import namespace
from calcdoc.model.accepting import Accepting, check_once, criteria_of, key_of
from calcdoc.model.cases import Stated, build_cases, check_names, stated
from calcdoc.model.citations import CHECKS
from calcdoc.model.judging import Judging, discharge
from calcdoc.model.model import (
    Accepted,
    Case,
    Compared,
    Criterion,
    Judged,
    Measured,
    Model,
    Relation,
)
from calcdoc.model.namespace import Namespace, direct_uses
from calcdoc.model.picturing import pictured
from calcdoc.model.quantities import Quantities
from calcdoc.model.typing import Unknown
from calcdoc.model.uses import Rests, find_uses
from calcdoc.problems import Finding, Mistake
from calcdoc.problems.views import has_errors
from calcdoc.tables.table import Table
from calcdoc.text.cases import NORMAL
from calcdoc.text.document import Document
from calcdoc.text.statements import (
    Acceptance,
    AnyOf,
    CrosscheckStatement,
    HazardStatement,
    Inequality,
    Measurement,
    ReferenceStatement,
    RelationStatement,
    RestateStatement,
    SensitivityStatement,
    SentenceStatement,
    SettleStatement,
    Statement,
    Uncalculated,
)


def build(
    document: Document, tables: Mapping[str, Table] | None = None
) -> tuple[Model | None, tuple[Finding, ...]]:
    """Check a document; None when a mistake stops it from being computed.

    Args:
        document: The design text as it was read.
        tables: The tables its formulas look up, by name.
    """
    tables = tables or {}
    space, findings = namespace.collect(document)
    for check in (namespace.unknown_names, namespace.two_readings, namespace.shadowed):
        findings += check(document, space)
    relations = {
        each.name.key: each for each in document.statements if isinstance(each, RelationStatement)
    }
    settled = {
        each.symbol.key: each for each in document.statements if isinstance(each, SettleStatement)
    }
    rests, found = find_uses(space, relations, settled)
    quantities = Quantities(space, rests, relations, settled, tables)
    quantities.run()
    known, twice = stated(document)
    cases, wrong = build_cases(known, quantities.checker, quantities.variables)
    quantities.check_counts(cases)
    judged = _judge(document, space, quantities, known)
    twice += check_names(known, space)
    findings += [*found, *quantities.findings, *twice, *wrong, *judged.findings]
    figures, unfit = pictured(document, quantities.checker, quantities.variables)
    findings += unfit
    for each in CHECKS:
        findings += each(document, space)
    # A table that could not be read leaves lines untyped; whoever read it reports that.
    if has_errors(findings) or len(quantities.variables) < len(space.quantities):
        return None, tuple(findings)
    relations_of = {
        key: Relation(key, each, direct_uses((each.left, each.right), space))
        for key, each in relations.items()
    }
    made = _model(document, tables, quantities, rests, relations_of, cases, judged)
    return replace(made, figures=figures, limits=tuple(judged.limits)), tuple(findings)


class _Judgements(Working):
    """What is judged and compared, in the author's order."""

    judging: Judging
    accepting: Accepting
    criteria: list[Criterion]
    accepted: list[Accepted]
    compared: list[Compared]
    measured: list[Measured]
    limits: list[Judged]
    findings: list[Finding]

    def take(self, statement: Statement) -> None:
        """Check one statement and keep what it says."""
        match statement:
            case Inequality():
                self.criteria.append(self.judging.criterion(statement))
            case Uncalculated():
                self.criteria.append(statement)
            case AnyOf():
                self.criteria.append(self.accepting.chosen(statement))
            case CrosscheckStatement():
                self.compared.append(self.judging.crosscheck(statement))
            case Measurement():
                self.measured.append(self.judging.measurement(statement))
            case HazardStatement():
                self.findings += self.judging.hazard(statement)
            case _:
                pass


def _judge(
    document: Document, space: Namespace, quantities: Quantities, known: Stated
) -> _Judgements:
    judging = Judging(space, quantities.checker, quantities.variables, known)
    accepting = Accepting(space, criteria_of(document.statements), known)
    found = _Judgements(judging, accepting, [], [], [], [], [], [])
    for statement in document.statements:
        with _noted(found.findings):
            found.take(statement)
    everywhere = (NORMAL, *known.cases)
    for limit in (limit for each in document.applied for limit in each.limits):
        with _noted(found.findings):
            found.limits.append(replace(judging.criterion(limit), cases=everywhere))
    by_key = {key_of(each): each for each in found.criteria}
    for statement in document.statements:
        if isinstance(statement, Acceptance):
            with _noted(found.findings):
                found.accepted.append(accepting.accepted(statement, by_key))
    found.findings += check_once(found.accepted)
    return found


@contextmanager
def _noted(findings: list[Finding]) -> Iterator[None]:
    """Keep a mistake and go on; what rests on a wrong line was reported there."""
    try:
        yield
    except Mistake as mistake:
        findings.append(mistake.finding)
    except Unknown:
        pass


def _model(  # noqa: PLR0913  (the parts of a model)
    document: Document,
    tables: Mapping[str, Table],
    quantities: Quantities,
    rests: Rests,
    relations: dict[str, Relation],
    cases: tuple[Case, ...],
    judged: _Judgements,
) -> Model:
    given = document.statements
    hazards = tuple(each for each in given if isinstance(each, HazardStatement))
    return Model(
        document,
        tables,
        {key: quantities.variables[key] for key in quantities.space.quantities},
        rests.order,
        relations,
        cases,
        tuple(judged.criteria),
        tuple(judged.accepted),
        tuple(judged.compared),
        tuple(judged.measured),
        tuple(each for each in given if isinstance(each, RestateStatement)),
        tuple(each for each in given if isinstance(each, SensitivityStatement)),
        tuple(each for each in given if isinstance(each, SentenceStatement)),
        hazards,
        tuple(discharge(each) for each in hazards if each.kind == "stored"),
        tuple(each for each in given if isinstance(each, ReferenceStatement)),
    )
