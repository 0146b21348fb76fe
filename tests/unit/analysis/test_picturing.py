"""The numbers of figures against formulas and hand arithmetic."""

import math
from pathlib import Path

import pytest

from calcdoc import pipeline
from calcdoc.records.record import Curve, FigureLine, Margins, Record, Sensitivities, Spread
from tests.helpers.checking import TITLE, findings_of
from tests.helpers.design import worked

SUPPLY = "V_line = 230 V ± 10 %"
PARTS = "C_res = 10 µF ± 20 %\nI_reg = 30 mA ± 5 %"
LINES = "ΔV [V] = (10 ms)*I_reg/C_res\nV_min [V] = V_line - ΔV"


def record_of(figure: str, **blocks: str) -> Record:
    lines = {} if "inputs" in blocks else {"derive": LINES}
    given = {"conditions": SUPPLY, "inputs": PARTS, **lines, **blocks}
    return worked(**given, figure=figure).record


def curve(figure: str, **blocks: str) -> Curve:
    (found,) = record_of(figure, **blocks).figures
    assert isinstance(found, Curve)
    return found


def spread(figure: str, **blocks: str) -> Spread:
    (found,) = record_of(figure, **blocks).figures
    assert isinstance(found, Spread)
    return found


# --- curves ------------------------------------------------------------------------------------


def test_curve_follows_its_formula_with_the_band_of_all_else() -> None:
    """Nominal is 230 V - 0.3 A·ms/C; the band moves line and current, never the capacitance."""
    found = curve("curve V_min against C_res from 5 µF to 20 µF | valley")
    assert len(found.axis) == 61
    assert (found.axis[0], found.axis[-1]) == (5.0, 20.0)
    rows = zip(found.axis, found.nominal, found.least, found.greatest, strict=True)
    for micro, nominal, least, greatest in rows:
        assert nominal == pytest.approx(230 - 300 / micro, rel=1e-11)
        assert least == pytest.approx(207 - 315 / micro, rel=1e-11)
        assert greatest == pytest.approx(253 - 285 / micro, rel=1e-11)
    assert found.at_nominal == (10.0, 200.0)


def test_curve_of_an_input_without_band() -> None:
    """An input that does not vary can be an axis, and so can a condition."""
    blocks = {"inputs": "C_res = 10 µF\nI_reg = 30 mA", "derive": LINES}
    found = curve("curve V_min against C_res from 5 µF to 20 µF | valley", **blocks)
    assert found.nominal[0] == pytest.approx(170.0)
    assert found.least[0] == pytest.approx(147.0)
    found = curve("curve V_min against V_line from 100 V to 300 V | valley", **blocks)
    assert found.least == found.nominal == found.greatest
    assert found.nominal[0] == pytest.approx(70.0)


def test_extreme_inside_the_band_is_found() -> None:
    """x*(1 - x) + y is least and greatest over y alone; over x = 0.3 to 0.7 its top is inside."""
    found = curve(
        "curve z against y from 0 to 1 | inside",
        inputs="x = 0.3 .. 0.7\ny = 0.5 ± 1 %",
        derive="z = x*(1 - x) + y",
    )
    assert found.greatest[0] == pytest.approx(0.25)
    assert found.least[0] == pytest.approx(0.21)


def test_limit_is_met_where_the_formulas_say() -> None:
    """200 V is met at nominal where 300/C = 30, at greatest where 285/C = 53; least stays below."""
    found = curve("curve V_min against C_res from 5 µF to 20 µF with 200 V | valley")
    meetings = {each.end: each for each in found.meetings}
    assert meetings["nominal"].at == pytest.approx((10.0,), rel=1e-5)
    assert meetings["greatest"].at == pytest.approx((285 / 53,), rel=1e-5)
    assert (meetings["least"].at, meetings["least"].side) == ((), "below")
    assert (found.limit, found.limit_least) == ((200.0,), ())


