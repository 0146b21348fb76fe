"""Criteria about criteria: one of several routes is enough, and failures that are accepted."""

from collections.abc import Callable, Iterable, Mapping
from typing import Final

from msgspec.structs import replace

from calcdoc.model.accepting import ended
from calcdoc.model.model import Accepted, Chosen, Model
from calcdoc.records import record as r
from calcdoc.text.statements import AnyOf

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
