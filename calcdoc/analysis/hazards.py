"""What cannot be computed in a box: poles, roots of negatives and the like, with a point each.

Natural intervals clear most instructions at once. For the others the extremes of the argument,
over the points at which the instruction is computed at all, decide. A hazard is reported only
with a point at which it happens; where no such point is found nothing is claimed.
"""

from collections.abc import Container, Iterable, Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.blame import ZERO, Judge, scale
from calcdoc.analysis.box import Box
from calcdoc.analysis.bracket import Ends, ends, jumps, several
from calcdoc.analysis.domains import (
    JUMP,
    NO_CHANGE,
    OVERFLOW,
    SEVERAL,
    Case,
    Need,
    cases,
    suspected,
)
from calcdoc.analysis.extremes import extremes
from calcdoc.analysis.guards import Guard, guards
from calcdoc.analysis.opened import LostSign, Opened, doubtful, doubtful_inside, surely_one
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import Program, by_structure, plain
from calcdoc.analysis.questions import Question
from calcdoc.analysis.sweep import Boxes, sweep
from calcdoc.analysis.tape import Implicit, Op, Tape, TapeBuilder, needed
from calcdoc.frozen import Frozen

FAR: Final = 1e300
"""Stands for a range without end."""


class Hazard(Frozen, frozen=True):
    """One instruction that cannot be computed somewhere in the box."""

    instruction: int
    argument: int
    """Index of the instruction that yields the argument to blame; itself for an overflow."""
    kind: str
    point: FloatArray
    """Shape (n_inputs,): inputs at which it happens; nominal when it happens there."""
    value: float
    """Value of the argument there; NaN for a root that is not there."""
    inner: tuple[int, ...] = ()
    """For what happens inside a residual: its instruction in the tape of the residual; for a root
    within a residual that root first."""
    unknown: tuple[float, ...] = ()
    """Value of the unknown at which it happens, for each of ``inner``."""
    ends: Ends | None = None
    """The residual at the ends of the bracket, when the root itself is to blame."""


def hazards(
    tape: Tape, targets: Sequence[int], low: FloatArray, nominal: FloatArray, high: FloatArray
) -> tuple[Hazard, ...]:
    """Everything the targets need that cannot be computed at nominal or within the box.

    One hazard for each instruction to blame, in tape order; what only follows from another is
    left out. An instruction in a branch of an ``if``, or on the second side of ``and`` and
    ``or``, counts where that branch is taken.
    """
    box = Box(low, nominal, high)
    whole = plain(tape, targets)
    ranges = _ranges(whole, box)
    suspects = _suspects(tape, ranges)
    flooded = [at for at in ranges if not np.isfinite(ranges[at]).all()]
    if not suspects and not flooded:
        return ()
    builder = TapeBuilder.on(tape)
    reached = guards(builder, targets)
    found: dict[int, Hazard] = {}
    while suspects:
        tainted = _users(tape, ranges, found)
        suspects = {at: each for at, each in suspects.items() if at not in tainted}
        waiting = _users(tape, ranges, suspects)
        wave = {at: each for at, each in suspects.items() if at not in waiting}
        found |= _decide(builder, box, wave, reached)
        suspects = {at: each for at, each in suspects.items() if at not in wave}
    tainted = _users(tape, ranges, found) | set(found)
    found |= _overflows(builder, box, [at for at in flooded if at not in tainted], reached)
    return tuple(found[at] for at in sorted(found))


def _ranges(whole: Program, box: Box) -> dict[int, FloatArray]:
    """Natural interval (2, 1) of each instruction."""
    no_slots = np.zeros((0, 1), dtype=np.intp)
    swept = sweep(whole, Boxes(box.low[:, None], box.high[:, None], no_slots))
    return {at: swept.values[row] for at, row in whole.row.items()}


def _suspects(tape: Tape, ranges: dict[int, FloatArray]) -> dict[int, tuple[int, str]]:
    """Argument and kind for each instruction that its arguments' ranges do not clear."""
    suspects = {}
    for at in ranges:
        step = tape.instructions[at]
        if isinstance(step.value, Implicit):
            if doubtful(step.value, [ranges[arg] for arg in step.args]):
                suspects[at] = at, NO_CHANGE
        elif (found := suspected(step, [ranges[arg] for arg in step.args])) is not None:
            place, kind = found
            suspects[at] = step.args[place], kind
    return suspects


