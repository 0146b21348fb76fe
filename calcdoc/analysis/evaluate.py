"""Evaluate a model: nominal, extremes, criteria, cross-checks, discharge times, on one tape."""

from collections.abc import Mapping
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Check, Compiled, Side, compile_model
from calcdoc.analysis.evaluation import (
    Band,
    Combination,
    Crosschecked,
    Discharged,
    Evaluation,
    Judgement,
    Outcome,
    PutBack,
    Restated,
    Row,
    Sensitive,
    Stand,
)
from calcdoc.analysis.extremes import Extreme, Proof, Question, extremes
from calcdoc.analysis.looking_up import moves_apart
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.putting_back import put_back, running_away
from calcdoc.analysis.trouble import troubles
from calcdoc.frozen import replace
from calcdoc.model.model import Compared, Judged, Model
from calcdoc.problems import Finding, Mistake
from calcdoc.text.statements import Inequality

EQUAL: Final = 1e-12
"""Share of the largest term below which a requirement counts as met with equality."""
SLIGHTLY: Final = 1e-9
"""Relative gap between what was attained and what is proven that is no reason to doubt."""
_DECLARED: Final = -1
_WORST_FIRST: Final = (Outcome.FAIL, Outcome.NOT_DECIDED, Outcome.PASS)


def evaluate_model(model: Model) -> tuple[Evaluation | None, tuple[Finding, ...]]:
    """Compute a model; None when something cannot be computed at nominal or within the band."""
    try:
        compiled = compile_model(model)
    except Mistake as mistake:
        return None, (mistake.finding,)
    boxes = _boxes(compiled, model)
    wanted = [_targets(compiled, at) for at in boxes]
    judged = _judged(model)
    setters = [None if at == _DECLARED else judged[at].statement for at in boxes]
    found = troubles(compiled, model, list(boxes.values()), wanted, setters)
    if found:
        return None, found
    try:
        return _drawn(compiled, _Evaluator(compiled, model, boxes).run()), ()
    except Mistake as mistake:
        return None, (mistake.finding,)


def _drawn(compiled: Compiled, evaluation: Evaluation) -> Evaluation:
    """The evaluation with its figures."""
    if not evaluation.model.figures:
        return evaluation
    from calcdoc.analysis.picturing import with_figures  # noqa: PLC0415  (many designs have none)

    return with_figures(compiled, evaluation)


def _boxes(compiled: Compiled, model: Model) -> dict[int, Box]:
    """The band as declared, and one box for each criterion at an operating point, by number."""
    boxes = {_DECLARED: compiled.box}
    for at, judged in enumerate(_judged(model)):
        points = judged.statement.clauses.at
        if not points:
            continue
        box = compiled.box
        low, nominal, high = box.low.copy(), box.nominal.copy(), box.high.copy()
        for point in points:
            column = compiled.columns[point.symbol.key]
            low[column], nominal[column], high[column] = point.given.si
        boxes[at] = Box(low, nominal, high)
    return boxes


def _judged(model: Model) -> list[Judged]:
    return [each for each in model.criteria if isinstance(each, Judged)]


def _targets(compiled: Compiled, criterion: int) -> list[int]:
    """What must be computable in a box: everything in the declared one, else the criterion."""
    if criterion != _DECLARED:
        return [side.requirement for side in compiled.sides[criterion]]
    sides = [side.requirement for sides in compiled.sides for side in sides]
    checks = [check.difference for check in compiled.checks]
    times = [each for each in compiled.discharges if each is not None]
    elements = [at for each in compiled.series.values() for at in each.values()]
    return [*compiled.variables.values(), *elements, *sides, *checks, *times]


