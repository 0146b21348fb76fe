"""Cases as the record shows them, and quantities in the cases that change them."""

from calcdoc.analysis.evaluation import Band, CaseBands, Gain
from calcdoc.model.model import Case
from calcdoc.records import record as r
from calcdoc.records.naming import Naming, case_key
from calcdoc.records.numbers import Numbers
from calcdoc.records.rounding import significant, stored
from calcdoc.records.values import computed, given_nominal
from calcdoc.records.wording import band_in_words, typeset
from calcdoc.text.cases import NORMAL
from calcdoc.text.statements import Change
from calcdoc.text.unparse import unparse


def cases(numbers: Numbers, naming: Naming) -> tuple[r.Case, ...]:
    """The normal case and every mode and fault, in the author's order."""
    normal = r.Case(name=NORMAL, kind=NORMAL, line="", changes=(), description="", basis="")
    return (normal, *(_case(numbers, naming, each) for each in numbers.model.cases))


def _case(numbers: Numbers, naming: Naming, case: Case) -> r.Case:
    statement = case.statement
    bands = numbers.evaluation.cases.get(case.name)
    return r.Case(
        name=case.name,
        kind=case.kind,
        line=naming.lines[case_key(case.name)],
        changes=tuple(_change(numbers, bands, each) for each in statement.changes),
        description=statement.description,
        basis=statement.basis.text,
    )


def _change(numbers: Numbers, bands: CaseBands | None, change: Change) -> r.CaseChange:
    """One change; a change to the value it has anyhow leaves the quantity as it is."""
    key, given = change.symbol.key, change.given
    same = numbers.evaluation.bands[key]
    band = bands.bands.get(key, same) if bands else same
    return r.CaseChange(
        symbol=numbers.model.variables[key].symbol,
        text=change.text,
        formula="" if change.formula is None else unparse(change.formula),
        normal=numbers.nominal(key),
        result=given_nominal(given) if given else _value(numbers, key, band.nominal),
        band=band_in_words(given) if given else _band(numbers, key, band),
    )


def in_cases(numbers: Numbers, key: str) -> dict[str, r.CaseValues]:
    """A quantity in every case that changes it."""
    found = {}
    for name, case in numbers.evaluation.cases.items():
        if key in case.bands:
            found[name] = _values(numbers, key, case.bands[key], case.running.get(key))
        elif key in case.series:
            found[name] = _series(numbers, key, tuple(case.series[key].values()))
        elif key in case.broken:
            found[name] = r.CaseValues(
                nominal=None, least=None, greatest=None, text="", reason=case.broken[key]
            )
    return found


def _values(numbers: Numbers, key: str, band: Band, running: Gain | None) -> r.CaseValues:
    unit = numbers.units[key]
    nominal, least, greatest = (
        stored(unit.from_si(each)) for each in (band.nominal, band.least, band.greatest)
    )
    shown = _band(numbers, key, band)
    text = typeset(_value(numbers, key, band.nominal)) + (f", {shown}" if shown else "")
    if running is not None:
        text += f"; {_away(running)}"
    return r.CaseValues(nominal=nominal, least=least, greatest=greatest, text=text, reason="")


def _away(gain: Gain) -> str:
    if not gain.runs_away:
        return "it could not be proven that the loop gain stays below one"
    return f"thermal runaway: the loop gain reaches {typeset(significant(gain.value, 3))}"


def _series(numbers: Numbers, key: str, bands: tuple[Band, ...]) -> r.CaseValues:
    unit = numbers.units[key]
    nominal, least, greatest = (
        [stored(unit.from_si(getattr(band, end))) for band in bands]
        for end in ("nominal", "least", "greatest")
    )
    return r.CaseValues(nominal=nominal, least=least, greatest=greatest, text="", reason="")


def _band(numbers: Numbers, key: str, band: Band) -> str:
    """Both ends, typeset; empty when it does not vary."""
    if not band.varies:
        return ""
    low, high = (typeset(_value(numbers, key, each)) for each in (band.least, band.greatest))
    return f"{low} to {high}"


def _value(numbers: Numbers, key: str, si: float) -> str:
    """A value in a case: exact when it is short, as 11 LEDs are, else with the usual digits."""
    exact = numbers.at(key, si)
    short = sum(each.isdigit() for each in exact.partition(" ")[0]) <= numbers.digits
    return exact if short else computed(si, numbers.units[key], numbers.digits)
