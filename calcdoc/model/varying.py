"""Criteria that are judged by statistics although nothing they rest on is random."""

from calcdoc.model.model import Judged, Model
from calcdoc.problems import Finding, warning
from calcdoc.text.given import Given
from calcdoc.text.scan import shown


def nothing_random(model: Model) -> tuple[Finding, ...]:
    """Methods of statistics that come to the same as extremes: conditions are not random."""
    return tuple(
        warning(
            "nothing-random",
            f"nothing varies at random here: {shown(each.statement.id.name)} rests on no part with"
            " a tolerance",
            span,
            help="leave the method out, or state tolerances in inputs; conditions and biases are"
            " not random",
        )
        for each in model.criteria
        if isinstance(each, Judged)
        and (span := each.statement.clauses.by_span)
        and each.statement.clauses.by != "extremes"
        and not _random(model, each)
    )


def _random(model: Model, judged: Judged) -> bool:
    """Whether a part it rests on varies at random, in one of its cases at least."""
    rests = _rests_on(model, judged)
    points = {each.symbol.key: each.given for each in judged.statement.clauses.at}
    changed = [each.changes for each in model.cases if each.name in judged.cases]
    for key in rests:
        variable = model.variables[key]
        if variable.given is None or variable.kind == "condition":
            continue
        if key in points:
            if _spreads(points[key]):
                return True
            continue
        values = [variable.given, *(each[key] for each in changed if key in each)]
        if any(_spreads(each) if isinstance(each, Given) else True for each in values):
            return True
    return False


def _rests_on(model: Model, judged: Judged) -> frozenset[str]:
    """Keys of all quantities it rests on, near and far."""
    seen: set[str] = set()
    waiting = list(judged.depends_on)
    while waiting:
        key = waiting.pop()
        if key in model.variables and key not in seen:
            seen.add(key)
            waiting += model.variables[key].depends_on
    return frozenset(seen)


def _spreads(given: Given) -> bool:
    return given.parts.low < given.parts.high