def test_limit_that_moves_with_the_curve_is_compared_at_one_combination() -> None:
    """V_line - ΔV against V_line - 30 V: the line cancels, only the current counts."""
    found = curve("curve V_min against C_res from 5 µF to 20 µF with V_line - 30 V | valley")
    meetings = {each.end: each.at for each in found.meetings}
    assert meetings["nominal"] == pytest.approx((10.0,), rel=1e-5)
    assert meetings["least"] == pytest.approx((10.5,), rel=1e-4)
    assert meetings["greatest"] == pytest.approx((9.5,), rel=1e-4)
    assert found.limit_least[0] == pytest.approx(177.0)


def test_jump_over_the_limit_is_placed() -> None:
    """A formula that jumps at 5.1 meets its limit there, not somewhere between two points."""
    found = curve("curve y against x from 1 to 9 with 1.5 | jump",
                  inputs="x = 5 ± 1 %", derive="y = if(x < 5.1, 1, 2)")  # fmt: skip
    assert found.meetings[0].at == pytest.approx((5.1,), rel=1e-5)


def test_gaps_are_none_and_said() -> None:
    """Where the root is of a negative value there is no point, and the alternative says where."""
    found = curve(
        "curve y against x from -3 to 3 | root", inputs="x = 2 ± 10 %", derive="y = sqrt(x)"
    )
    assert found.nominal[:30] == (None,) * 30
    assert found.nominal[30] == 0.0
    assert found.nominal[-1] == pytest.approx(math.sqrt(3))
    assert "At 30 of 61 points y cannot be computed, between −3 and −0.1." in found.alternative


def test_temperatures_keep_their_scale() -> None:
    """Axis and curve are on the Celsius scale."""
    found = curve(
        "curve T_j against T_a from -20 °C to 60 °C with 80 °C | junction",
        inputs="T_a = 25 °C ± 5 K\nP = 2 W ± 10 %\nR_th = 10 K/W",
        derive="T_j [°C] = T_a + P*R_th",
    )
    assert (found.axis[0], found.nominal[0]) == (-20.0, 0.0)
    assert found.least[0] == pytest.approx(-2.0)
    assert found.against_unit == found.unit == "°C"
    assert found.meetings[0].at == pytest.approx((60.0,))


# --- spreads -----------------------------------------------------------------------------------


def test_spread_of_one_rectangular_part() -> None:
    """A rectangular part has mean 100 and standard deviation 10/√3; its bins are even."""
    found = spread("spread of R | part", inputs="R = 100 Ω ± 10 %")
    assert (found.draws, found.seed, found.lost) == (100_000, 1, 0)
    assert sum(found.counts) == 100_000
    assert len(found.counts) == 40
    assert found.mean == pytest.approx(100, abs=4 * 10 / math.sqrt(3e5))
    assert found.deviation == pytest.approx(10 / math.sqrt(3), rel=0.01)
    assert all(abs(each - 2500) < 5 * 50 for each in found.counts)
    assert (found.least, found.nominal, found.greatest) == (90.0, 100.0, 110.0)
    assert found.assumed == ("R",)


def test_spread_of_a_stated_distribution() -> None:
    """A normal part at three standard deviations is not assumed, and has a third of its limit."""
    found = spread("spread of R | part", inputs="R = 100 Ω ± 9 % as normal k=3")
    assert found.deviation == pytest.approx(3.0, rel=0.01)
    assert found.assumed == ()


def test_conditions_stand_where_they_govern_the_criterion() -> None:
    """V_min >= 150 V is governed at 207 V: mean 207 V less the mean of the ripple."""
    found = spread("spread of V_min | valley", criteria="R1: V_min >= 150 V")
    ripple = 300 / 4 * math.log(12 / 8) / 10 * 10  # mean of 300/C over 8 to 12 µF, in V
    assert found.mean == pytest.approx(207 - ripple, abs=0.05)
    assert found.fixed == {"V_line": "207 V"}
    assert found.criterion == "R1"
    assert found.least == pytest.approx(207 - 31.5 / 0.8)
    assert found.greatest == pytest.approx(207 - 28.5 / 1.2)
    assert [(each.criterion, each.value) for each in found.limits] == [("R1", 150.0)]


