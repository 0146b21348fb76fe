"""Evaluate a model: nominal, extremes, cases, criteria, cross-checks, discharge, on one tape."""

from collections.abc import Mapping
from typing import Final

import numpy as np

from calcdoc.analysis import judging
from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled, Limits, compile_model
from calcdoc.analysis.evaluation import (
    AgainstMeasured,
    Band,
    CaseBands,
    Combination,
    Conclusion,
    Crosschecked,
    Discharged,
    Evaluation,
    Judgement,
    Outcome,
    PutBack,
    Restated,
    Sensitive,
    Stand,
    Unjudged,
)
from calcdoc.analysis.extremes import Extreme, Proof, Question, extremes
from calcdoc.analysis.judging import EQUAL, Found, Hearing
from calcdoc.analysis.looking_up import moves_apart
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.putting_back import put_back, running_away
from calcdoc.analysis.sides import Check, Side
from calcdoc.analysis.trouble import Setter, out_of_reach, troubles
from calcdoc.analysis.working import InCase
from calcdoc.frozen import Frozen, replace
from calcdoc.model.model import Compared, Discharge, Judged, Measured, Model
from calcdoc.problems import Finding, Mistake
from calcdoc.text.cases import NORMAL
from calcdoc.text.statements import Inequality, PointValue

Key = tuple[str, int]
"""``criterion`` or ``measurement`` with its number, or the declared band."""
_DECLARED: Final[Key] = ("declared", 0)
Ends = tuple[int, int]
"""Numbers of the two questions for a band."""


def evaluate_model(model: Model) -> tuple[Evaluation | None, tuple[Finding, ...]]:
    """Compute a model; None when something cannot be computed at nominal or within the band.

    What cannot be computed in another case than the normal one is not decided there.
    """
    try:
        compiled = compile_model(model)
    except Mistake as mistake:
        return None, (mistake.finding,)
    settings = _settings(compiled, model)
    found = troubles(
        compiled,
        model,
        [each.box for each in settings.values()],
        [_targets(compiled, key) for key in settings],
        [each.setter for each in settings.values()],
    )
    if found:
        return None, found
    try:
        return _Evaluator(compiled, model, settings).run(), ()
    except Mistake as mistake:
        return None, (mistake.finding,)


class Setting(Frozen, frozen=True):
    """A box of the input columns, and who sets values in it."""

    box: Box
    setter: Setter | None


def _settings(compiled: Compiled, model: Model) -> dict[Key, Setting]:
    """The band as declared, and a box for each criterion or measurement with values of its own."""
    settings: dict[Key, Setting] = {_DECLARED: Setting(compiled.box, None)}
    for at, judged in enumerate(_judged(model)):
        if points := judged.statement.clauses.at:
            setter = Setter("criterion", judged.statement.id.name, points)
            settings["criterion", at] = Setting(_set(compiled, points), setter)
    for at, measured in enumerate(model.measurements):
        setter = Setter("measurement", measured.statement.id.name, measured.statement.at)
        box = _set(compiled, setter.points)
        settings["measurement", at] = Setting(box, setter if setter.points else None)
    return settings


def _set(compiled: Compiled, points: tuple[PointValue, ...]) -> Box:
    """The declared box with some values set."""
    box = compiled.box
    low, nominal, high = box.low.copy(), box.nominal.copy(), box.high.copy()
    for point in points:
        column = compiled.columns[point.symbol.key]
        low[column], nominal[column], high[column] = point.given.si
    return Box(low, nominal, high)


def _judged(model: Model) -> list[Judged]:
    return [each for each in model.criteria if isinstance(each, Judged)]


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