class _Evaluator:
    """Asks all questions at once and reads the answers off in order."""

    def __init__(self, compiled: Compiled, model: Model, boxes: Mapping[int, Box]) -> None:
        self.compiled, self.model, self.boxes = compiled, model, boxes
        self.keys = list(compiled.columns)
        self.questions: list[Question] = []
        self.answers: tuple[Extreme, ...] = ()
        self.back: Mapping[str, PutBack] = {}
        self.away: Mapping[str, frozenset[str]] = {}

    def run(self) -> Evaluation:
        """All bands, judgements, cross-checks and discharge times."""
        compiled, whole = self.compiled, self.boxes[_DECLARED]
        bands = {
            key: self._ask_both(at, whole)
            for key, at in compiled.variables.items()
            if self.model.variables[key].given is None
        }
        series = {
            key: {n: self._ask_both(at, whole) for n, at in elements.items()}
            for key, elements in compiled.series.items()
        }
        sides = [
            [self._ask(side.requirement, False, self._box(number)) for side in each]
            for number, each in enumerate(compiled.sides)
        ]
        checks = [self._ask_both(each.difference, whole) for each in compiled.checks]
        times = [None if at is None else self._ask(at, True, whole) for at in compiled.discharges]
        self.answers = tuple(
            replace(each, proof=_weaker(each.proof, Proof.BOUNDED))
            if moves_apart(compiled.looked, each.matters)
            else each
            for each in extremes(compiled.tape, self.questions)
        )
        back = put_back(compiled, self.model, self._points())
        self.back, self.away = back, running_away(self.model, back)
        nominal = evaluate_points(compiled.tape, whole.nominal[:, None])[:, 0]
        found = {
            key: self._band(float(nominal[at]), bands[key])
            if key in bands
            else self._given_band(key)
            for key, at in compiled.variables.items()
        }
        return Evaluation(
            self.model,
            found,
            {
                key: {n: self._band(float(nominal[compiled.series[key][n]]), asked)
                      for n, asked in elements.items()}
                for key, elements in series.items()
            },
            self._judgements(sides),
            tuple(
                self._crosscheck(compared, check, nominal, asked)
                for compared, check, asked in zip(
                    self.model.crosschecks, compiled.checks, checks, strict=True
                )
            ),
            compiled.chosen,
            back,
            tuple(
                self._discharged(at, found[each.voltage].magnitude)
                for at, each in zip(times, self.model.discharges, strict=True)
            ),
            compiled.looked,
            *self._restated(found),
        )  # fmt: skip

    def _restated(
        self, bands: Mapping[str, Band]
    ) -> tuple[tuple[Restated, ...], tuple[Sensitive, ...]]:
        model = self.model
        if not model.restated and not model.sensitivities:
            return (), ()
        from calcdoc.analysis import restating  # noqa: PLC0415  (few designs need it)

        known = restating.Known(model, bands, self.compiled.chosen)
        return (
            tuple(restating.restated(known, each) for each in model.restated),
            tuple(restating.sensitive(known, each) for each in model.sensitivities),
        )

    def _points(self) -> FloatArray:
        """The nominal point and every point that was found, shape (n_columns, n_points)."""
        points = [self.boxes[_DECLARED].nominal, *(each.point for each in self.answers)]
        # Many questions end at one point. (np.unique would load all of NumPy's masked arrays.)
        return np.stack(list({each.tobytes(): each for each in points}.values()), axis=1)

    def _box(self, criterion: int) -> Box:
        """The box a criterion is judged over."""
        box = self.boxes.get(criterion, self.boxes[_DECLARED])
        nominal = _judged(self.model)[criterion].statement.clauses.at_nominal
        return box.at_nominal if nominal else box

    def _ask(self, target: int, greatest: bool, box: Box) -> int:
        self.questions.append(Question(target, greatest, box.low, box.nominal, box.high))
        return len(self.questions) - 1

    def _ask_both(self, target: int, box: Box) -> tuple[int, int]:
        return self._ask(target, False, box), self._ask(target, True, box)

    def _band(self, nominal: float, asked: tuple[int, int]) -> Band:
        least, greatest = (self.answers[at] for at in asked)
        # Rounding may put an attained end a hair on the wrong side of the nominal value.
        return Band(
            nominal, min(least.value, nominal), max(greatest.value, nominal),
            self._combination(least), self._combination(greatest),
            _weaker(least.proof, greatest.proof), (least.bound, greatest.bound),
        )  # fmt: skip

    def _given_band(self, key: str) -> Band:
        """A given quantity is at its own limits: nothing to search."""
        given = self.model.variables[key].given
        assert given is not None
        least, nominal, greatest = given.si
        return Band(nominal, least, greatest, {}, {}, Proof.EXACT, (least, greatest))

    def _combination(self, extreme: Extreme) -> Combination:
        return {
            self.keys[column]: Stand(float(extreme.point[column]), bool(extreme.interior[column]))
            for column in np.flatnonzero(extreme.matters)
        }

    def _judgements(self, asked: list[list[int]]) -> tuple[Judgement, ...]:
        """Every criterion at the point of its least requirement, computed in one pass."""
        flat = [at for sides in asked for at in sides]
        if not flat:
            return ()
        points = np.stack([self.answers[at].point for at in flat], axis=1)
        computed = evaluate_points(self.compiled.tape, points)
        column = {at: computed[:, number] for number, at in enumerate(flat)}
        return tuple(
            self._judge(judged, sides, self.compiled.sides[number], column)
            for number, (judged, sides) in enumerate(zip(_judged(self.model), asked, strict=True))
        )

    def _judge(
        self,
        judged: Judged,
        asked: list[int],
        sides: tuple[Side, ...],
        column: Mapping[int, FloatArray],
    ) -> Judgement:
        rows = tuple(
            _row(each, self.answers[number], column[number])
            for each, number in zip(sides, asked, strict=True)
        )
        requirements = [self.answers[number].value for number in asked]
        which = _governing(judged, rows, requirements)
        at, side, row = asked[which], sides[which], rows[which]
        extreme, computed = self.answers[at], column[at]
        tolerance = EQUAL * max(abs(row.value), abs(row.limit))
        equal = abs(extreme.value) <= tolerance
        away = sorted({key for each in judged.depends_on for key in self.away[each]})
        return Judgement(
            judged, side, row.value, row.limit, row.slack,
            0.0 if equal else extreme.value, equal,
            self._outcome(row.outcome, away),
            {**self._combination(extreme), **self._set_by(judged.statement, extreme)},
            self._named(judged, side, computed),
            extreme.proof, extreme.bound,
            rows,
            tuple(away),
        )  # fmt: skip

    def _outcome(self, outcome: Outcome, away: list[str]) -> Outcome:
        """A criterion that rests on a loop fails when the loop runs away."""
        gains = [self.back[key].gain for key in away]
        if any(gain and gain.runs_away for gain in gains):
            return Outcome.FAIL
        return Outcome.NOT_DECIDED if away and outcome is Outcome.PASS else outcome

    def _named(self, judged: Judged, side: Side, computed: FloatArray) -> dict[str, float]:
        """Every quantity a criterion names, at its governing point; of a series its element."""
        compiled, found = self.compiled, {}
        for key in judged.depends_on:
            at = compiled.variables.get(key)
            if at is None and side.element is not None:
                at = compiled.series[key].get(side.element)
            if at is not None:
                found[key] = float(computed[at])
        return found

    def _set_by(self, statement: Inequality, extreme: Extreme) -> dict[str, Stand]:
        """The quantities an operating point sets, whether they have a band or not."""
        columns = self.compiled.columns
        return {
            key: Stand(float(extreme.point[columns[key]]), bool(extreme.interior[columns[key]]))
            for key in (point.symbol.key for point in statement.clauses.at)
        }

    def _crosscheck(
        self, compared: Compared, check: Check, nominal: FloatArray, asked: tuple[int, int]
    ) -> Crosschecked:
        """Agreement at nominal and at all extremes; the worst difference is kept."""
        least, greatest = (self.answers[at] for at in asked)
        form, allowed = compared.statement.form, compared.statement.allowed
        first, second = float(nominal[check.first]), float(nominal[check.second])
        tolerance = EQUAL * max(abs(first), abs(second))
        if form == "against":
            assert allowed is not None
            worst = max(least, greatest, key=lambda each: abs(each.value))
            most = float(allowed.unit.to_si(allowed.nominal))
            agrees = abs(worst.value) <= most * (1 + EQUAL)
        elif form == "not below":
            worst, agrees = least, least.value >= -tolerance
        else:
            worst, agrees = greatest, greatest.value <= tolerance
        return Crosschecked(
            compared, first, second, worst.value, agrees, self._combination(worst), worst.proof
        )

    def _discharged(self, at: int | None, voltage: float) -> Discharged:
        if at is None:
            return Discharged(voltage, None, {})
        return Discharged(voltage, self.answers[at].value, self._combination(self.answers[at]))


