"""Cross-checks, measurements and stored charges, read off from the answers."""

from collections.abc import Mapping

import numpy as np

from calcdoc.analysis.asking import Asker, Ends, weaker
from calcdoc.analysis.evaluation import (
    AgainstMeasured,
    Band,
    CaseBands,
    Crosschecked,
    Discharged,
)
from calcdoc.analysis.judging import EQUAL
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.sides import Check
from calcdoc.model.model import Compared, Discharge, Measured
from calcdoc.text.cases import NORMAL


def crosschecked(
    asker: Asker, compared: Compared, check: Check, nominal: FloatArray, asked: Ends
) -> Crosschecked:
    """Agreement at nominal and at all extremes; the worst difference is kept."""
    least, greatest = (asker.answers[at] for at in asked)
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
        compared, first, second, worst.value, agrees, asker.combination(worst), worst.proof
    )


def against_measured(asker: Asker, number: int, measured: Measured, asked: Ends) -> AgainstMeasured:
    """Agreement when the difference is within the root sum square of both bands.

    Of each band the side counts that faces the other value.
    """
    low, high = (asker.answers[at] for at in asked)
    box, at = asker.rooms["measurement", number].box, asker.compiled.measured[number]
    second = float(plain(asker.compiled.tape, (at,)).evaluate(box.nominal[:, None])[-1, 0])
    least, first, greatest = measured.statement.given.si
    equal = EQUAL * max(abs(first), abs(second))
    difference = 0.0 if abs(first - second) <= equal else first - second
    own, other = first - least, high.value - second
    if difference < 0:
        own, other = greatest - first, second - low.value
    allowed = float(np.hypot(own, max(other, 0.0)))
    agrees = abs(difference) <= allowed + equal
    return AgainstMeasured(
        measured, first, second, difference, allowed, agrees,
        low.value, high.value, weaker(low.proof, high.proof),
    )  # fmt: skip


def discharged(
    asker: Asker,
    discharge: Discharge,
    asked: Mapping[str, int],
    bands: Mapping[str, Band],
    cases: Mapping[str, CaseBands],
) -> Discharged:
    """The greatest voltage and time over the normal and every other case.

    Args:
        asker: With the answers.
        discharge: The stored charge.
        asked: By case the number of the question for its time.
        bands: Of the normal case.
        cases: Of the others.
    """
    voltages = [bands[discharge.voltage]]
    voltages += [c.bands[discharge.voltage] for c in cases.values() if discharge.voltage in c.bands]
    voltage = max(each.magnitude for each in voltages)
    if discharge.resistance is None:
        return Discharged(voltage, None, {}, NORMAL, ())
    worst = max(asked, key=lambda name: asker.answers[asked[name]].value)
    answer = asker.answers[asked[worst]]
    unknown = tuple(name for name in asker.compiled.cases if name not in asked)
    return Discharged(voltage, answer.value, asker.combination(answer), worst, unknown)
