"""Criteria with value, limit, margin and verdict at their governing point."""

from calcdoc.analysis.evaluation import Conclusion, Judgement, Outcome, Row, Unjudged
from calcdoc.analysis.extremes import Proof
from calcdoc.frozen import replace
from calcdoc.model.accepting import key_of
from calcdoc.model.model import Judged, Typed
from calcdoc.records import record as r
from calcdoc.records.accepting import accepted, routes
from calcdoc.records.looked import unverified
from calcdoc.records.naming import Naming
from calcdoc.records.numbers import Numbers
from calcdoc.records.rounding import apart, downward, stored
from calcdoc.records.substitute import substituted
from calcdoc.records.values import difference, with_unit
from calcdoc.text import literal
from calcdoc.text.cases import NORMAL
from calcdoc.text.names import fold
from calcdoc.text.nodes import Element, Group, Name, Node, Quantity
from calcdoc.text.statements import AnyOf, Inequality, Uncalculated
from calcdoc.text.unparse import unparse
from calcdoc.units import PLAIN, Unit
from calcdoc.units.choose import choose_unit

_PER_CENT = 100


def criteria(numbers: Numbers, naming: Naming, today: str) -> tuple[r.Criterion, ...]:
    """Every criterion of the record, in the author's order.

    ``today`` counts for acceptances where the document has no date.
    """
    conclusions = {each.judged.statement.id.key: each for each in numbers.evaluation.conclusions}
    made: dict[str, r.Criterion] = {}
    for each in numbers.model.criteria:
        if isinstance(each, Judged):
            key = each.statement.id.key
            made[key] = calculated(numbers, naming, conclusions[key])
        elif isinstance(each, Uncalculated):
            made[each.id.key] = _uncalculated(naming, each)
    made |= routes(numbers.model, made, lambda statement: _blank(naming, statement))
    made |= accepted(numbers.model, made, today)
    return tuple(made[key_of(each)] for each in numbers.model.criteria)


def _uncalculated(naming: Naming, statement: Uncalculated) -> r.Criterion:
    method = {"by test": "test", "by inspection": "inspection"}.get(statement.verdict, "none")
    return replace(
        _blank(naming, statement),
        text=statement.text,
        method=method,
        verdict=statement.verdict,
        reason=statement.text if method == "none" else "",
    )


def _blank(naming: Naming, statement: Inequality | Uncalculated | AnyOf) -> r.Criterion:
    """A criterion of which nothing is computed."""
    return r.Criterion(
        id=statement.id.name,
        line=naming.lines.get(statement.id.key, ""),
        text="",
        method="",
        value=None,
        limit=None,
        unit="",
        relation="",
        margin=None,
        margin_abs=None,
        verdict="",
        accepted=None,
        case="",
        governing={},
        by_case={},
        route_of="",
        rows=(),
        interval=None,
        standard_error=None,
        share=None,
        contributions=(),
        unverified=(),
        description=statement.description,
        basis=statement.basis.text,
        reason="",
        clauses="",
        substitution="",
        value_text="",
        limit_text="",
        margin_text="",
        remark="",
        statistics=(),
        proof="",
    )


def calculated(numbers: Numbers, naming: Naming, conclusion: Conclusion) -> r.Criterion:
    """A calculated criterion, or a limit of a method, which has no line of its own."""
    statement, governing = conclusion.judged.statement, conclusion.governing
    judged = [each for each in conclusion.in_case.values() if isinstance(each, Judgement)]
    unit = (
        _unit(numbers, governing if isinstance(governing, Judgement) else judged[0])
        if judged
        else PLAIN
    )
    made = replace(
        _blank(naming, statement),
        text=_inequality(statement),
        method=_method(statement),
        unit=unit.text,
        verdict=conclusion.outcome.value,
        case=governing.case,
        by_case={name: _in_case(numbers, each, unit) for name, each in conclusion.in_case.items()},
        unverified=unverified(numbers.evaluation, conclusion.judged),
        clauses=statement.clauses.text,
    )
    if isinstance(governing, Unjudged):
        return replace(made, reason=_in_words(governing))
    return _with_numbers(numbers, made, governing, unit)