def _users(tape: Tape, order: Iterable[int], of: Container[int]) -> set[int]:
    """Instructions of ``order`` that use one of ``of``, directly or not."""
    users: set[int] = set()
    for at in order:
        if any(arg in users or arg in of for arg in tape.instructions[at].args):
            users.add(at)
    return users


def _decide(
    builder: TapeBuilder,
    box: Box,
    wave: dict[int, tuple[int, str]],
    reached: dict[int, Guard],
) -> dict[int, Hazard]:
    """Find out which of some suspects fail; none of them depends on another."""
    roots = [at for at, (_, kind) in wave.items() if kind == NO_CHANGE]
    found = _roots(builder, box, roots, reached)
    wave = {at: each for at, each in wave.items() if at not in roots}
    if not wave:
        return found
    todo = [
        case
        for at, (argument, kind) in wave.items()
        for case in cases(builder, at, argument, kind, reached[at])
    ]
    tape = builder.tape()
    ranges = _ranges(plain(tape, [case.subject for case in todo]), box)
    judges = [Judge(tape, box, case, ZERO * scale(tape, case.subject, ranges)) for case in todo]
    questions, goals, owners = [], [], []
    for judge in judges:
        for greatest, goal in _sides(judge):
            target = _subject(builder, judge.case, ranges[judge.case.subject], greatest=greatest)
            questions.append(Question(target, greatest, box.low, box.nominal, box.high))
            goals.append(goal)
            owners.append(judge)
    points = {judge.case: [box.nominal] for judge in judges}
    answers = extremes(builder.tape(), questions, goals)
    for judge, answer in zip(owners, answers, strict=True):
        points[judge.case].append(answer.point)
    for judge in judges:
        at, argument, kind = judge.case.instruction, judge.case.argument, judge.case.kind
        point = judge.verdict(np.stack(points[judge.case], axis=1))
        if point is not None and at not in found:
            found[at] = Hazard(at, argument, kind, point, judge.value(point, argument))
    return found


def _roots(
    builder: TapeBuilder, box: Box, roots: Sequence[int], reached: dict[int, Guard]
) -> dict[int, Hazard]:
    """What goes wrong with some roots: inside the residual, at its ends, or between them."""
    found: dict[int, Hazard] = {}
    for at in roots:
        hazard = _inside(builder.tape(), box, at, reached[at])
        hazard = hazard or _itself(builder, box, at, reached[at])
        if hazard is not None:
            found[at] = hazard
    return found


def _inside(tape: Tape, box: Box, at: int, guard: Guard) -> Hazard | None:
    """What cannot be computed of a residual, for any value of the unknown in the bracket."""
    step = tape.instructions[at]
    assert isinstance(step.value, Implicit)
    if not doubtful_inside(step.value, _arguments(tape, box, at)):
        return None
    opened = Opened.of(tape, at, guard)
    low, high = float(step.value.low), float(step.value.high)
    part = plain(tape, (at,))
    root = float(part.evaluate(box.nominal[:, None])[part.row[at], 0])
    middle = low + 0.5 * (high - low)
    for hazard in hazards(
        opened.tape,
        (opened.target,),
        np.append(box.low, low),
        np.append(box.nominal, root if np.isfinite(root) else middle),
        np.append(box.high, high),
    ):
        if (inner := opened.origins.get(hazard.instruction)) is not None:
            return Hazard(
                at, at, hazard.kind, hazard.point[:-1], hazard.value,
                inner=(inner, *hazard.inner),
                unknown=(float(hazard.point[-1]), *hazard.unknown),
                ends=hazard.ends,
            )  # fmt: skip
    return None


def _arguments(tape: Tape, box: Box, at: int) -> list[FloatArray]:
    """Natural intervals (2, 1) of the arguments of an instruction."""
    step = tape.instructions[at]
    ranges = _ranges(plain(tape, step.args), box)
    return [ranges[arg] for arg in step.args]


