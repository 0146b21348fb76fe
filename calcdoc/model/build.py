"""From document to model: the checks in order, each reporting all it finds."""

from collections.abc import Mapping

from calcdoc.frozen import replace
from calcdoc.model import namespace
from calcdoc.model.citations import CHECKS
from calcdoc.model.judging import Judging, discharge
from calcdoc.model.model import Compared, Judged, Model, Relation
from calcdoc.model.namespace import Namespace, direct_uses
from calcdoc.model.picturing import pictured
from calcdoc.model.quantities import Quantities
from calcdoc.model.typing import Unknown
from calcdoc.model.uses import Rests, find_uses
from calcdoc.problems import Finding, Mistake
from calcdoc.problems.views import has_errors
from calcdoc.tables.table import Table
from calcdoc.text.document import Document
from calcdoc.text.statements import (
    CrosscheckStatement,
    HazardStatement,
    Inequality,
    ReferenceStatement,
    RelationStatement,
    RestateStatement,
    SensitivityStatement,
    SentenceStatement,
    SettleStatement,
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
    judged, compared, more = _judge(document, space, quantities)
    figures, wrong = pictured(document, quantities.checker, quantities.variables)
    findings += [*found, *quantities.findings, *more, *wrong]
    for each in CHECKS:
        findings += each(document, space)
    # A table that could not be read leaves lines untyped; whoever read it reports that.
    if has_errors(findings) or len(quantities.variables) < len(space.quantities):
        return None, tuple(findings)
    stated = {
        key: Relation(key, each, direct_uses((each.left, each.right), space))
        for key, each in relations.items()
    }
    made = _model(document, tables, quantities, rests, stated, judged, compared)
    return replace(made, figures=figures), tuple(findings)


def _judge(
    document: Document, space: Namespace, quantities: Quantities
) -> tuple[list[Judged | Uncalculated], list[Compared], list[Finding]]:
    judging = Judging(space, quantities.checker, quantities.variables)
    criteria: list[Judged | Uncalculated] = []
    compared: list[Compared] = []
    findings: list[Finding] = []
    for statement in document.statements:
        try:
            match statement:
                case Inequality():
                    criteria.append(judging.criterion(statement))
                case Uncalculated():
                    criteria.append(statement)
                case CrosscheckStatement():
                    compared.append(judging.crosscheck(statement))
                case HazardStatement():
                    findings += judging.hazard(statement)
                case _:
                    pass
        except Mistake as mistake:
            findings.append(mistake.finding)
        except Unknown:
            pass
    return criteria, compared, findings


def _model(  # noqa: PLR0913  (the parts of a model)
    document: Document,
    tables: Mapping[str, Table],
    quantities: Quantities,
    rests: Rests,
    relations: dict[str, Relation],
    criteria: list[Judged | Uncalculated],
    compared: list[Compared],
) -> Model:
    given = document.statements
    hazards = tuple(each for each in given if isinstance(each, HazardStatement))
    return Model(
        document,
        tables,
        {key: quantities.variables[key] for key in quantities.space.quantities},
        rests.order,
        relations,
        tuple(criteria),
        tuple(compared),
        tuple(each for each in given if isinstance(each, RestateStatement)),
        tuple(each for each in given if isinstance(each, SensitivityStatement)),
        tuple(each for each in given if isinstance(each, SentenceStatement)),
        hazards,
        tuple(discharge(each) for each in hazards if each.kind == "stored"),
        tuple(each for each in given if isinstance(each, ReferenceStatement)),
    )
