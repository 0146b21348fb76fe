"""Evaluate a model: nominal, extremes, cases, criteria, cross-checks, discharge, on one tape."""

from collections.abc import Mapping
from typing import TYPE_CHECKING

from calcdoc.analysis.asking import DECLARED, Asker, Key, Room, given_band, judged_of, rooms
from calcdoc.analysis.case_bands import CaseAsked, ask_cases
from calcdoc.analysis.comparing import against_measured, crosschecked, discharged
from calcdoc.analysis.compile import Compiled, Limits, compile_model
from calcdoc.analysis.criteria import Criteria
from calcdoc.analysis.evaluation import Band, Evaluation, Progress, Restated, Sensitive
from calcdoc.analysis.points import evaluate_points
from calcdoc.analysis.putting_back import Solutions, put_back, solutions
from calcdoc.analysis.sides import Side
from calcdoc.analysis.trouble import troubles
from calcdoc.model.model import Model
from calcdoc.problems import Finding, Mistake
from calcdoc.text.cases import NORMAL

if TYPE_CHECKING:
    from calcdoc.analysis.draws import Setting


def evaluate_model(
    model: Model, progress: Progress | None = None
) -> tuple[Evaluation | None, tuple[Finding, ...]]:
    """Compute a model; None when something cannot be computed at nominal or within the band.

    What cannot be computed in another case than the normal one is not decided there.

    Args:
        model: The design.
        progress: Told how many draws of how many are done.
    """
    try:
        compiled = compile_model(model)
    except Mistake as mistake:
        return None, (mistake.finding,)
    found_rooms = rooms(compiled, model)
    found = troubles(
        compiled,
        model,
        [each.box for each in found_rooms.values()],
        [_targets(compiled, key) for key in found_rooms],
        [each.setter for each in found_rooms.values()],
    )
    if found:
        return None, found
    try:
        return _drawn(compiled, _evaluated(compiled, model, found_rooms, progress)), ()
    except Mistake as mistake:
        return None, (mistake.finding,)


def _drawn(compiled: Compiled, evaluation: Evaluation) -> Evaluation:
    """The evaluation with its figures."""
    if not evaluation.model.figures:
        return evaluation
    from calcdoc.analysis.picturing import with_figures  # noqa: PLC0415  (many designs have none)

    return with_figures(compiled, evaluation)


def _targets(compiled: Compiled, key: Key) -> list[int]:
    """What must be computable in a box: in the declared one everything that is normal.

    A criterion that is judged in other cases only need not be computable in the normal one.
    """
    kind, at = key
    if kind == "criterion":
        return [side.target for side in _normal_sides(compiled.limits[at])]
    if kind == "measurement":
        return [compiled.measured[at]]
    sides = [side.target for each in compiled.limits for side in _normal_sides(each)]
    checks = [check.difference for check in compiled.checks]
    times = compiled.discharges[NORMAL].values()
    elements = [at for each in compiled.series.values() for at in each.values()]
    return [*compiled.variables.values(), *elements, *sides, *checks, *times]


def _normal_sides(in_case: Mapping[str, Limits | Finding]) -> tuple[Side, ...]:
    limits = in_case.get(NORMAL)
    return limits.sides if isinstance(limits, Limits) else ()


