"""Cautions: the general ones, those of hazards and of open assumptions, and the author's own.

No setting removes one.
"""

from collections.abc import Iterator
from typing import Final

from calcdoc.analysis.evaluation import Discharged, Evaluation
from calcdoc.model.model import Discharge
from calcdoc.problems import Finding, warning
from calcdoc.records import record as r
from calcdoc.records.body import caution_text
from calcdoc.records.rounding import upward
from calcdoc.records.wording import counted, typeset
from calcdoc.text.cases import NORMAL
from calcdoc.text.names import fold
from calcdoc.units.dimension import VOLTAGE

TOUCH_VOLTAGE: Final = 50.0
"""Volts rms above which a supply is treated as dangerous (design rule of this tool; the limit of
50 V a.c. stands in IEC 60364-4-41, from memory)."""
SAFE_VOLTAGE: Final = 60.0
_ORDER: Final = ("danger", "warning", "caution", "notice")

GENERAL: Final = (
    "This calculation supports the design and is no evidence of conformity by itself. Type tests"
    " by an accredited laboratory and the applicable standards decide. Local codes and the"
    " authorities having jurisdiction govern. Building, testing and servicing mains equipment is"
    " for competent persons only."
)
MAINS: Final = (
    "Mains voltage can kill. The circuit is not isolated from the mains: every part of it, heat"
    " sinks and control side included, may be at mains potential. Do not connect earthed"
    " instruments. Switch off, isolate, secure and prove dead before touching."
)
NOT_ISOLATED: Final = (
    "The circuit is not isolated from the mains: every part of it, heat sinks and control side"
    " included, may be at mains potential. Do not connect earthed instruments."
)


def cautions(
    evaluation: Evaluation, assumptions: tuple[r.Assumption, ...], body: tuple[r.Block, ...]
) -> tuple[r.Caution, ...]:
    """All cautions, the most serious first."""
    found = [
        *_of_hazards(evaluation),
        *_of_assumptions(assumptions),
        r.Caution(signal="notice", text=GENERAL, origin="general"),
        *dict.fromkeys(_of_author(body)),  # a method applied twice warns once
    ]
    return tuple(sorted(found, key=lambda each: _ORDER.index(each.signal)))


def hazard_warning(evaluation: Evaluation) -> tuple[Finding, ...]:
    """A design above 50 V that declares no hazards."""
    if evaluation.model.hazards:
        return ()
    for key, band in evaluation.bands.items():
        variable = evaluation.model.variables[key]
        if variable.typed.dimension == VOLTAGE and band.magnitude > TOUCH_VOLTAGE:
            return (
                warning(
                    "hazards-missing",
                    f"`{variable.symbol}` is above 50 V and the text has no `hazards` block",
                    variable.label.span,
                    help="declare what can hurt: supply V, stored C at V through R, not isolated;"
                    " until then the mains caution is printed",
                ),
            )
    return ()


def hazards(evaluation: Evaluation) -> tuple[r.Hazard, ...]:
    """The register of declared hazards with what was computed for them."""
    times = dict(
        zip((each.statement for each in evaluation.model.discharges), evaluation.discharged,
            strict=True)
    )  # fmt: skip
    return tuple(
        r.Hazard(kind=each.kind, text=each.text,
                 result=_time(times[each]) if each in times else "")
        for each in evaluation.model.hazards
    )  # fmt: skip


def _time(discharged: Discharged) -> str:
    if discharged.greatest_voltage <= SAFE_VOLTAGE:
        return "not above 60 V"
    if discharged.seconds is None:
        return "no discharge path"
    return f"{upward(discharged.seconds, 3)} s"


def _of_hazards(evaluation: Evaluation) -> Iterator[r.Caution]:
    if hazard_warning(evaluation):
        yield _danger(MAINS)
    kinds = [each.kind for each in evaluation.model.hazards]
    supplies = [each for each in evaluation.model.hazards if each.kind == "supply"]
    keys = {fold(each.symbols[0].name) for each in supplies}
    everywhere = [evaluation.bands, *(case.bands for case in evaluation.cases.values())]
    bands = [bands[key] for bands in everywhere for key in keys & bands.keys()]
    if any(band.magnitude > TOUCH_VOLTAGE for band in bands):
        yield _danger(MAINS)
    elif "not isolated" in kinds:
        yield _danger(NOT_ISOLATED)
    for discharge, discharged in zip(
        evaluation.model.discharges, evaluation.discharged, strict=True
    ):
        if discharged.greatest_voltage > SAFE_VOLTAGE:
            yield _danger(_stored(evaluation, discharge, discharged))


def _stored(evaluation: Evaluation, discharge: Discharge, discharged: Discharged) -> str:
    symbol = {key: each.symbol for key, each in evaluation.model.variables.items()}
    store = symbol[discharge.capacitance]
    start = typeset(f"{upward(discharged.greatest_voltage, 3)} V")
    rest = " The LED string stops conducting below its own voltage and does not discharge it."
    if discharge.resistance is None or discharged.seconds is None:
        return (
            f"Stored charge: {store} has no discharge path and keeps up to {start} after"
            f" disconnection.{rest} Waiting does not help: discharge it through a resistor, then"
            " measure, before touching."
        )
    time = typeset(f"{upward(discharged.seconds, 3)} s")
    over = "tolerances and cases" if evaluation.model.cases else "tolerances"
    worst = f", in the case {discharged.case}" if discharged.case != NORMAL else ""
    unknown = ""
    if discharged.unknown:
        unknown = f" It could not be computed in {', '.join(discharged.unknown)}."
    return (
        f"Stored charge: after disconnection {store} falls from up to {start} to {typeset('60 V')}"
        f" through {symbol[discharge.resistance]} in at most {time} over all {over}{worst}; with an"
        f" open bleed resistor it stays charged.{unknown}{rest} Wait, then measure, before"
        " touching."
    )


def _of_assumptions(assumptions: tuple[r.Assumption, ...]) -> Iterator[r.Caution]:
    open_ones = [each.id or each.symbol for each in assumptions if each.state == "open"]
    if open_ones:
        what = counted(len(open_ones), "open assumption")
        yield r.Caution(
            signal="warning",
            text=f"This record rests on {what} ({', '.join(open_ones)}): do not energise on it"
            f" until {'it is' if len(open_ones) == 1 else 'they are'} closed.",
            origin="assumptions",
        )


def _of_author(body: tuple[r.Block, ...]) -> Iterator[r.Caution]:
    for block in body:
        match block:
            case r.CautionBox():
                yield r.Caution(
                    signal=block.signal, text=caution_text(block.blocks), origin="author"
                )
            case r.Items():
                for item in block.items:
                    yield from _of_author(item)
            case r.Quote() | r.MethodBox():
                yield from _of_author(block.blocks)
            case _:
                pass


def _danger(text: str) -> r.Caution:
    return r.Caution(signal="danger", text=text, origin="hazards")
