"""Quantities, criteria and references of the sample record; the numbers are invented."""

from dataclasses import dataclass, field
from typing import Any

from calcdoc.records import record as r

NB = "\u00a0"


@dataclass(frozen=True, slots=True)
class Given:
    """Short form of a given quantity."""

    symbol: str
    line: str
    value: float
    unit: str
    description: str
    basis: str = ""
    percent: float = 0.0
    used_by: tuple[str, ...] = ()
    kind: str = "input"
    more: dict[str, Any] = field(default_factory=dict)


def text(value: float, unit: str) -> str:
    """A number with its unit in the language of the design text."""
    return f"{value:g} {unit}".rstrip()


def given(one: Given) -> r.Quantity:
    """An input with a relative tolerance."""
    least, greatest = one.value * (1 - one.percent / 100), one.value * (1 + one.percent / 100)
    tolerance = f"{one.value:g}{NB}{one.unit} × (1 ± {one.percent:g}{NB}%)" if one.percent else ""
    return quantity(
        symbol=one.symbol,
        line=one.line,
        kind=one.kind,
        unit=one.unit,
        nominal=one.value,
        least=least,
        greatest=greatest,
        result=text(one.value, one.unit),
        description=one.description,
        basis=one.basis,
        used_by=one.used_by,
        tolerance=tolerance,
        least_text=text(least, one.unit),
        greatest_text=text(greatest, one.unit),
        varies=one.percent > 0,
        **one.more,
    )


def quantity(**values: object) -> r.Quantity:
    """A quantity with quiet defaults."""
    quiet: dict[str, Any] = {
        "line": "1.1",
        "kind": "derived",
        "unit": "V",
        "nominal": 1.0,
        "least": 1.0,
        "greatest": 1.0,
        "index": None,
        "at_least": {},
        "at_greatest": {},
        "proof": "exact",
        "formula": "",
        "substitution": "",
        "result": "",
        "steps": (),
        "residual": None,
        "depends_on": (),
        "used_by": (),
        "description": "",
        "basis": "",
        "by_case": {},
        "makeup": (),
        "id": "",
        "state": "",
        "units_carried": "",
        "tolerance": "",
        "least_text": "",
        "greatest_text": "",
        "varies": False,
        "from_relation": "",
        "unverified": (),
        "notes": (),
    }
    quiet.update(values)
    return r.Quantity(**quiet)


def criterion(**values: object) -> r.Criterion:
    """A criterion with quiet defaults."""
    quiet: dict[str, Any] = {
        "line": "9.1",
        "text": "",
        "method": "extremes",
        "value": None,
        "limit": None,
        "unit": "",
        "relation": "",
        "margin": None,
        "margin_abs": None,
        "verdict": "pass",
        "accepted": None,
        "case": "normal",
        "governing": {},
        "by_case": {},
        "route_of": "",
        "statistics": (),
        "rows": (),
        "interval": None,
        "standard_error": None,
        "share": None,
        "contributions": (),
        "unverified": (),
        "description": "",
        "basis": "",
        "reason": "",
        "clauses": "",
        "substitution": "",
        "value_text": "",
        "limit_text": "",
        "margin_text": "",
        "remark": "",
        "proof": "exact",
    }
    quiet.update(values)
    return r.Criterion(**quiet)


def worked(values: tuple[float, float, float], **more: object) -> r.Quantity:
    """A derived quantity with its band (least, nominal, greatest)."""
    least, nominal, greatest = values
    unit = str(more.get("unit", "V"))
    return quantity(
        nominal=nominal,
        least=least,
        greatest=greatest,
        result=text(nominal, unit),
        least_text=text(least, unit),
        greatest_text=text(greatest, unit),
        varies=True,
        **more,
    )


GIVEN = (
    Given("V_line", "1.1", 230, "V", "supply, rms", "[SPEC, 2]", 10, ("V_pk", "R1"), "condition"),
    Given("f_line", "1.2", 50, "Hz", "supply frequency", "[SPEC, 2]", 1, ("t_dis",), "condition"),
    Given("T_a", "1.3", 35, "°C", "ambient of the housing", "[SPEC, 4]", 0, ("T_J",), "condition"),
    Given("C_res", "2.1", 10, "µF", "reservoir capacitance", "[CAP, p. 2]", 20, ("ΔV", "τ_bleed")),
    Given("V_D", "2.2", 0.95, "V", "forward voltage of one diode", "[DIO, fig. 3]", 8, ("V_pk",)),
    Given("I_reg", "2.3", 30, "mA", "regulated current", "[REG, table 4]", 6, ("ΔV", "P_reg")),
    Given("n_LED", "2.4", 13, "", "LEDs in series", "", 0, ("V_string",)),
    Given(
        "V_LED", "2.5", 19.8, "V", "forward voltage of one LED", "[LED, bin 4B]", 4.5, ("V_string",)
    ),
    Given("R_bleed", "2.6", 220, "kΩ", "bleed resistor", "[RES]", 5, ("τ_bleed",)),
    Given(
        "R_th_JA",
        "2.7",
        60,
        "K/W",
        "thermal resistance, lamp in free air",
        "open: thermal test planned",
        15,
        ("T_J",),
        "assumption",
        {"id": "A1", "state": "open"},
    ),
)