def _evaluated(
    compiled: Compiled, model: Model, found_rooms: Mapping[Key, Room], progress: Progress | None
) -> Evaluation:
    """Ask all questions at once and read the answers off in order.

    Raises:
        Mistake: when a solution does not satisfy its relation, or a restatement cannot be made.
    """
    asker = Asker(compiled, found_rooms)
    criteria = Criteria(asker, model)  # first, as it may set values of the boxes
    asked = {
        key: asker.ask_both(at)
        for key, at in compiled.variables.items()
        if model.variables[key].given is None
    }
    asked_series = {
        key: {n: asker.ask_both(at) for n, at in elements.items()}
        for key, elements in compiled.series.items()
    }
    cases = ask_cases(asker, model)
    checks = [asker.ask_both(each.difference) for each in compiled.checks]
    measured = [
        asker.ask_both(at, found_rooms["measurement", number].box)
        for number, at in enumerate(compiled.measured)
    ]
    times = _ask_times(asker, model, cases)
    asker.answer()
    solved = _solved(asker, model)
    nominal = evaluate_points(compiled.tape, found_rooms[DECLARED].box.nominal[:, None])[:, 0]
    bands = {
        key: asker.band(float(nominal[at]), asked[key]) if key in asked else _given(model, key)
        for key, at in compiled.variables.items()
    }
    in_case = {each.case.name: each.bands(nominal, solved[each.case.name]) for each in cases}
    concluded = criteria.concluded(solved, progress)
    limits_at = len(concluded) - len(model.limits)
    return Evaluation(
        model,
        bands,
        {
            key: {n: asker.band(float(nominal[compiled.series[key][n]]), ends)
                  for n, ends in elements.items()}
            for key, elements in asked_series.items()
        },
        in_case,
        concluded[:limits_at],
        concluded[limits_at:],
        tuple(
            crosschecked(asker, compared, check, nominal, ends)
            for compared, check, ends in zip(
                model.crosschecks, compiled.checks, checks, strict=True
            )
        ),
        tuple(
            against_measured(asker, number, each, ends)
            for number, (each, ends) in enumerate(zip(model.measurements, measured, strict=True))
        ),
        compiled.chosen,
        solved[NORMAL].back,
        tuple(
            discharged(asker, each, time, bands, in_case)
            for each, time in zip(model.discharges, times, strict=True)
        ),
        compiled.looked,
        *_restated(model, bands, compiled),
        _setting(model),
    )  # fmt: skip


def _setting(model: Model) -> "Setting | None":
    """How parts are drawn; None when no criterion is judged by sampling."""
    if not any(each.statement.clauses.by == "sampling" for each in judged_of(model)):
        return None
    from calcdoc.analysis.statistical import setting_of  # noqa: PLC0415  (many designs need none)

    return setting_of(model.document.title)


def _given(model: Model, key: str) -> Band:
    given = model.variables[key].given
    assert given is not None
    return given_band(given)


def _ask_times(asker: Asker, model: Model, cases: list[CaseAsked]) -> list[dict[str, int]]:
    """For every stored charge, by case, the question for its greatest time to a safe voltage."""
    broken = {each.case.name: each.out_of_reach for each in cases}
    return [
        {
            name: asker.ask(times[number], True, asker.declared)
            for name, times in asker.compiled.discharges.items()
            if number in times and times[number] not in broken.get(name, ())
        }
        for number in range(len(model.discharges))
    ]


def _solved(asker: Asker, model: Model) -> dict[str, Solutions]:
    """Put solutions back at every point found, by case.

    Raises:
        Mistake: when one does not satisfy its relation in the normal case.
    """
    if not any(case.relations for case in asker.compiled.cases.values()):
        return dict.fromkeys(asker.compiled.cases, solutions(model, {}, {}))
    points = asker.points()
    left = {
        name: put_back(asker.compiled, model, case, points, asker.declared)
        for name, case in asker.compiled.cases.items()
    }
    for found in left[NORMAL].values():
        if isinstance(found, Finding):
            raise Mistake(found)
    normal = solutions(model, {}, left[NORMAL])
    return {
        name: solutions(model, normal.back, found) if found else normal
        for name, found in left.items()
    }


def _restated(
    model: Model, bands: Mapping[str, Band], compiled: Compiled
) -> tuple[tuple[Restated, ...], tuple[Sensitive, ...]]:
    if not model.restated and not model.sensitivities:
        return (), ()
    from calcdoc.analysis import restating  # noqa: PLC0415  (few designs need it)

    known = restating.Known(model, bands, compiled.chosen)
    return (
        tuple(restating.restated(known, each) for each in model.restated),
        tuple(restating.sensitive(known, each) for each in model.sensitivities),
    )
