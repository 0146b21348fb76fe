"""The model: names resolved, formulas typed, in an order that can be computed."""

from fractions import Fraction

import pytest

from calcdoc.model.build import build
from calcdoc.model.constants import CONSTANTS
from calcdoc.model.model import Judged, Model
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document
from calcdoc.text.names import CONSTANTS as NAMES
from calcdoc.text.names import fold
from calcdoc.units.dimension import CURRENT, ONE, POWER, TEMPERATURE, VOLTAGE, Dimension
from tests.helpers.checking import TITLE, codes

LAMP = (
    "```criteria\nK: P <= 5 W\nL: by test: heat\n```\n"
    "```derive\nP = V*I\nI [mA] = V/R\nT_b = T_a + P*R_th\n```\n"
    "```inputs\nR = 5 kΩ ± 1 %\nT_a = 40 °C\nR_th = 3 K/W\nC = 10 µF\n```\n"
    "```conditions\nV = 230 V ± 10 %\n```\n"
    "```hazards\nstored C at V through R\nstored C at V\nnot isolated\n```\n"
)


def model_of(text: str) -> Model:
    """The model of a text without findings."""
    document, findings = read_document(SourceFile("lamp.md", TITLE + text))
    assert document is not None
    model, more = build(document)
    assert (*findings, *more) == ()
    assert model is not None
    return model


def test_order_of_computation() -> None:
    """Every quantity comes after those it depends on, whatever the author's order."""
    model = model_of(LAMP)
    assert set(model.order) == set(model.variables)
    for at, key in enumerate(model.order):
        assert set(model.variables[key].depends_on) <= set(model.order[:at])
    assert list(model.variables) == ["P", "I", "T_b", "R", "T_a", "R_th", "C", "V"]
    assert model.variables["P"].depends_on == ("V", "I")


def test_types() -> None:
    """Dimensions and temperature weights follow from the formulas."""
    variables = model_of(LAMP).variables
    types = {key: (each.typed.dimension, int(each.typed.weight)) for key, each in variables.items()}
    assert types["P"] == (POWER, 0)
    assert types["I"] == (CURRENT, 0)
    assert types["R"] == (VOLTAGE / CURRENT, 0)
    assert types["T_a"] == (TEMPERATURE, 1)
    assert types["T_b"] == (TEMPERATURE, 1)
    assert types["R_th"] == (TEMPERATURE / POWER, 0)


def test_units_shown() -> None:
    """The unit in brackets or of the given value; none where a prefix is to be chosen."""
    variables = model_of(LAMP).variables
    shown = {key: each.unit.text if each.unit else None for key, each in variables.items()}
    assert shown == {
        "P": None,
        "I": "mA",
        "T_b": None,
        "R": "kΩ",
        "T_a": "°C",
        "R_th": "K/W",
        "C": "µF",
        "V": "V",
    }


def test_criteria_and_discharges() -> None:
    """Criteria know what they rest on; a store without a resistor has none."""
    model = model_of(LAMP)
    judged, untested = model.criteria
    assert isinstance(judged, Judged)
    assert (judged.typed.dimension, judged.depends_on) == (POWER, ("P",))
    assert not isinstance(untested, Judged)
    assert [(each.capacitance, each.voltage, each.resistance) for each in model.discharges] == [
        ("C", "V", "R"),
        ("C", "V", None),
    ]


def test_names_are_compared_folded() -> None:
    """A symbol may be spelled in each of its ways."""
    model = model_of(
        "```inputs\ntheta_JA = 5 K/W\n\u2206V = 3 V\n```\n```derive\na = θ_JA*2\nb = ΔV*2\n```\n"
    )
    assert [each.symbol for each in model.variables.values()] == ["theta_JA", "\u2206V", "a", "b"]
    assert model.variables["a"].depends_on == (fold("theta_JA"),)


WEIGHTS = [
    ("T_1", 1),
    ("T_1 + 5 K", 1),
    ("T_1 - T_2", 0),
    ("(T_1 + T_2)/2", 1),
    ("0.25*T_1 + 0.75*T_2", 1),
    ("T_1 + k*(T_2 - T_1)", 1),
    ("2*T_1 - T_2", 1),
    ("sum(T_1, T_2)/2", 1),
    ("min(T_1, T_2)", 1),
    ("if(k > 1, T_1, T_2)", 1),
    ("(T_1 - T_2)*k", 0),
    ("-(T_1 - T_2)", 0),
    ("abs(T_1 - T_2)", 0),
    ("50 %*T_1 + T_2/2", 1),
]