def _in_words(unjudged: Unjudged) -> str:
    """Why there is nothing to compare, and where."""
    if unjudged.case == NORMAL:
        return unjudged.reason
    return f"in {unjudged.case}: {unjudged.reason}"


def _in_case(numbers: Numbers, judgement: Judgement | Unjudged, unit: Unit) -> r.CriterionCase:
    """A criterion in one case, in the unit of the criterion."""
    if isinstance(judgement, Unjudged):
        return r.CriterionCase(
            value=None,
            limit=None,
            margin=None,
            margin_abs=None,
            verdict=judgement.outcome.value,
            margin_text="",
            accepted=None,
            reason=judgement.reason,
        )
    share = _share(judgement, judgement)
    return r.CriterionCase(
        value=stored(unit.from_si(judgement.value)),
        limit=stored(unit.from_si(judgement.limit)),
        margin=None if share is None else stored(share),
        margin_abs=stored(unit.difference_from_si(judgement.slack)),
        verdict=judgement.outcome.value,
        margin_text=_margin_text(judgement, unit, share),
        accepted=None,
        reason=_reason(numbers, judgement, unit),
    )


def _with_numbers(
    numbers: Numbers, made: r.Criterion, judgement: Judgement, unit: Unit
) -> r.Criterion:
    """The criterion with the numbers of its governing point."""
    value, limit = stored(unit.from_si(judgement.value)), stored(unit.from_si(judgement.limit))
    shown, bound = apart(value, limit, numbers.digits)
    share = _share(judgement, judgement)
    by_numbers = replace(
        made,
        value=value,
        limit=limit,
        relation=judgement.side.relation,
        margin=None if share is None else stored(share),
        margin_abs=stored(unit.difference_from_si(judgement.slack)),
        governing=_element(judgement) | numbers.combination(judgement.governing),
        rows=tuple(_row(numbers, judgement, unit, row) for row in judgement.rows)
        if judgement.judged.statement.clauses.index
        else (),
        reason=_reason(numbers, judgement, unit),
        substitution=_substitution(numbers, judgement),
        value_text=with_unit(shown, unit),
        limit_text=with_unit(bound, unit),
        margin_text=_margin_text(judgement, unit, share),
        remark=_remark(judgement, unit, share),
        proof=judgement.proof.value,
    )
    if judgement.statistics is None:
        return by_numbers
    from calcdoc.records.statistics import with_statistics  # noqa: PLC0415  (many need none)

    return with_statistics(numbers, by_numbers, judgement, unit)


def _element(judgement: Judgement) -> dict[str, str]:
    """The element that governs a criterion over a series, as in ``n 9``."""
    index, element = judgement.judged.statement.clauses.index, judgement.side.element
    return {} if index is None else {index.name.name: str(element)}


def _row(numbers: Numbers, judgement: Judgement, unit: Unit, row: Row) -> r.CriterionRow:
    """One element of a criterion over a series."""
    value, limit = stored(unit.from_si(row.value)), stored(unit.from_si(row.limit))
    shown, bound = apart(value, limit, numbers.digits)
    share = _share(judgement, row)
    return r.CriterionRow(
        index=row.element,
        value=value,
        limit=limit,
        margin=None if share is None else stored(share),
        verdict=row.outcome.value,
        value_text=with_unit(shown, unit),
        limit_text=with_unit(bound, unit),
        margin_text=_difference(row.slack, unit)
        if share is None
        else f"{downward(share * _PER_CENT)} %",
    )


def _inequality(statement: Inequality) -> str:
    first, *rest = (unparse(each) for each in statement.operands)
    return first + "".join(
        f" {sign} {side}" for sign, side in zip(statement.operators, rest, strict=True)
    )


def _method(statement: Inequality) -> str:
    if statement.clauses.by != "extremes":
        return statement.clauses.by
    if statement.clauses.at_nominal:
        return "nominal"
    return "point" if statement.clauses.at else "extremes"