WORKED = (
    worked(
        (290.9, 323.4, 356.0),
        symbol="V_pk",
        line="3.1",
        formula="sqrt(2)*V_line - 2*V_D",
        substitution="sqrt(2)*230 V - 2*0.95 V",
        units_carried="V − V = V",
        depends_on=("V_line", "V_D"),
        used_by=("V_valley", "R1"),
        description="Reservoir voltage at the line peak",
        basis="[EN 50160], clause 4.2",
        at_least={"V_line": "207 V"},
        at_greatest={"V_line": "253 V"},
    ),
    worked(
        (8.1, 8.3, 8.5),
        symbol="t_dis",
        line="3.2",
        unit="ms",
        formula="(1/(2*f_line))*(1 - acos(1 - 0.08)/pi)",
        substitution="(1/(2*50 Hz))*(1 - acos(1 - 0.08)/pi)",
        units_carried="1/Hz = s",
        depends_on=("f_line",),
        used_by=("ΔV",),
        description="Time the bridge blocks, from the crest to the next refill",
    ),
    worked(
        (19.6, 24.9, 33.0),
        symbol="ΔV",
        line="3.3",
        formula="I_reg*t_dis/C_res",
        substitution="30 mA*8.3 ms/(10 µF)",
        units_carried="mA·ms/µF = V",
        depends_on=("I_reg", "t_dis", "C_res"),
        used_by=("V_valley", "R2"),
        description="Ripple, peak to peak",
        basis="[CAP, p. 2]",
        steps=("from charge: divide both sides by C_res",),
        residual="put back: left − right = 0",
        by_case={
            "one LED shorted": r.CaseValues(
                nominal=24.93,
                least=19.61,
                greatest=33.02,
                text="24.93 V, 19.61 V to 33.02 V",
                reason="",
            )
        },
    ),
    worked(
        (257.9, 298.5, 336.4),
        symbol="V_valley",
        line="3.4",
        formula="V_pk - ΔV",
        substitution="323.4 V - 24.9 V",
        depends_on=("V_pk", "ΔV"),
        used_by=("R2",),
        description="Voltage at the valley",
    ),
    worked(
        (245.8, 257.4, 269.0),
        symbol="V_string",
        line="3.5",
        formula="n_LED*V_LED",
        substitution="13*19.8 V",
        depends_on=("n_LED", "V_LED"),
        used_by=("R1", "R2", "P_reg"),
        description="String voltage",
    ),
    worked(
        (1.1, 1.55, 1.94),
        symbol="P_reg",
        line="4.1",
        unit="W",
        formula="I_reg*((V_pk + V_valley)/2 - V_string)",
        substitution="30 mA*((323.4 V + 298.5 V)/2 - 257.4 V)",
        units_carried="mA·V = mW",
        depends_on=("I_reg", "V_pk", "V_valley", "V_string"),
        used_by=("T_J", "R3"),
        description="Dissipation of the regulator, mean over a half wave",
    ),
    worked(
        (98.2, 128.0, 156.1),
        symbol="T_J",
        line="4.2",
        unit="°C",
        formula="T_a + P_reg*R_th_JA",
        substitution="35 °C + 1.55 W*60 K/W",
        units_carried="W·K/W = K",
        depends_on=("T_a", "P_reg", "R_th_JA"),
        used_by=("R4",),
        description="Junction temperature of the regulator",
        basis="[REG, 7]",
        notes=("the greatest value lies inside the band",),
    ),
    worked(
        (1.67, 2.2, 2.77),
        symbol="τ_bleed",
        line="5.1",
        unit="s",
        formula="R_bleed*C_res",
        substitution="220 kΩ*10 µF",
        units_carried="kΩ·µF = s",
        depends_on=("R_bleed", "C_res"),
        used_by=("V_1s",),
        description="Time constant of the discharge",
    ),
    worked(
        (12.3, 21.6, 33.1),
        symbol="V_1s",
        line="5.2",
        formula="V_pk*exp(-1 s/τ_bleed)",
        substitution="323.4 V*exp(-1 s/2.2 s)",
        depends_on=("V_pk", "τ_bleed"),
        used_by=("S1",),
        description="Voltage one second after disconnection",
    ),
    worked(
        (0.81, 0.93, 1.02),
        symbol="k_fit",
        line="5.3",
        unit="",
        formula="if(V_1s > 34 V, sqrt(V_1s/V_pk)/(1 + (V_1s/V_pk)^2), 1)"
        " + 1.2e-3*abs(V_pk - V_string)/min(V_pk, V_string, V_valley)"
        " + 12345.678*k_B*300 K/(q_e*V_pk) + rss(V_D, V_LED)^2/(V_pk^2 + V_line^2)",
        substitution="1 + 1.2e-3*abs(323.4 V - 257.4 V)/min(323.4 V, 257.4 V, 298.5 V)"
        " + 12345.678*1.380649e-23 J/K*300 K/(1.602e-19 C*323.4 V)"
        " + rss(0.95 V, 19.8 V)^2/((323.4 V)^2 + (230 V)^2)",
        depends_on=("V_1s", "V_pk", "V_string"),
        used_by=(),
        description="A long formula that has to break: every construct in one line",
    ),
)

