"""Criteria over all their cases: asked, judged by their method, and concluded."""

from collections.abc import Mapping, Sequence

import numpy as np

from calcdoc.analysis import judging
from calcdoc.analysis.asking import Asker, judged_of, question
from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Limits
from calcdoc.analysis.evaluation import (
    Combination,
    Conclusion,
    Judgement,
    Outcome,
    Progress,
    PutBack,
    Stand,
    Unjudged,
)
from calcdoc.analysis.extremes import extremes
from calcdoc.analysis.judging import Found, Hearing, Ready, Weighed
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.putting_back import Solutions, put_back, solutions
from calcdoc.analysis.sides import Side
from calcdoc.analysis.trouble import out_of_reach, said
from calcdoc.frozen import replace
from calcdoc.model.model import Judged, Model
from calcdoc.problems import Finding
from calcdoc.text.cases import NORMAL


class Criteria:
    """Asks for every criterion in each of its cases, and judges when all is answered."""

    def __init__(self, asker: Asker, model: Model) -> None:
        self.asker, self.model, self.compiled = asker, model, asker.compiled
        self._set_ceilings()
        self.out_of_reach = self._beyond()
        self.heard = [
            {name: self._hearing(number, judged, name, limits)
             for name, limits in self.compiled.limits[number].items()}
            for number, judged in enumerate(judged_of(model))
        ]  # fmt: skip

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
        questions = [question(side.requirement, True, self._box(number)) for number, side in sides]
        for (_, side), most in zip(sides, extremes(self.compiled.tape, questions), strict=True):
            size = most.bound if np.isfinite(most.bound) else np.finfo(float).max / 4
            assert side.ceiling is not None
            for room in self.asker.rooms.values():
                for ends in (room.box.low, room.box.nominal, room.box.high):
                    ends[side.ceiling] = size + abs(size) + np.finfo(float).tiny

    def _beyond(self) -> dict[tuple[int, int], Finding]:
        """What cannot be computed in cases: criterion and instruction to the reason.

        Criteria over one box are looked at together.
        """
        boxes: dict[tuple[bytes, bytes], list[int]] = {}
        for number in range(len(self.compiled.limits)):
            box = self._box(number)
            boxes.setdefault((box.low.tobytes(), box.high.tobytes()), []).append(number)
        found: dict[tuple[int, int], Finding] = {}
        for numbers in boxes.values():
            wanted = [(number, at) for number in numbers for at in self._in_cases(number)]
            own = self.asker.rooms.get(("criterion", numbers[0]))
            reasons = out_of_reach(
                self.compiled,
                self.model,
                self._box(numbers[0]),
                list(dict.fromkeys(at for _, at in wanted)),
                own.setter if own else None,
            )
            found |= {(number, at): reasons[at] for number, at in wanted if at in reasons}
        return found

    def _in_cases(self, number: int) -> list[int]:
        """The targets of a criterion in all cases but the normal one."""
        return [
            side.target
            for name, limits in self.compiled.limits[number].items()
            if name != NORMAL and isinstance(limits, Limits)
            for side in limits.sides
        ]

    def _hearing(
        self, number: int, judged: Judged, case: str, limits: Limits | Finding
    ) -> Hearing | Unjudged:
        if isinstance(limits, Finding):
            return Unjudged(judged, case, Outcome.NOT_DECIDED, said(limits))
        box = self._box(number)
        for side in limits.sides if case != NORMAL else ():
            if (reason := self.out_of_reach.get((number, side.target))) is not None:
                return Unjudged(judged, case, Outcome.NOT_DECIDED, said(reason))
        asked = tuple(self.asker.ask(side.target, False, box) for side in limits.sides)
        return Hearing(judged, case, limits.case, limits.sides, box, asked)

    def _box(self, criterion: int) -> Box:
        """The box a criterion is judged over."""
        own = self.asker.rooms.get(("criterion", criterion))
        box = own.box if own else self.asker.declared
        nominal = judged_of(self.model)[criterion].statement.clauses.at_nominal
        return box.at_nominal if nominal else box

    # --- judging -------------------------------------------------------------------------------

    def concluded(
        self, solved: Mapping[str, Solutions], progress: Progress | None
    ) -> tuple[Conclusion, ...]:
        """Every criterion, when all questions are answered; ``solved`` by case."""
        tried = [
            {name: self._tried(each, solved) for name, each in in_case.items()}
            for in_case in self.heard
        ]
        weighed = self._weighed(tried, progress)
        return tuple(
            judging.concluded(
                judged,
                {
                    name: self._judge(each, weighed.get((number, name)))
                    if isinstance(each, Ready)
                    else each
                    for name, each in tried[number].items()
                },
            )
            for number, judged in enumerate(judged_of(self.model))
        )

    def _tried(
        self, hearing: Hearing | Unjudged, solved: Mapping[str, Solutions]
    ) -> Ready | Unjudged:
        """A criterion in a case with its extremes, or why there is nothing to judge."""
        if isinstance(hearing, Unjudged):
            return hearing
        judged, case = hearing.judged, hearing.case
        known = self._own_solutions(hearing) or solved[case]
        reached = self._reached(judged.depends_on) if known.bad else set[str]()
        for key, reason in known.bad.items():
            if key in reached:
                return Unjudged(judged, case, Outcome.NOT_DECIDED, reason)
        found = tuple(self._found(hearing))
        if nothing := judging.no_ground(judged, case, found):
            return nothing
        if judged.statement.clauses.by == "extremes":
            return Ready(hearing, found, (), known)
        from calcdoc.analysis.statistical import parts_of  # noqa: PLC0415  (many need none)

        return Ready(hearing, found, parts_of(self.compiled, self.model, hearing), known)

    def _own_solutions(self, hearing: Hearing) -> Solutions | None:
        """Solutions put back where the criterion is judged; None where the case has them.

        An operating point may lie beyond the band, and it wins over changes of the case.
        """
        compiled, known, box = self.compiled, hearing.known, hearing.box
        if box is self.asker.declared and known is compiled.cases[hearing.case]:
            return None
        reached = self._reached(hearing.judged.depends_on)
        relations = {**compiled.normal.relations, **known.relations}
        own = replace(known, relations={k: at for k, at in relations.items() if k in reached})
        points = [box.nominal, *(self.asker.answers[at].point for at in hearing.asked)]
        found = put_back(compiled, self.model, own, np.stack(points, axis=1), box)
        return solutions(self.model, {}, found)

    def _weighed(
        self, tried: Sequence[Mapping[str, Ready | Unjudged]], progress: Progress | None
    ) -> dict[tuple[int, str], Weighed | Unjudged]:
        """What root sum square and sampling say, by the criterion's number and case."""
        ready = {
            (number, name): each
            for number, in_case in enumerate(tried)
            for name, each in in_case.items()
            if isinstance(each, Ready) and each.by != "extremes"
        }
        if not ready:
            return {}
        from calcdoc.analysis import statistical  # noqa: PLC0415  (many designs need none)

        return statistical.weighed(self.compiled, self.model, ready, progress)

    def _judge(self, ready: Ready, weighed: Weighed | Unjudged | None) -> Judgement | Unjudged:
        hearing, judged = ready.hearing, ready.hearing.judged
        back, away = ready.solutions.back, ready.solutions.away
        if isinstance(weighed, Unjudged):
            return weighed
        if weighed is None:
            weighed = judging.by_extremes(ready)
        which = judging.governing_row(judged, weighed.rows, weighed.requirements)
        running = tuple(sorted({k for each in judged.depends_on for k in away[each]}))
        made = judging.judgement(
            hearing,
            ready.found,
            weighed.rows,
            weighed.requirements,
            self._governing(ready, which, weighed.bases[which] if weighed.bases else None),
            which,
            _named(hearing, ready.found[which]),
            running,
            weighed.statistics[which] if weighed.statistics else None,
        )
        outcome = weighed.outcome or made.outcome
        return replace(made, outcome=_with_loops(outcome, running, back))

    def _governing(self, ready: Ready, which: int, base: FloatArray | None) -> Combination:
        """Where the inputs stand; parts that vary on their own stand nowhere in particular.

        Of those only where a bias has put them is said; what a case changes stands at its value in
        that case.
        """
        extreme, columns = ready.found[which].extreme, self.compiled.columns
        random = {part.column for part in ready.parts if part.bias_low == part.bias_high}
        matters = [int(at) for at in np.flatnonzero(extreme.matters) if at not in random]
        stated = [point.symbol.key for point in ready.hearing.judged.statement.clauses.at]
        own = [columns[key] for key in stated if columns[key] not in random]
        stands = self.asker.stands(extreme, [*matters, *own], base, ready.hearing.box)
        point = extreme.point if base is None else base
        return {**stands, **self._changed(ready.hearing, stands, point)}

    def _changed(self, hearing: Hearing, stands: Combination, point: FloatArray) -> Combination:
        """Inputs of a combination that the case changes by a formula, at their value there."""
        known = hearing.known
        keys = [key for key in stands if key in known.changes and key in known.variables]
        if not keys:
            return {}
        part = plain(self.compiled.tape, [known.variables[key] for key in keys])
        values = part.evaluate(point[:, None])[:, 0]
        return {
            key: Stand(float(values[part.row[known.variables[key]]]), stands[key].inside)
            for key in keys
        }

    def _found(self, hearing: Hearing) -> list[Found]:
        """The extremes of all sides, with the values there."""
        wanted = {at for side in hearing.sides for at in _instructions(side)}
        known, answers = hearing.known, self.asker.answers
        for key in hearing.judged.depends_on:
            if key in known.variables:
                wanted.add(known.variables[key])
            else:
                wanted.update(known.series[key].values())
        part = plain(self.compiled.tape, wanted)
        points = np.stack([answers[at].point for at in hearing.asked], axis=1)
        computed = part.evaluate(points)
        return [
            Found(side, answers[at], judging.values_at(part.row, computed[:, number]))
            for number, (side, at) in enumerate(zip(hearing.sides, hearing.asked, strict=True))
        ]

    def _reached(self, keys: tuple[str, ...]) -> set[str]:
        """Everything that some quantities rest on, themselves included."""
        reached: set[str] = set()
        waiting = list(keys)
        while waiting:
            key = waiting.pop()
            if key not in reached:
                reached.add(key)
                waiting.extend(self.model.variables[key].depends_on)
        return reached


def _instructions(side: Side) -> tuple[int, ...]:
    known = (side.value, side.limit, side.requirement)
    return known if side.when is None else (*known, side.when)


def _named(hearing: Hearing, found: Found) -> dict[str, float]:
    """Every quantity a criterion names, at its governing point; of a series its element."""
    values = {}
    for key in hearing.judged.depends_on:
        at = hearing.known.variables.get(key)
        if at is None and found.side.element is not None:
            at = hearing.known.series[key].get(found.side.element)
        if at is not None:
            values[key] = found.computed[at]
    return values


def _with_loops(outcome: Outcome, running: tuple[str, ...], back: Mapping[str, PutBack]) -> Outcome:
    """A criterion that rests on a loop fails when the loop runs away."""
    gains = [back[key].gain for key in running]
    if any(gain and gain.runs_away for gain in gains):
        return Outcome.FAIL
    return Outcome.NOT_DECIDED if running and outcome is Outcome.PASS else outcome
