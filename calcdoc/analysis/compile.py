"""From the checked model to one tape in coherent SI units, with every case beside the normal one.

Equal operations share one instruction, so a case costs only what it changes, and a part that
stays is the same column in every case.
"""

from collections.abc import Mapping

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.looking_up import LookedUp
from calcdoc.analysis.sides import (
    Against,
    Check,
    Side,
    criterion_sides,
    crosscheck_sides,
    discharge_time,
    figure_limit,
    measured_against,
)
from calcdoc.analysis.tape import Tape
from calcdoc.analysis.working import InCase, Working
from calcdoc.frozen import Frozen
from calcdoc.model.model import Judged, Model, Root
from calcdoc.problems import Finding, Mistake
from calcdoc.text.cases import NORMAL
from calcdoc.text.nodes import Node


class Limits(Frozen, frozen=True):
    """The limits of a criterion in one case, for every element, and what its names mean there."""

    case: InCase
    sides: tuple[Side, ...]


class Compiled(Frozen, frozen=True):
    """A tape with the way back to the names."""

    tape: Tape
    columns: Mapping[str, int]
    """Key of a given quantity that varies, or that an operating point sets, to its column. A value
    that a case changes has the key ``V_line@dim``, a look-up ``@7``."""
    box: Box
    """The band as declared."""
    cases: Mapping[str, InCase]
    """Every case by name, the normal one first."""
    limits: tuple[Mapping[str, Limits | Finding], ...]
    """For every calculated criterion, by case, its limits, or why there are none."""
    checks: tuple[Check, ...]
    measured: tuple[int, ...]
    """For every measurement what it is compared with."""
    discharges: Mapping[str, Mapping[int, int]]
    """By case, for every stored charge by its number that has a discharge path and can be computed,
    the instruction of its time to a safe voltage, in seconds."""
    looked: tuple[LookedUp, ...]
    """Every look-up of a table."""
    origins: Mapping[int, Node]
    """Instruction to the piece of formula it came from first."""
    inside: Mapping[int, Mapping[int, Node]]
    """The same for the residual of every root, by the instruction of the root."""
    figures: tuple[Against | None, ...] = ()
    """For every figure its limit; None where it has none."""

    @property
    def normal(self) -> InCase:
        """The case in which nothing is changed."""
        return self.cases[NORMAL]

    @property
    def all_cases(self) -> tuple[InCase, ...]:
        """Every case, also as criteria see it whose operating point wins over its changes."""
        seen = [each.case for in_case in self.limits for each in in_case.values()
                if isinstance(each, Limits)]  # fmt: skip
        return (*self.cases.values(), *seen)

    @property
    def variables(self) -> Mapping[str, int]:
        """Key of every quantity that is no series to its instruction in the normal case."""
        return self.normal.variables

    @property
    def series(self) -> Mapping[str, Mapping[int, int]]:
        """Key of every series to the instructions of its elements in the normal case."""
        return self.normal.series

    @property
    def chosen(self) -> Mapping[str, Root]:
        """Key of every solved quantity to the root that was left."""
        return self.normal.chosen


def compile_model(model: Model) -> Compiled:
    """Put every quantity, criterion, cross-check and discharge of a model on one tape.

    Raises:
        Mistake: when a solved quantity has several roots over the band, or none, in the normal
            case. In another case this is kept as the reason why nothing is decided.
    """
    columns = _columns(model)
    low, nominal, high = np.array([_si(model, key) for key in columns]).reshape(-1, 3).T
    working = Working(model, columns, Box(low, nominal, high))
    normal = working.normal()
    cases = {NORMAL: normal}
    cases |= {case.name: working.changed(case.name, case.changes) for case in model.cases}
    judged = model.judged
    limits = tuple(_in_its_cases(working, each, cases) for each in judged)
    working.enter(normal)
    checks = tuple(crosscheck_sides(working, each) for each in model.crosschecks)
    measured = tuple(measured_against(working, each) for each in model.measurements)
    figures = tuple(figure_limit(working, each) for each in model.figures)
    discharges = {name: _discharges(working, case) for name, case in cases.items()}
    return Compiled(
        tape=working.builder.tape(),
        columns=working.columns,
        box=working.box,
        cases=cases,
        limits=limits,
        checks=checks,
        measured=measured,
        discharges=discharges,
        looked=tuple(working.looked),
        origins=working.origins,
        inside=working.inside,
        figures=figures,
    )


def _columns(model: Model) -> dict[str, int]:
    """A column for every given quantity that varies or that an operating point sets."""
    points = [each.statement.clauses.at for each in model.criteria if isinstance(each, Judged)]
    points += [each.statement.at for each in model.measurements]
    set_by_points = {point.symbol.key for each in points for point in each}
    set_by_points |= {
        each.statement.against.key for each in model.figures if each.statement.against
    }
    keys = [
        key
        for key, variable in model.variables.items()
        if variable.given and (variable.given.varies or key in set_by_points)
    ]
    return {key: at for at, key in enumerate(keys)}


def _si(model: Model, key: str) -> tuple[float, float, float]:
    given = model.variables[key].given
    assert given is not None
    return given.si


def _in_its_cases(
    working: Working, judged: Judged, cases: Mapping[str, InCase]
) -> dict[str, Limits | Finding]:
    """The limits of a criterion in every case it is judged in.

    An operating point that the criterion states holds in every case, also where the case changes
    that quantity.
    """
    stated = {point.symbol.key for point in judged.statement.clauses.at}
    found: dict[str, Limits | Finding] = {}
    for name in judged.cases:
        case = cases[name]
        if stated & case.changes.keys():
            kept = {key: each for key, each in case.changes.items() if key not in stated}
            case = working.changed(name, kept)
        broken = next((case.broken[key] for key in judged.depends_on if key in case.broken), None)
        found[name] = broken or _limits(working, judged, case)
    return found


def _limits(working: Working, judged: Judged, case: InCase) -> Limits | Finding:
    working.enter(case)
    try:
        return Limits(case, criterion_sides(working, judged))
    except Mistake as mistake:
        if case.name == NORMAL:
            raise
        return mistake.finding


def _discharges(working: Working, case: InCase) -> dict[int, int]:
    working.enter(case)
    return {
        number: discharge_time(working, each, each.resistance)
        for number, each in enumerate(working.model.discharges)
        if each.resistance is not None
        and not case.broken.keys() & {each.capacitance, each.voltage, each.resistance}
    }