class _Evaluator:
    """Asks all questions at once and reads the answers off in order."""

    def __init__(self, compiled: Compiled, model: Model, settings: Mapping[Key, Setting]) -> None:
        self.compiled, self.model, self.settings = compiled, model, settings
        self.declared = settings[_DECLARED].box
        self.keys = {column: key for key, column in compiled.columns.items()}
        self.questions: list[Question] = []
        self.answers: tuple[Extreme, ...] = ()
        self.back: Mapping[str, Mapping[str, PutBack]] = {}
        """By case."""
        self.away: Mapping[str, Mapping[str, frozenset[str]]] = {}
        """By case, for every quantity the loops it rests on that may run away."""
        self.no_root: Mapping[str, Mapping[str, str]] = {}
        """By case, quantities whose solution does not satisfy its relation, with the reason."""

    def run(self) -> Evaluation:
        """All bands, conclusions, cross-checks and discharge times."""
        compiled, whole = self.compiled, self.declared
        self._set_ceilings()
        asked_bands = {
            key: self._ask_both(at, whole)
            for key, at in compiled.variables.items()
            if self.model.variables[key].given is None
        }
        asked_series = {
            key: {n: self._ask_both(at, whole) for n, at in elements.items()}
            for key, elements in compiled.series.items()
        }
        cases = [_CaseAsked(self, case) for case in compiled.cases.values() if case.changes]
        heard = self._hearings()
        checks = [self._ask_both(each.difference, whole) for each in compiled.checks]
        measured = [
            self._ask_both(at, self.settings["measurement", number].box)
            for number, at in enumerate(compiled.measured)
        ]
        times = self._ask_times(cases)
        self._answer()
        nominal = self._values(whole.nominal[:, None])[:, 0]
        bands = {
            key: self.band(float(nominal[at]), asked_bands[key])
            if key in asked_bands
            else self._given_band(key)
            for key, at in compiled.variables.items()
        }
        series = {
            key: {n: self.band(float(nominal[compiled.series[key][n]]), asked)
                  for n, asked in elements.items()}
            for key, elements in asked_series.items()
        }  # fmt: skip
        in_case = {each.case.name: each.bands(nominal) for each in cases}
        return Evaluation(
            self.model,
            bands,
            series,
            in_case,
            tuple(self._concluded(judged, heard[at])
                  for at, judged in enumerate(_judged(self.model))),
            tuple(
                self._crosscheck(compared, check, nominal, asked)
                for compared, check, asked in zip(
                    self.model.crosschecks, compiled.checks, checks, strict=True
                )
            ),
            tuple(
                self._measured(number, each, asked)
                for number, (each, asked) in enumerate(
                    zip(self.model.measurements, measured, strict=True)
                )
            ),
            compiled.chosen,
            self.back[NORMAL],
            tuple(
                self._discharged(number, each, times, bands, in_case)
                for number, each in enumerate(self.model.discharges)
            ),
            compiled.looked,
            *self._restated(bands),
        )  # fmt: skip

    # --- asking --------------------------------------------------------------------------------

    def _set_ceilings(self) -> None:
        """Give every criterion with a condition a value that none of its requirements reaches."""
        sides = [
            (number, side)
            for number, in_case in enumerate(self.compiled.limits)
            for each in in_case.values()
            if isinstance(each, Limits)
            for side in each.sides
            if side.ceiling is not None
        ]
        if not sides:
            return
        questions = [_question(side.requirement, True, self._box(number)) for number, side in sides]
        for (_, side), most in zip(sides, extremes(self.compiled.tape, questions), strict=True):
            size = most.bound if np.isfinite(most.bound) else np.finfo(float).max / 4
            assert side.ceiling is not None
            for box in (each.box for each in self.settings.values()):
                for ends in (box.low, box.nominal, box.high):
                    ends[side.ceiling] = size + abs(size) + 1e-300

    def _hearings(self) -> list[dict[str, Hearing | Unjudged]]:
        """Every criterion in each of its cases, with the questions asked for it."""
        return [
            {name: self._hearing(number, judged, name, limits)
             for name, limits in self.compiled.limits[number].items()}
            for number, judged in enumerate(_judged(self.model))
        ]  # fmt: skip

    def _hearing(
        self, number: int, judged: Judged, case: str, limits: Limits | Finding
    ) -> Hearing | Unjudged:
        if isinstance(limits, Finding):
            return Unjudged(judged, case, Outcome.NOT_DECIDED, _said(limits))
        known, sides = limits.case, limits.sides
        box = self._box(number)
        if case != NORMAL:
            own = self.settings.get(("criterion", number))
            setter = own.setter if own else None
            targets = [side.target for side in sides]
            for reason in out_of_reach(self.compiled, self.model, box, targets, setter).values():
                return Unjudged(judged, case, Outcome.NOT_DECIDED, _said(reason))
        asked = tuple(self._ask(side.target, False, box) for side in sides)
        return Hearing(judged, case, known, sides, box, asked)

    def _ask_times(self, cases: list["_CaseAsked"]) -> dict[tuple[str, int], int]:
        """The greatest time to a safe voltage, by case and number of the stored charge."""
        whole = self.declared
        broken = {NORMAL: set[int](), **{each.case.name: each.out_of_reach for each in cases}}
        return {
            (name, number): self._ask(at, True, whole)
            for name, times in self.compiled.discharges.items()
            for number, at in times.items()
            if at not in broken[name]
        }

    def _box(self, criterion: int) -> Box:
        """The box a criterion is judged over."""
        own = self.settings.get(("criterion", criterion))
        box = own.box if own else self.declared
        nominal = _judged(self.model)[criterion].statement.clauses.at_nominal
        return box.at_nominal if nominal else box

    def _ask(self, target: int, greatest: bool, box: Box) -> int:
        self.questions.append(_question(target, greatest, box))
        return len(self.questions) - 1

    def _ask_both(self, target: int, box: Box) -> Ends:
        return self._ask(target, False, box), self._ask(target, True, box)

    def _answer(self) -> None:
        """Answer all questions, and put solutions back at every point found."""
        looked = self.compiled.looked
        self.answers = tuple(
            replace(each, proof=_weaker(each.proof, Proof.BOUNDED))
            if moves_apart(looked, each.matters)
            else each
            for each in extremes(self.compiled.tape, self.questions)
        )
        points = self._points()
        left = {
            name: put_back(self.compiled, self.model, case, points)
            for name, case in self.compiled.cases.items()
        }
        for found in left[NORMAL].values():
            if isinstance(found, Finding):
                raise Mistake(found)
        self.no_root = {
            name: {key: _said(each) for key, each in found.items() if isinstance(each, Finding)}
            for name, found in left.items()
        }
        good = {
            name: {key: each for key, each in found.items() if isinstance(each, PutBack)}
            for name, found in left.items()
        }
        self.back = {name: {**good[NORMAL], **found} for name, found in good.items()}
        self.away = {name: running_away(self.model, found) for name, found in self.back.items()}

    def _points(self) -> FloatArray:
        """The nominal point and every point that was found, shape (n_columns, n_points)."""
        points = [self.declared.nominal, *(each.point for each in self.answers)]
        # Many questions end at one point. (np.unique would load all of NumPy's masked arrays.)
        return np.stack(list({each.tobytes(): each for each in points}.values()), axis=1)

    def _values(self, points: FloatArray) -> FloatArray:
        whole = plain(self.compiled.tape, range(len(self.compiled.tape.instructions)))
        return whole.evaluate(points)

    # --- bands ---------------------------------------------------------------------------------

    def band(self, nominal: float, asked: Ends) -> Band:
        """A band from the answers to its two questions."""
        least, greatest = (self.answers[at] for at in asked)
        # Rounding may put an attained end a hair on the wrong side of the nominal value.
        return Band(
            nominal, min(least.value, nominal), max(greatest.value, nominal),
            self._combination(least), self._combination(greatest),
            _weaker(least.proof, greatest.proof), (least.bound, greatest.bound),
        )  # fmt: skip

    def ask_both(self, target: int) -> Ends:
        """Ask for the band of an instruction over the declared box."""
        return self._ask_both(target, self.declared)

    def _given_band(self, key: str) -> Band:
        """A given quantity is at its own limits: nothing to search."""
        given = self.model.variables[key].given
        assert given is not None
        least, nominal, greatest = given.si
        return Band(nominal, least, greatest, {}, {}, Proof.EXACT, (least, greatest))

    def _combination(self, extreme: Extreme) -> Combination:
        return {
            self.keys[column]: Stand(float(extreme.point[column]), bool(extreme.interior[column]))
            for column in map(int, np.flatnonzero(extreme.matters))
        }

    # --- criteria ------------------------------------------------------------------------------

    def _concluded(self, judged: Judged, heard: Mapping[str, Hearing | Unjudged]) -> Conclusion:
        return judging.concluded(
            judged,
            {name: self._judge(each) if isinstance(each, Hearing) else each
             for name, each in heard.items()},
        )  # fmt: skip

    def _judge(self, hearing: Hearing) -> Judgement | Unjudged:
        judged, case = hearing.judged, hearing.case
        reason = self._no_root(judged, case)
        if reason:
            return Unjudged(judged, case, Outcome.NOT_DECIDED, reason)
        found = self._found(hearing)
        if nothing := judging.no_ground(judged, case, found):
            return nothing
        rows = tuple(judging.row_of(each) for each in found)
        requirements = [each.extreme.value for each in found]
        which = judging.governing_row(judged, rows, requirements)
        away = self._away(judged, case)
        extreme = found[which].extreme
        made = judging.judgement(
            hearing, found, rows, requirements,
            {**self._combination(extreme), **self._set_by(judged.statement, extreme)},
            which,
            self._named(hearing, found[which]),
            away,
        )  # fmt: skip
        return replace(made, outcome=self._outcome(made.outcome, away, case))

    def _found(self, hearing: Hearing) -> list[Found]:
        """The extremes of all sides, with the values there."""
        wanted = {at for side in hearing.sides for at in _instructions(side)}
        known = hearing.known
        for key in hearing.judged.depends_on:
            if key in known.variables:
                wanted.add(known.variables[key])
            else:
                wanted.update(known.series[key].values())
        part = plain(self.compiled.tape, wanted)
        points = np.stack([self.answers[at].point for at in hearing.asked], axis=1)
        computed = part.evaluate(points)
        return [
            Found(side, self.answers[at], judging.values_at(part.row, computed[:, number]))
            for number, (side, at) in enumerate(zip(hearing.sides, hearing.asked, strict=True))
        ]

    def _no_root(self, judged: Judged, case: str) -> str:
        """Why a solution it rests on is no solution in this case."""
        bad = self.no_root[case]
        if not bad:
            return ""
        reached = self._reached(judged.depends_on)
        return next((why for key, why in bad.items() if key in reached), "")

    def _reached(self, keys: tuple[str, ...]) -> set[str]:
        reached: set[str] = set()
        waiting = list(keys)
        while waiting:
            key = waiting.pop()
            if key not in reached:
                reached.add(key)
                waiting.extend(self.model.variables[key].depends_on)
        return reached

    def _away(self, judged: Judged, case: str) -> tuple[str, ...]:
        return tuple(sorted({k for each in judged.depends_on for k in self.away[case][each]}))

    def _outcome(self, outcome: Outcome, away: tuple[str, ...], case: str) -> Outcome:
        """A criterion that rests on a loop fails when the loop runs away."""
        gains = [self.back[case][key].gain for key in away]
        if any(gain and gain.runs_away for gain in gains):
            return Outcome.FAIL
        return Outcome.NOT_DECIDED if away and outcome is Outcome.PASS else outcome

    def _named(self, hearing: Hearing, found: Found) -> dict[str, float]:
        """Every quantity a criterion names, at its governing point; of a series its element."""
        values = {}
        for key in hearing.judged.depends_on:
            at = hearing.known.variables.get(key)
            if at is None and found.side.element is not None:
                at = hearing.known.series[key].get(found.side.element)
            if at is not None:
                values[key] = found.computed[at]
        return values

    def _set_by(self, statement: Inequality, extreme: Extreme) -> dict[str, Stand]:
        """The quantities an operating point sets, whether they have a band or not."""
        columns = self.compiled.columns
        return {
            key: Stand(float(extreme.point[columns[key]]), bool(extreme.interior[columns[key]]))
            for key in (point.symbol.key for point in statement.clauses.at)
        }

    # --- cross-checks and stored charges --------------------------------------------------------

    def _crosscheck(
        self, compared: Compared, check: Check, nominal: FloatArray, asked: Ends
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

    def _measured(self, number: int, measured: Measured, asked: Ends) -> AgainstMeasured:
        """Agreement when the difference is within the root sum square of both bands.

        Of each band the side counts that faces the other value.
        """
        low, high = (self.answers[at] for at in asked)
        box, at = self.settings["measurement", number].box, self.compiled.measured[number]
        second = float(plain(self.compiled.tape, (at,)).evaluate(box.nominal[:, None])[-1, 0])
        least, first, greatest = measured.statement.given.si
        own, other = (first - least, high.value - second)
        if first < second:
            own, other = greatest - first, second - low.value
        allowed = float(np.hypot(own, max(other, 0.0)))
        agrees = abs(first - second) <= allowed + EQUAL * max(abs(first), abs(second))
        return AgainstMeasured(
            measured, first, second, first - second, allowed, agrees,
            low.value, high.value, _weaker(low.proof, high.proof),
        )  # fmt: skip

    def _discharged(
        self,
        number: int,
        discharge: Discharge,
        times: Mapping[tuple[str, int], int],
        bands: Mapping[str, Band],
        cases: Mapping[str, CaseBands],
    ) -> Discharged:
        """The greatest voltage and time over the normal and every other case."""
        voltages = [bands[discharge.voltage]]
        voltages += [
            each.bands[discharge.voltage]
            for each in cases.values()
            if discharge.voltage in each.bands
        ]
        voltage = max(each.magnitude for each in voltages)
        if discharge.resistance is None:
            return Discharged(voltage, None, {}, NORMAL, ())
        asked = {name: times[name, number] for name in self.compiled.cases
                 if (name, number) in times}  # fmt: skip
        worst = max(asked, key=lambda name: self.answers[asked[name]].value)
        answer = self.answers[asked[worst]]
        unknown = tuple(name for name in self.compiled.cases if name not in asked)
        return Discharged(voltage, answer.value, self._combination(answer), worst, unknown)

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


class _CaseAsked:
    """The quantities that one case moves, and the questions asked about them."""

    def __init__(self, evaluator: _Evaluator, case: InCase) -> None:
        self.evaluator, self.case = evaluator, case
        normal = evaluator.compiled.normal
        single = {k: at for k, at in case.variables.items() if at != normal.variables[k]}
        series = {k: at for k, at in case.series.items() if at != normal.series[k]}
        targets = [*single.values(), *(at for each in series.values() for at in each.values())]
        targets += evaluator.compiled.discharges[case.name].values()
        reasons = out_of_reach(evaluator.compiled, evaluator.model, evaluator.declared,
                               targets, None)  # fmt: skip
        self.out_of_reach = set(reasons)
        self.broken = {key: _said(each) for key, each in case.broken.items()}
        self.broken |= {k: _said(reasons[at]) for k, at in single.items() if at in reasons}
        self.broken |= {
            key: _said(reasons[at])
            for key, each in series.items()
            for at in each.values()
            if at in reasons
        }
        self.single = {
            key: (at, evaluator.ask_both(at))
            for key, at in single.items()
            if key not in self.broken
        }
        self.series = {
            key: {n: (at, evaluator.ask_both(at)) for n, at in each.items()}
            for key, each in series.items()
            if key not in self.broken
        }

    def bands(self, nominal: FloatArray) -> CaseBands:
        """The answers; ``nominal`` has the value of every instruction at the nominal point."""
        broken = {**self.broken, **self.evaluator.no_root[self.case.name]}
        return CaseBands(
            {
                key: self.evaluator.band(float(nominal[at]), asked)
                for key, (at, asked) in self.single.items()
                if key not in broken
            },
            {
                key: {n: self.evaluator.band(float(nominal[at]), asked)
                      for n, (at, asked) in each.items()}
                for key, each in self.series.items()
            },
            broken,
        )  # fmt: skip


def _question(target: int, greatest: bool, box: Box) -> Question:
    return Question(target, greatest, box.low, box.nominal, box.high)


def _instructions(side: Side) -> tuple[int, ...]:
    known = (side.value, side.limit, side.requirement)
    return known if side.when is None else (*known, side.when)


def _said(finding: Finding) -> str:
    """A finding as a reason, on one line."""
    return f"{finding.message} {finding.place.label}".rstrip()


def _weaker(*proofs: Proof) -> Proof:
    order = (Proof.SEARCHED, Proof.BOUNDED, Proof.EXACT)
    return next(each for each in order if each in proofs)