def _governing(judged: Judged, rows: tuple[Row, ...], requirements: list[float]) -> int:
    """The limit nearest to being broken: the worst verdict first, then the least distance.

    Elements of a series have limits of their own size, so shares of the limit compare them.
    """
    by_share = bool(judged.statement.clauses.index) and all(
        row.limit != 0 and not judged.typed.weight for row in rows
    )

    def distance(at: int) -> tuple[int, float]:
        size = abs(rows[at].limit) if by_share else 1.0
        return _WORST_FIRST.index(rows[at].outcome), requirements[at] / size

    return min(range(len(rows)), key=distance)


def _row(side: Side, extreme: Extreme, computed: FloatArray) -> Row:
    """Value, limit and outcome of one limit at the point that governs it."""
    value, limit = float(computed[side.value]), float(computed[side.limit])
    slack = limit - value if side.relation[0] == "<" else value - limit
    tolerance = EQUAL * max(abs(value), abs(limit))
    outcome = _outcome(side, extreme.value, extreme.bound, tolerance)
    slack = 0.0 if abs(slack) <= tolerance else slack
    return Row(side.element or 0, value, limit, slack, outcome)


def _outcome(side: Side, requirement: float, bound: float, tolerance: float) -> Outcome:
    """Pass when it is proven to hold, fail when a point breaks it, else not decided."""
    strict = "=" not in side.relation

    def holds(amount: float) -> bool:
        return amount > tolerance if strict else amount >= -tolerance

    if not holds(requirement):
        return Outcome.FAIL
    proven = holds(bound) or requirement - bound <= SLIGHTLY * abs(requirement)
    return Outcome.PASS if proven else Outcome.NOT_DECIDED


def _weaker(*proofs: Proof) -> Proof:
    order = (Proof.SEARCHED, Proof.BOUNDED, Proof.EXACT)
    return next(each for each in order if each in proofs)