def test_without_a_criterion_conditions_stand_at_nominal() -> None:
    """A criterion on something else, or on a sum, says nothing about where to stand."""
    found = spread("spread of V_min with 150 V | valley", criteria="R1: V_min + 0 V >= 150 V")
    assert (found.criterion, found.fixed, found.nominal) == ("", {}, 200.0)
    assert [(each.criterion, each.value) for each in found.limits] == [("", 150.0)]


def test_biases_stand_at_the_worse_end() -> None:
    """A lower limit holds the bias at -10 %, an upper one at zero."""
    inputs = "R = 100 Ω ± 1 % bias -10 % .. 0 % (ageing)"
    low = spread("spread of R_2 | two", inputs=inputs, derive="R_2 [Ω] = 2*R",
                 criteria="R1: R_2 >= 150 Ω")  # fmt: skip
    high = spread("spread of R_2 | two", inputs=inputs, derive="R_2 [Ω] = 2*R",
                  criteria="R1: R_2 <= 250 Ω")  # fmt: skip
    assert low.mean == pytest.approx(180, rel=1e-3)
    assert high.mean == pytest.approx(200, rel=1e-3)
    assert low.fixed == {"R": "90 Ω"}


def test_the_nearest_criterion_decides_and_two_sided_ones_show_both_limits() -> None:
    """Of several the one with the least distance; every limit is marked."""
    found = spread("spread of V_min | valley",
                   criteria="R1: V_min >= 20 V\nR2: 100 V <= V_min <= 230 V")  # fmt: skip
    assert found.criterion == "R2"
    assert found.fixed == {"V_line": "253 V"}
    assert [each.value for each in found.limits] == [20.0, 100.0, 230.0]


def drawn(folder: Path, sampling: str) -> Spread:
    """The spread of one part, with settings in the title block."""
    path = folder / "lamp.md"
    title = TITLE.rstrip().removesuffix("```") + f"[sampling]\n{sampling}\n```\n"
    path.write_text(
        f"{title}```inputs\nR = 100 Ω ± 10 %\n```\n```figure\nspread of R | part\n```\n"
    )
    (found,) = pipeline.record(pipeline.evaluate(pipeline.read(path))).figures
    assert isinstance(found, Spread)
    return found


def test_draws_and_seed_of_the_title_block(tmp_path: Path) -> None:
    """They are taken from it; another seed gives other draws, a figure takes 100 000 at most."""
    one = drawn(tmp_path, "draws = 500\nseed = 3")
    assert (one.draws, one.seed, sum(one.counts)) == (500, 3, 500)
    assert drawn(tmp_path, "draws = 500\nseed = 3") == one
    assert drawn(tmp_path, "draws = 500\nseed = 4").counts != one.counts
    assert drawn(tmp_path, "draws = 2000000").draws == 100_000


def test_draws_that_cannot_be_computed_are_counted() -> None:
    """A normal part goes beyond its limits: draws below zero are left out and said."""
    found = spread("spread of y | root", inputs="x = 1 ± 100 % as normal k=3", derive="y = sqrt(x)")
    assert 80 < found.lost < 200  # 135 in 100 000 are beyond three standard deviations below
    assert sum(found.counts) == found.draws - found.lost
    assert f"{found.lost} draws could not be computed and are left out." in found.alternative


# --- sensitivities and margins -----------------------------------------------------------------


def test_sensitivities_against_hand_arithmetic() -> None:
    """V_min = 230 V - 30 V: the line makes ±23 V, C -7.5 V and +5 V, I +1.5 V and -1.5 V."""
    (found,) = record_of("sensitivities of V_min | what drives it").figures
    assert isinstance(found, Sensitivities)
    assert [each.symbol for each in found.rows] == ["V_line", "C_res", "I_reg"]
    assert [each.low for each in found.rows] == pytest.approx([-23.0, -7.5, 1.5])
    assert [each.high for each in found.rows] == pytest.approx([23.0, 5.0, -1.5])
    assert [(each.at_least, each.at_greatest) for each in found.rows][1] == ("8 µF", "12 µF")
    assert (found.rows[1].low_text, found.rows[1].high_text) == ("−7.50\u00a0V", "+5.00\u00a0V")
    assert found.left_out == 0


