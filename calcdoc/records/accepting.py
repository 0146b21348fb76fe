"""Criteria about criteria: one of several routes is enough, and failures that are accepted."""

from collections.abc import Callable, Iterable, Mapping
from typing import Final

from msgspec.structs import replace

from calcdoc.analysis.evaluation import Conclusion, Evaluation
from calcdoc.model.accepting import ended
from calcdoc.model.model import Accepted, Chosen, Model
from calcdoc.problems import Finding, warning
from calcdoc.records import record as r
from calcdoc.text.scan import shown
from calcdoc.text.statements import AnyOf, Uncalculated

_BEST_FIRST: Final = (
    "pass",
    "not decided",
    "by test",
    "by inspection",
    "fail",
    "not applicable",
)
"""The verdict of several routes is that of the best one: what may still pass comes before what
fails."""


def routes(
    model: Model, made: Mapping[str, r.Criterion], blank: Callable[[AnyOf], r.Criterion]
) -> dict[str, r.Criterion]:
    """Every ``any of`` with its verdict, and its members marked as its routes, by key."""
    found: dict[str, r.Criterion] = {}
    for each in model.criteria:
        if isinstance(each, Chosen):
            members = [made[key] for key in each.members]
            found[each.statement.id.key] = _any_of(blank(each.statement), each.statement, members)
            for key in each.members:
                found[key] = replace(found.get(key, made[key]), route_of=each.statement.id.name)
    return found


def _any_of(
    criterion: r.Criterion, statement: AnyOf, members: Iterable[r.Criterion]
) -> r.Criterion:
    by_verdict: dict[str, list[r.Criterion]] = {}
    for each in members:
        by_verdict.setdefault(each.verdict, []).append(each)
    best = next(verdict for verdict in _BEST_FIRST if verdict in by_verdict)
    names = ", ".join(each.id for each in by_verdict[best])
    said = "; ".join(
        f"{', '.join(each.id for each in by_verdict[verdict])} {verdict}"
        for verdict in _BEST_FIRST
        if verdict in by_verdict
    )
    # What one verified route shows needs no other.
    unverified = min((each.unverified for each in by_verdict[best]), key=len)
    return replace(
        criterion,
        text=statement.text,
        method="any of",
        verdict=best,
        case="normal",
        remark=f"met by {names}" if best == "pass" else "",
        reason="" if best == "pass" else said,
        unverified=unverified,
    )


def accepted(model: Model, made: Mapping[str, r.Criterion], today: str) -> dict[str, r.Criterion]:
    """Failing criteria whose failure is accepted in every case in which they fail, by key.

    One with a case that is not decided is not among them.
    """
    found: dict[str, r.Criterion] = {}
    for each in model.acceptances:
        criterion = found.get(each.criterion, made[each.criterion])
        if not ended(model, each, today):
            found[each.criterion] = _accepted(criterion, each)
    return found


def _accepted(criterion: r.Criterion, acceptance: Accepted) -> r.Criterion:
    text = _text(acceptance)
    by_case = {
        name: replace(each, accepted=text)
        if each.verdict == "fail" and (not acceptance.cases or name in acceptance.cases)
        else each
        for name, each in criterion.by_case.items()
    }
    failing = [each for each in by_case.values() if each.verdict == "fail"]
    # A case that is not decided may fail too, and nobody has accepted that.
    decided = all(each.verdict != "not decided" for each in by_case.values())
    whole = criterion.verdict == "fail" and decided and all(each.accepted for each in failing)
    if not by_case:  # several routes have no cases of their own
        whole = criterion.verdict == "fail" and not acceptance.cases
    texts = dict.fromkeys(each.accepted for each in failing if each.accepted)
    said = "; ".join(texts) if texts else text
    return replace(criterion, by_case=by_case, accepted=said if whole else None)


def _text(acceptance: Accepted) -> str:
    """Reason, basis and last day of an acceptance."""
    statement = acceptance.statement
    basis = f" {statement.basis.text}" if statement.basis.text else ""
    where = f" in {', '.join(acceptance.cases)}" if acceptance.cases else ""
    return f"{statement.reason}{where},{basis} until {statement.until}"


# --- acceptances of nothing -------------------------------------------------------------------

_MAY_FAIL: Final = ("fail", "not decided")
"""Verdicts that an acceptance can be for; what is not decided may fail."""


def unused(evaluation: Evaluation, today: str = "") -> tuple[Finding, ...]:
    """Acceptances in which nothing that counts fails: maybe of another criterion or case."""
    model = evaluation.model
    concluded = {each.judged.statement.id.key: each for each in evaluation.conclusions}
    routes_of = {each.statement.id.key: each for each in model.criteria if isinstance(each, Chosen)}
    findings = []
    for each in model.acceptances:
        if ended(model, each, today):
            continue  # which has its own warning
        of = [any_.statement for any_ in routes_of.values() if each.criterion in any_.members]
        if each.criterion in routes_of:
            said = _any_of_unused(each, _verdicts(routes_of[each.criterion], model, concluded))
        elif of:
            label = each.statement.criterion
            message = f"{shown(label.name)} is a route of {of[0].id.name}, it does not count alone"
            said = message, f"accept {of[0].id.name}, when none of its routes passes"
        else:
            said = _calculated_unused(each, concluded[each.criterion])
        if said:
            message, advice = said
            at = each.statement.criterion.span
            findings.append(warning("acceptance-unused", message, at, help=advice))
    return tuple(findings)


def _verdicts(chosen: Chosen, model: Model, concluded: Mapping[str, Conclusion]) -> tuple[str, ...]:
    """The verdict of each route."""
    others = {each.id.key: each for each in model.criteria if isinstance(each, Uncalculated)}
    return tuple(
        concluded[key].outcome.value if key in concluded else others[key].verdict
        for key in chosen.members
    )


def _any_of_unused(accepted: Accepted, verdicts: Iterable[str]) -> tuple[str, str] | None:
    best = min(verdicts, key=_BEST_FIRST.index)
    label = accepted.statement.criterion
    if best not in _MAY_FAIL:
        return f"{shown(label.name)} does not fail ({best})", "remove the line"
    if accepted.cases:
        return f"{shown(label.name)} is not judged case by case", "leave `in` and the cases out"
    return None


def _calculated_unused(accepted: Accepted, conclusion: Conclusion) -> tuple[str, str] | None:
    inside = {name: each.outcome.value for name, each in conclusion.in_case.items()}
    asked = [inside[name] for name in accepted.cases or inside]
    if any(each in _MAY_FAIL for each in asked):
        return None
    name = shown(accepted.statement.criterion.name)
    failing = ", ".join(case for case, verdict in inside.items() if verdict == "fail")
    if accepted.cases and failing:
        where = ", ".join(accepted.cases)
        return (
            f"{name} does not fail in {where}",
            f"it fails in {failing}; remove the line or correct it",
        )
    return f"{name} does not fail ({conclusion.outcome.value})", "remove the line"