CRITERIA = (
    criterion(
        id="R1",
        line="6.1",
        text="V_pk - V_string <= 0.8*V_reg_rated",
        value=88.1,
        limit=96.0,
        unit="V",
        relation="<=",
        margin=0.082,
        margin_abs=7.9,
        description="Regulator voltage at the highest line",
        basis="[RULES, 5.2]",
        substitution="356.0 V - 267.9 V",
        value_text="88.1 V",
        limit_text="96.0 V",
        margin_text="8.2 %",
        governing={"V_line": "253 V", "V_LED": "18.9 V"},
        unverified=("stress factor 0.8",),
    ),
    criterion(
        id="R2",
        line="6.2",
        text="V_valley - V_string >= V_dropout",
        value=-3.2,
        limit=4.0,
        unit="V",
        relation=">=",
        margin=-1.8,
        margin_abs=-7.2,
        verdict="fail",
        case="one LED open",
        description="Headroom at the valley, lowest line",
        basis="[REG, table 4]",
        substitution="258.0 V - 261.2 V",
        value_text="-3.2 V",
        limit_text="4.0 V",
        margin_text="-180 %",
        remark="short by 7.2 V (-180 % of the limit)",
        governing={"V_line": "207 V", "C_res": "8.0 µF", "V_LED": "20.7 V"},
        clauses="by extremes in every fault",
    ),
    criterion(
        id="R3",
        line="6.3",
        text="1.0 W <= P_reg <= 2.2 W",
        value=1.94,
        limit=2.2,
        unit="W",
        relation="<=",
        margin=0.12,
        margin_abs=0.26,
        description="Regulator dissipation",
        basis="[RULES, 5.4]",
        value_text="1.94 W",
        limit_text="2.20 W",
        margin_text="12 %",
        governing={"V_line": "253 V", "I_reg": "31.8 mA"},
        clauses="with margin 10 %",
    ),
    criterion(
        id="R4",
        line="6.4",
        text="T_J <= 150 °C",
        value=156.1,
        limit=150.0,
        unit="°C",
        relation="<=",
        margin=None,
        margin_abs=-6.1,
        verdict="fail",
        accepted="DEV-3 until 2027-06-30",
        description="Junction temperature",
        basis="[REG, 7]",
        value_text="156.1 °C",
        limit_text="150 °C",
        margin_text="-6.1 K",
        remark="over by 6.1 K",
        governing={"T_a": "35 °C", "R_th_JA": "69 K/W"},
    ),
    criterion(
        id="S1",
        line="6.5",
        text="V_1s <= 34 V",
        value=33.1,
        limit=34.0,
        unit="V",
        relation="<=",
        margin=0.026,
        margin_abs=0.9,
        description="Residual voltage 1 s after disconnection",
        basis="[EN 60335-1, 22.5]",
        value_text="33.1 V",
        limit_text="34.0 V",
        margin_text="2.6 %",
        governing={"R_bleed": "231 kΩ", "C_res": "12 µF"},
    ),
    criterion(
        id="T1",
        line="6.6",
        text="temperature rise of the complete lamp",
        method="test",
        verdict="by test",
        description="not covered by calculation",
        basis="[EN 60598-1, 12.4]",
        reason="open: week 49",
    ),
    criterion(
        id="N1",
        line="6.7",
        text="no dimmer is foreseen",
        method="none",
        verdict="not applicable",
        basis="[EU 2019/2020]",
        reason="no dimmer is foreseen",
    ),
)

REFERENCES = (
    ("EN 50160", "Voltage characteristics of public supply", "2022", ("3.1",)),
    ("EN 60335-1", "Household appliances, safety", "2012 + A15", ("S1",)),
    ("EN 60598-1", "Luminaires, general requirements", "2021", ("T1",)),
    ("EU 2019/2020", "Ecodesign of light sources", "2019", ("N1",)),
    ("RULES", "Design rules of the house", "issue 3", ("R1", "R3")),
    ("REG", "Linear regulator, data sheet", "rev. 1.4", ("2.3", "R2", "R4")),
    ("CAP", "Capacitor, data sheet", "2024-05", ("2.1", "3.3")),
    ("SPEC", "Specification of the stair light", "draft 4", ("1.1", "1.2", "1.3")),
)


def _fault(name: str, line: str, symbol: str, result: str) -> r.Case:
    change = r.CaseChange(
        symbol=symbol,
        text=f"{symbol} = {result}",
        formula="",
        normal="12",
        result=result,
        band="",
    )
    return r.Case(
        name=name, kind="fault", line=line, changes=(change,), description="single fault", basis=""
    )


CASES = (
    r.Case(name="normal", kind="normal", line="", changes=(), description="", basis=""),
    _fault("one LED shorted", "2.1", "n_LED", "11"),
    _fault("one LED open", "2.2", "n_LED", "0"),
)