def _unit(numbers: Numbers, judgement: Judgement) -> Unit:
    """The unit of the value's symbol, else of a number in the limit, else a chosen one."""
    for tree in (judgement.side.value_tree, judgement.side.limit_tree):
        bare = _bare(tree)
        if isinstance(bare, Name | Element) and fold(bare.name) in numbers.units:
            return numbers.units[fold(bare.name)]
        if isinstance(bare, Quantity):
            return literal.resolve(bare.unit)
    typed: Typed = judgement.judged.typed
    return choose_unit(
        typed.dimension, judgement.value or judgement.limit, celsius=bool(typed.weight)
    )


def _bare(tree: Node) -> Node:
    while isinstance(tree, Group):
        tree = tree.inner
    return tree


def _share(judgement: Judgement, at: Judgement | Row) -> float | None:
    """Margin as a share of the limit; None where the limit is zero or a temperature."""
    if at.limit == 0 or judgement.judged.typed.weight:
        return None
    return at.slack / abs(at.limit)


def _substitution(numbers: Numbers, judgement: Judgement) -> str:
    """The value side with numbers at the governing point, when it is more than one symbol."""
    tree = judgement.side.value_tree
    if isinstance(_bare(tree), Name | Element | Quantity):
        return ""

    def value_of(node: Name | Element) -> str | None:
        key = fold(node.name)
        return numbers.at(key, judgement.values[key]) if key in judgement.values else None

    return substituted(tree, value_of)


def _margin_text(judgement: Judgement, unit: Unit, share: float | None) -> str:
    """Two digits, rounded towards less margin."""
    if share is not None:
        return f"{downward(share * _PER_CENT)} %"
    return _difference(judgement.slack, unit)


def _difference(si: float, unit: Unit) -> str:
    number = downward(unit.difference_from_si(si))
    return f"{number} K" if unit.celsius else with_unit(number, unit)


def _remark(judgement: Judgement, unit: Unit, share: float | None) -> str:
    margin = judgement.judged.statement.clauses.margin
    if judgement.away and judgement.outcome is Outcome.FAIL:
        return "thermal runaway"
    if judgement.outcome is Outcome.FAIL:
        short = _difference(judgement.slack, unit).removeprefix("-")
        if judgement.slack > 0:
            return f"inside the limit by {short}, but not with the margin asked for"
        if judgement.slack == 0:
            return "equal to the limit"
        of_limit = (
            "" if share is None else f" ({_margin_text(judgement, unit, share)} of the limit)"
        )
        return f"short by {short}{of_limit}"
    if judgement.equal:
        return "equal to the limit with its margin" if margin else "equal to the limit"
    if judgement.proof is Proof.SEARCHED and judgement.statistics is None:
        return "the value was searched: it may lie a little nearer to the limit, not beyond it"
    return _other_side(judgement, share)


def _other_side(judgement: Judgement, share: float | None) -> str:
    """The side farther away says its margin when that is the smaller share of its limit."""
    if share is None or judgement.judged.statement.clauses.index:
        return ""
    others = [_share(judgement, row) for row in judgement.rows]
    least = min((each for each in others if each is not None), default=share)
    return f"to the other limit {downward(least * _PER_CENT)} %" if least < share else ""


def _reason(numbers: Numbers, judgement: Judgement, unit: Unit) -> str:
    if judgement.away:
        names = ", ".join(numbers.model.variables[key].symbol for key in judgement.away)
        if judgement.outcome is Outcome.FAIL:
            return f"it rests on {names}, which runs away: the loop gain reaches one"
        return f"it rests on {names}, whose loop gain is not proven to stay below one"
    digits = numbers.digits
    if judgement.outcome is not Outcome.NOT_DECIDED or judgement.statistics:
        return ""
    attained = difference(judgement.requirement, unit, digits)
    if judgement.bound == float("-inf"):
        return f"the least margin found by search is {attained}; no bound on it could be proven"
    proven = difference(judgement.bound, unit, digits)
    return f"the least margin found by search is {attained}; proven is only {proven}"