def test_sensitivities_leave_out_the_smallest() -> None:
    """Twelve are shown, and how many more there are is said."""
    names = [f"a_{n}" for n in range(1, 15)]
    (found,) = record_of(
        "sensitivities of s | sum",
        inputs="\n".join(f"{each} = 1 ± {n} %" for n, each in enumerate(names, 1)),
        derive=f"s = {' + '.join(names)}",
    ).figures
    assert isinstance(found, Sensitivities)
    assert [each.symbol for each in found.rows] == names[:1:-1]
    assert found.left_out == 2
    assert found.notes == ("2 inputs with smaller changes left out.",)


def test_margins_are_those_of_the_criteria() -> None:
    """Every calculated criterion is there, one on a temperature or zero without a share."""
    record = record_of(
        "margins | distance",
        criteria="R1: V_min >= 150 V\nR2: V_min >= 190 V\nR3: V_min - 100 V >= 0 V\n"
        "T1: by test: temperature",
    )
    (found,) = record.figures
    assert isinstance(found, Margins)
    assert [(each.id, each.verdict) for each in found.rows] == [
        ("R1", "pass"), ("R2", "fail"), ("R3", "pass"),
    ]  # fmt: skip
    assert [each.margin for each in found.rows] == [each.margin for each in record.criteria[:3]]
    assert found.rows[2].margin is None


TABLE = """\
title = "Derating of a resistor"
edition = "1"
clause = "fig. 1"
rows = [[0, 100], [100, 50]]

[value]
unit = "%"

[[axis]]
name = "supply"
unit = "V"
rule = "linear"
"""


def test_curve_through_a_table_of_its_axis_is_refused(tmp_path: Path) -> None:
    """A table is read once for the whole band, so a curve along its argument would be wrong."""
    (tmp_path / "tables").mkdir()
    (tmp_path / "tables" / "derate.toml").write_text(TABLE)
    path = tmp_path / "lamp.md"
    path.write_text(
        TITLE + "```inputs\nV_s = 40 V ± 5 V\nP_r = 1 W ± 5 %\n```\n"
        '```derive\nk_T = lookup("derate", V_s)\nP_max [W] = P_r*k_T\n```\n'
        "```figure\ncurve P_max against V_s from 0 V to 90 V | wrong\n"
        "curve P_max against P_r from 0.5 W to 2 W | right\n```\n"
    )
    design = pipeline.read(path)
    assert [each.message for each in design.findings] == [
        "a curve against `V_s`, through which a table is read, is not available yet"
    ]


def test_figures_are_numbered_in_order() -> None:
    """Numbers run through blocks, and each has its place in the body."""
    record = record_of(
        "spread of V_min | a\nsensitivities of V_min | b\ncurve V_min against I_reg from 1 mA to"
        " 2 mA | c"
    )
    assert [each.number for each in record.figures] == [1, 2, 3]
    lines = [each.number for each in record.body if isinstance(each, FigureLine)]
    assert lines == [1, 2, 3]


def test_nothing_is_found_wrong_with_a_figure_of_a_broken_line() -> None:
    """A figure of a quantity whose own line is wrong adds no finding to that of the line."""
    text = (
        '```document\nnumber = "1"\ntitle = "t"\nrevision = "A"\n```\n'
        "```inputs\na = 1 V ± 10 %\n```\n```derive\nb [A] = 2*a\n```\n"
        "```figure\nspread of b | x\ncurve b against a from 1 V to 2 V | y\n```\n"
    )
    assert [each.code for each in findings_of(text)] == ["display-unit"]