@pytest.mark.parametrize(("formula", "weight"), WEIGHTS, ids=[each[0] for each in WEIGHTS])
def test_temperature_weight(formula: str, weight: int) -> None:
    """Sums add weights, plain factors scale them, differences have none."""
    model = model_of(
        f"```inputs\nT_1 = 20 °C\nT_2 = 30 °C\nk = 2\n```\n```derive\nx = {formula}\n```\n"
    )
    assert model.variables["x"].typed.dimension == TEMPERATURE
    assert model.variables["x"].typed.weight == weight


DIMENSIONS = [
    ("T_1/(10 K)", ONE),
    ("T_1*R", TEMPERATURE * VOLTAGE / CURRENT),
    ("sqrt(V*V)", VOLTAGE),
    ("V^2/R", POWER),
    ("(V^(1/2))^2", VOLTAGE),
    ("V^(2*3 - 5)", VOLTAGE),
    ("V^0", ONE),
    ("2^(V/V)", ONE),
    ("exp(V/(1 V))*V", VOLTAGE),
    ("q_e*V/k_B", TEMPERATURE),
    ("sqrt(epsilon_0*mu_0)*c_0", ONE),
    ("rss(V, 2 mV)", VOLTAGE),
    ("floor(V/(1 V))", ONE),
    ("10 %*V", VOLTAGE),
]


@pytest.mark.parametrize(("formula", "dimension"), DIMENSIONS, ids=[d[0] for d in DIMENSIONS])
def test_dimension(formula: str, dimension: Dimension) -> None:
    """The dimension follows from the formula alone; products reset the temperature weight."""
    model = model_of(
        f"```inputs\nT_1 = 20 °C\nV = 3 V\nR = 5 Ω\n```\n```derive\nx = {formula}\n```\n"
    )
    assert model.variables["x"].typed.dimension == dimension
    assert model.variables["x"].typed.weight == 0


def test_one_mistake_is_said_once() -> None:
    """Lines that rest on a wrong line are still checked, but not blamed for it."""
    text = (
        "```inputs\nV = 5 V\nI = 2 A\n```\n"
        "```derive\na = V + I\nb = a + 1 V\nc [V] = V + I\nd = c + 1 A\ne = q + a\n```\n"
        "```criteria\nK: a <= 5 V\nL: q <= 1\n```\n"
    )
    assert codes(TITLE + text) == (
        "unit-mismatch",  # a
        "unit-mismatch",  # c
        "unit-mismatch",  # d, where c stands for the voltage its author wants
        "unknown-symbol",  # e
        "unknown-symbol",  # L
    )


def test_no_model_from_a_wrong_text() -> None:
    """A mistake leaves no model to compute."""
    document, _ = read_document(SourceFile("lamp.md", TITLE + "```derive\na = b\n```\n"))
    assert document is not None
    assert build(document)[0] is None


def test_constants_are_those_of_codata() -> None:
    """Each constant has the value and unit that the CODATA tables of SciPy have."""
    constants = pytest.importorskip("scipy.constants")
    published = {
        "k_B": ("Boltzmann constant", "J K^-1"),
        "q_e": ("elementary charge", "C"),
        "h_P": ("Planck constant", "J Hz^-1"),
        "c_0": ("speed of light in vacuum", "m s^-1"),
        "epsilon_0": ("vacuum electric permittivity", "F m^-1"),
        "mu_0": ("vacuum mag. permeability", "N A^-2"),
    }
    assert {fold(each) for each in NAMES} == set(CONSTANTS)
    assert set(published) == set(NAMES) - {"pi"}
    for name, (title, unit) in published.items():
        value, in_unit, _ = constants.physical_constants[title]
        ours = CONSTANTS[fold(name)]
        assert ours.value is not None
        assert in_unit == unit
        assert float(ours.value) == pytest.approx(value, rel=2e-9)
    assert CONSTANTS[fold("pi")].value is None


def test_exact_constants() -> None:
    """The constants that define the SI are exact."""
    assert CONSTANTS["k_B"].value == Fraction("1.380649e-23")
    assert CONSTANTS["q_e"].value == Fraction("1.602176634e-19")
    assert CONSTANTS["h_P"].value == Fraction("6.62607015e-34")
    assert CONSTANTS["c_0"].value == 299792458
