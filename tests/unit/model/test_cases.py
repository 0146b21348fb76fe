"""Cases, scopes, routes, acceptances and measurements in the model."""

from fractions import Fraction

import pytest

from calcdoc.model.accepting import expired
from calcdoc.model.model import Chosen, Judged, Model
from calcdoc.text.cases import NORMAL
from calcdoc.text.given import Given
from calcdoc.text.statements import Uncalculated
from calcdoc.text.unparse import unparse
from calcdoc.units.dimension import POWER
from tests.helpers.checking import TITLE, codes
from tests.unit.model.test_build import model_of

LAMP = (
    "```conditions\nV = 230 V ± 10 %\nT_a = 25 °C\n```\n"
    "```inputs\nI = 20 mA ± 1 %\nn = 12\nx = 3\n```\n"
    "```derive\nP = V*I\nP_n = P/n\n```\n"
    "```cases\nfault two LEDs shorted: n = n - 2\n"
    "mode dim: I = 1 mA\n"
    "fault hot: T_a = T_a + 20 K, I = 20 mA ± 5 %\n```\n"
    "```criteria\n"
    "A: P <= 5 W\n"
    "B: P <= 5 W in every fault when P_n < 1 W\n"
    "C: P <= 5 W in every case\n"
    "D: P <= 5 W in hot, normal\n"
    "E: by test: heat\n"
    "F: any of D, E\n"
    "accept D in hot | reason | until 2027-06-30\n"
    "accept F | reason | until 2027-06-30\n```\n"
    "```crosschecks\nK: P against 3*P_n within 400 %\n"
    "L: measured P_m = 4.6 W ± 1 % against P at V = 231 V\n```\n"
)


@pytest.fixture(scope="module")
def lamp() -> Model:
    """A lamp with a mode and two faults."""
    return model_of(LAMP)


def judged(model: Model, name: str) -> Judged:
    """A calculated criterion by its id."""
    found = next(
        each
        for each in model.criteria
        if isinstance(each, Judged) and each.statement.id.name == name
    )
    assert isinstance(found, Judged)
    return found


def test_cases_and_changes(lamp: Model) -> None:
    """Modes and faults in the author's order, with a value or a formula for each change."""
    assert [(each.name, each.kind) for each in lamp.cases] == [
        ("two LEDs shorted", "fault"), ("dim", "mode"), ("hot", "fault"),
    ]  # fmt: skip
    two, dim, hot = lamp.cases
    assert list(two.changes) == ["n"]
    assert not isinstance(two.changes["n"], Given)
    assert unparse(two.changes["n"]) == "n - 2"
    given = dim.changes["I"]
    assert isinstance(given, Given)
    assert (given.nominal, given.varies) == (Fraction(1), False)
    assert list(hot.changes) == ["T_a", "I"]


@pytest.mark.parametrize(
    ("name", "cases"),
    [
        ("A", (NORMAL, "dim")),
        ("B", ("two LEDs shorted", "hot")),
        ("C", (NORMAL, "two LEDs shorted", "dim", "hot")),
        ("D", (NORMAL, "hot")),
    ],
)
def test_where_a_criterion_is_judged(lamp: Model, name: str, cases: tuple[str, ...]) -> None:
    """Normal and every mode by default; else as its `in` says, normal first."""
    assert judged(lamp, name).cases == cases


def test_a_criterion_rests_on_its_condition(lamp: Model) -> None:
    """What a `when` names is among the uses of a criterion."""
    assert judged(lamp, "A").depends_on == ("P",)
    assert judged(lamp, "B").depends_on == ("P", "P_n")


def test_routes(lamp: Model) -> None:
    """`any of` knows its members, calculated or not, and keeps its place."""
    assert isinstance(lamp.criteria[4], Uncalculated)
    chosen = lamp.criteria[5]
    assert isinstance(chosen, Chosen)
    assert chosen.members == ("D", "E")


def test_acceptances(lamp: Model) -> None:
    """An acceptance knows its criterion and its cases; none means all."""
    found = [(each.criterion, each.cases) for each in lamp.acceptances]
    assert found == [("D", ("hot",)), ("F", ())]
    assert expired(lamp) == ()


def test_measurements(lamp: Model) -> None:
    """A measurement is apart from the cross-checks, typed by what it is compared with."""
    assert [each.statement.id.name for each in lamp.crosschecks] == ["K"]
    (found,) = lamp.measurements
    assert (found.statement.id.name, found.typed.dimension) == ("L", POWER)
    assert found.depends_on == ("P",)


def test_cases_do_not_change_the_order_of_computation(lamp: Model) -> None:
    """A case may name what is derived: it reads normal values."""
    model = model_of(LAMP.replace("n = n - 2", "x = P/(1 W)"))
    assert model.order == lamp.order


@pytest.mark.parametrize("change", ["x = y", "y = 3"])
def test_a_case_with_an_unknown_name_is_reported_once(change: str) -> None:
    """An unknown symbol is one finding, and criteria that name the case are not blamed."""
    text = f"```inputs\nx = 3\n```\n```cases\nmode dim: {change}\n```\n"
    assert codes(f"{text}```criteria\nA: x <= 3 in dim\n```\n" + TITLE) == ("unknown-symbol",)


def test_a_wrong_line_is_not_blamed_twice() -> None:
    """A case, a condition and a measurement that rest on a wrong line say nothing more."""
    text = (
        "```derive\ny = 3 V + 2 A\n```\n```inputs\nx = 3 V\n```\n"
        "```cases\nmode dim: x = y*(1 V)\n```\n```criteria\nA: x <= 3 V when y*(1 A) > 2 W\n```\n"
        "```crosschecks\nK: measured z = 3 V ± 1 % against y*(2 A)\n```\n"
    )
    assert codes(text + TITLE) == ("unit-mismatch",)


def test_when_in_a_formula_of_a_series() -> None:
    """The running index is known in the condition of `if`."""
    model = model_of("```derive\nX[n] = if(n > 3, 2*n, 1) for n in 1..5\n```\n")
    index = model.variables["X"].index
    assert index is not None
    assert index.values == (1, 2, 3, 4, 5)