def _itself(builder: TapeBuilder, box: Box, at: int, guard: Guard) -> Hazard | None:
    """A root that is not there, or not alone, somewhere in the box."""
    lost = LostSign.at(builder, at, guard)
    tape = builder.tape()
    points = [box.nominal]
    questions = lost.questions(tape, box.low, box.nominal, box.high)
    answers = extremes(tape, questions, [0.0] * len(questions))
    points += [answer.point for answer in answers]
    if (first := lost.first(tape, points)) is None and lost.possible(questions, answers):
        least = Question(lost.subject, False, box.low, box.nominal, box.high)
        points += [answer.point for answer in extremes(tape, [least], [-5e-324])]
        first = lost.first(tape, points)
    if first is not None:
        return Hazard(at, at, NO_CHANGE, first, np.nan, ends=ends(tape, at, first))
    step = tape.instructions[at]
    assert isinstance(step.value, Implicit)
    if surely_one(step.value, _arguments(tape, box, at)):
        return None
    own = [Question(at, greatest, box.low, box.nominal, box.high) for greatest in (False, True)]
    points += [answer.point for answer in extremes(tape, own)]
    for kind, bad in ((SEVERAL, several), (JUMP, jumps)):
        for point in points:
            if lost.computed(tape, point) and bad(tape, at, point[:, None])[0]:
                return Hazard(at, at, kind, point, np.nan, ends=ends(tape, at, point))
    return None


def _subject(builder: TapeBuilder, case: Case, around: FloatArray, *, greatest: bool) -> int:
    """The subject where the instruction is computed; elsewhere a value that is not asked for."""
    if case.guard is None:
        return case.subject
    away = float(around[0, 0] if greatest else around[1, 0])
    elsewhere = builder.add(Op.CONST, value=min(max(away, -FAR), FAR))
    return builder.add(Op.IF, case.guard, case.subject, elsewhere)


def _sides(judge: Judge) -> tuple[tuple[bool, float], ...]:
    """Which extremes to ask for, greatest or not, and the value at which enough is known."""
    if judge.case.need is Need.NOT_NEGATIVE:
        return ((False, -5e-324),)
    if judge.case.need is Need.POSITIVE:
        return ((False, 0.0),)
    above, below = (False, judge.tolerance), (True, -judge.tolerance)
    if judge.case.guard is not None:
        return above, below
    return (below,) if judge.value(judge.box.nominal, judge.case.subject) < 0.0 else (above,)


def _overflows(
    builder: TapeBuilder, box: Box, flooded: list[int], reached: dict[int, Guard]
) -> dict[int, Hazard]:
    """Instructions that are too large at nominal or at the corners their slopes point to."""
    found: dict[int, Hazard] = {}
    tape = builder.tape()
    for at in flooded:
        step = tape.instructions[at]
        if any(arg in found for arg in needed(tape, step.args)):
            continue
        guard = reached[at]
        part = by_structure(tape, [at] if guard is None else [at, guard])
        points = _corners(part, part.row[at], box)
        values = part.evaluate(points)
        bad = ~np.isfinite(values[part.row[at]])
        for arg in step.args:
            bad &= np.isfinite(values[part.row[arg]])
        if guard is not None:
            bad &= values[part.row[guard]] != 0.0
        if bad.any():
            first = int(bad.argmax())
            value = float(values[part.row[at], first])
            found[at] = Hazard(at, at, OVERFLOW, points[:, first], value)
    return found


def _corners(part: Program, row: int, box: Box) -> FloatArray:
    """Nominal and the two corners to which the slopes of a row point; shape (n_inputs, 3)."""
    slots = np.flatnonzero(box.low < box.high)[:, None]
    swept = sweep(part, Boxes(box.low[:, None], box.high[:, None], slots))
    move = swept.moves[row]
    top, bottom = box.nominal.copy(), box.nominal.copy()
    if move is not None:
        rises = move[1, :, 0] >= -move[0, :, 0]
        moving = slots[:, 0]
        top[moving] = np.where(rises, box.high[moving], box.low[moving])
        bottom[moving] = np.where(rises, box.low[moving], box.high[moving])
    return np.stack((box.nominal, bottom, top), axis=1)
