"""Methods as the record shows them: where they come from, and whether they are valid here."""

from collections.abc import Iterator

from calcdoc.analysis.evaluation import Conclusion, Evaluation
from calcdoc.problems import Finding, warning
from calcdoc.records import record as r
from calcdoc.records.criteria import calculated
from calcdoc.records.naming import Naming
from calcdoc.records.numbers import Numbers
from calcdoc.text.cases import NORMAL
from calcdoc.text.statements import Applied

WITHIN, OUTSIDE, OPEN = "within", "outside", "not decided"
_VERDICTS = {"pass": WITHIN, "fail": OUTSIDE, "not applicable": WITHIN}


def applied_methods(numbers: Numbers, naming: Naming) -> tuple[r.AppliedMethod, ...]:
    """Every method a design applies, in the author's order."""
    concluded = {each.judged.statement.id.key: each for each in numbers.evaluation.validity}
    return tuple(
        _applied(numbers, naming, each, concluded) for each in numbers.model.document.applied
    )


def outside_validity(evaluation: Evaluation) -> tuple[Finding, ...]:
    """A warning for every method that is applied outside its limits of validity."""
    if not evaluation.validity:
        return ()
    numbers = Numbers(evaluation, evaluation.model.document.title.digits)
    spans = {each.name.name: each.name.span for each in evaluation.model.document.applied}
    return tuple(
        warning(
            "outside-validity",
            _said(made),
            spans[made.name],
            help="apply it where it is valid, or judge by other means what rests on it",
        )
        for made in _doubtful(numbers)
    )


def outside_notices(numbers: Numbers) -> tuple[str, ...]:
    """The same as sentences of the record."""
    return tuple(f"{_said(made)}: what rests on it is not valid" for made in _doubtful(numbers))


def _doubtful(numbers: Numbers) -> Iterator[r.AppliedMethod]:
    naming = Naming({}, {}, 0, {})
    for made in applied_methods(numbers, naming):
        if made.verdict != WITHIN:
            yield made


def _said(made: r.AppliedMethod) -> str:
    wrong = [each for each in made.limits if each.verdict == made.verdict]
    which = "; ".join(limit_in_words(each) for each in wrong)
    if made.verdict == OUTSIDE:
        return f"{made.method} as {made.name} is applied outside its limits of validity: {which}"
    return f"{made.method} as {made.name} may be outside its limits of validity: {which}"


def limit_in_words(limit: r.MethodLimit) -> str:
    """A limit that is not met, with what was found."""
    where = f" in {limit.case}" if limit.case != NORMAL else ""
    if limit.verdict == OUTSIDE and limit.value_text:
        found = f"{limit.value_text} against {limit.limit_text}"
        return f"{limit.text} does not hold{where} ({found})"
    why = f" ({limit.reason})" if limit.reason else ""
    return f"{limit.text} is not decided{where}{why}"


def _applied(
    numbers: Numbers, naming: Naming, applied: Applied, concluded: dict[str, Conclusion]
) -> r.AppliedMethod:
    limits = tuple(_limit(numbers, naming, concluded[each.id.key]) for each in applied.limits)
    verdicts = {each.verdict for each in limits}
    symbols = {key: each.symbol for key, each in numbers.model.variables.items()}
    return r.AppliedMethod(
        name=applied.name.name,
        method=applied.method,
        title=applied.title,
        revision=applied.revision,
        verdict=next((each for each in (OUTSIDE, OPEN) if each in verdicts), WITHIN),
        limits=limits,
        gives=tuple(symbol for key, symbol in symbols.items() if key in applied.gives),
        defaults=tuple(symbol for key, symbol in symbols.items() if key in applied.defaults),
    )


def _limit(numbers: Numbers, naming: Naming, conclusion: Conclusion) -> r.MethodLimit:
    made = calculated(numbers, naming, conclusion)
    return r.MethodLimit(
        text=made.text,
        verdict=_VERDICTS.get(made.verdict, OPEN),
        case=made.case,
        value_text=made.value_text,
        limit_text=made.limit_text,
        at=made.governing,
        description=made.description,
        basis=made.basis,
        reason=made.reason,
    )
