"""Evaluate a model: nominal, extremes, criteria and discharge times, all on one tape."""

from collections.abc import Iterable, Mapping
from typing import Final

import numpy as np

from calcdoc.analysis.compile import Compiled, Side, compile_model
from calcdoc.analysis.evaluation import (
    Band,
    Combination,
    Discharged,
    Evaluation,
    Judgement,
    Outcome,
    Stand,
)
from calcdoc.analysis.extremes import Extreme, Proof, Question, extremes
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.trouble import troubles
from calcdoc.frozen import Frozen
from calcdoc.model.model import Judged, Model
from calcdoc.problems import Finding
from calcdoc.text.statements import Inequality

EQUAL: Final = 1e-12
"""Share of the largest term below which a requirement counts as met with equality."""


class Box(Frozen, frozen=True):
    """Ranges of all input columns, shape (n_columns,) each, in coherent SI."""

    low: FloatArray
    nominal: FloatArray
    high: FloatArray


def evaluate_model(model: Model) -> tuple[Evaluation | None, tuple[Finding, ...]]:
    """Compute a model; None when something cannot be computed at nominal or within the band."""
    compiled = compile_model(model)
    boxes = _boxes(compiled, model)
    found = troubles(compiled, model, [(box.low, box.nominal, box.high) for box in boxes.values()],
                     [_targets(compiled, at) for at in boxes])  # fmt: skip
    if found:
        return None, found
    return _Evaluator(compiled, model, boxes).run(), ()


def _boxes(compiled: Compiled, model: Model) -> dict[int, Box]:
    """The band as declared (-1), and one box for each criterion at an operating point."""
    declared = Box(compiled.low, compiled.nominal, compiled.high)
    boxes = {-1: declared}
    for at, judged in enumerate(_judged(model)):
        clauses = judged.statement.clauses
        if not clauses.at:
            continue
        low, nominal, high = (
            each.copy() for each in (declared.low, declared.nominal, declared.high)
        )
        for point in clauses.at:
            column = compiled.columns[point.symbol.key]
            low[column], nominal[column], high[column] = point.given.si
        boxes[at] = Box(low, nominal, high)
    return boxes


def _judged(model: Model) -> list[Judged]:
    return [each for each in model.criteria if isinstance(each, Judged)]


def _targets(compiled: Compiled, criterion: int) -> list[int]:
    """What must be computable in a box: everything in the declared one, else the criterion."""
    if criterion >= 0:
        return [side.requirement for side in compiled.sides[criterion]]
    sides = [side.requirement for sides in compiled.sides for side in sides]
    times = [each for each in compiled.discharges if each is not None]
    return [*compiled.variables.values(), *sides, *times]


class _Evaluator:
    """Asks all questions at once and reads the answers off in order."""

    def __init__(self, compiled: Compiled, model: Model, boxes: Mapping[int, Box]) -> None:
        self.compiled, self.model, self.boxes = compiled, model, boxes
        self.keys = list(compiled.columns)
        self.questions: list[Question] = []

    def run(self) -> Evaluation:
        """All bands, judgements and discharge times."""
        band_at = {
            key: self._ask_band(at)
            for key, at in self.compiled.variables.items()
            if self.model.variables[key].given is None
        }
        side_at = [
            [self._ask(side.requirement, False, self._box(criterion)) for side in sides]
            for criterion, sides in enumerate(self.compiled.sides)
        ]
        time_at = [None if at is None else self._ask(at, True, self.boxes[-1])
                   for at in self.compiled.discharges]  # fmt: skip
        answers = extremes(self.compiled.tape, self.questions)
        governing = [min(sides, key=lambda at: answers[at].value) for sides in side_at]
        # One pass: the nominal point, then the governing point of every criterion.
        points = np.stack([self.compiled.nominal, *(answers[at].point for at in governing)], axis=1)
        computed = evaluate_points(self.compiled.tape, points)
        bands = {
            key: self._band(float(computed[at, 0]), answers, band_at[key])
            if key in band_at
            else self._given_band(key)
            for key, at in self.compiled.variables.items()
        }
        return Evaluation(
            self.model,
            bands,
            tuple(
                self._judge(judged, self.compiled.sides[number][side_at[number].index(at)],
                            answers[at], computed[:, number + 1])
                for number, (judged, at) in enumerate(
                    zip(_judged(self.model), governing, strict=True))
            ),
            tuple(self._discharged(at, answers, bands[each.voltage].greatest)
                  for at, each in zip(time_at, self.model.discharges, strict=True)),
        )  # fmt: skip

    def _box(self, criterion: int) -> Box:
        """The box a criterion is judged over."""
        box = self.boxes.get(criterion, self.boxes[-1])
        if _judged(self.model)[criterion].statement.clauses.at_nominal:
            return Box(box.nominal, box.nominal, box.nominal)
        return box

    def _ask(self, target: int, greatest: bool, box: Box) -> int:
        self.questions.append(Question(target, greatest, box.low, box.nominal, box.high))
        return len(self.questions) - 1

    def _ask_band(self, target: int) -> tuple[int, int]:
        box = self.boxes[-1]
        return self._ask(target, False, box), self._ask(target, True, box)

    def _band(self, nominal: float, answers: tuple[Extreme, ...], asked: tuple[int, int]) -> Band:
        least, greatest = (answers[at] for at in asked)
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

    def _judge(
        self, judged: Judged, side: Side, extreme: Extreme, computed: FloatArray
    ) -> Judgement:
        """A criterion at its governing point, where everything was computed already."""
        value, limit = float(computed[side.value]), float(computed[side.limit])
        slack = limit - value if side.relation[0] == "<" else value - limit
        tolerance = EQUAL * max(abs(value), abs(limit))
        requirement = extreme.value
        equal = abs(requirement) <= tolerance
        return Judgement(
            judged, side, value, limit,
            0.0 if abs(slack) <= tolerance else slack, 0.0 if equal else requirement, equal,
            _outcome(side, requirement, extreme.bound, tolerance),
            {**self._combination(extreme), **self._point(judged.statement, extreme)},
            {key: float(computed[self.compiled.variables[key]]) for key in judged.depends_on},
            extreme.proof, extreme.bound,
        )  # fmt: skip

    def _point(self, statement: Inequality, extreme: Extreme) -> Combination:
        """The quantities an operating point sets, whether they have a band or not."""
        keys = [point.symbol.key for point in statement.clauses.at]
        columns = self.compiled.columns
        return {
            key: Stand(float(extreme.point[columns[key]]), bool(extreme.interior[columns[key]]))
            for key in keys
        }

    def _discharged(
        self, at: int | None, answers: tuple[Extreme, ...], voltage: float
    ) -> Discharged:
        if at is None:
            return Discharged(voltage, None, {})
        return Discharged(voltage, answers[at].value, self._combination(answers[at]))


def _outcome(side: Side, requirement: float, bound: float, tolerance: float) -> Outcome:
    """Pass when it is proven to hold, fail when a point breaks it, else not decided."""
    strict = "=" not in side.relation

    def holds(amount: float) -> bool:
        return amount > tolerance if strict else amount >= -tolerance

    if not holds(requirement):
        return Outcome.FAIL
    slightly = 1e-9 * abs(requirement)
    return Outcome.PASS if holds(bound) or requirement - bound <= slightly else Outcome.NOT_DECIDED


def _weaker(*proofs: Proof) -> Proof:
    order: Iterable[Proof] = (Proof.SEARCHED, Proof.BOUNDED, Proof.EXACT)
    return next(each for each in order if each in proofs)
