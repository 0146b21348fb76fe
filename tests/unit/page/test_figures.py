"""Figures on both pages: labels, text alternatives, and bytes that are the same twice."""

import io
import os
import re
import subprocess
import sys
from datetime import UTC, datetime
from html import unescape
from pathlib import Path
from xml.etree import ElementTree as ET

import pikepdf
import pytest

from calcdoc.page import charts
from calcdoc.page.axes import apart, spread_out, ticks
from calcdoc.page.html import html
from calcdoc.page.marks import Run, extent, named, per_unit
from calcdoc.page.pdf import pdf, sheet_html
from calcdoc.page.plot import svg
from calcdoc.records.record import AnyFigure, Curve, Margins, Record
from tests.helpers.design import worked
from tests.helpers.pages import DESIGNS, record

ISSUED = datetime(2026, 11, 20, tzinfo=UTC)
INKS = {"#1b1f24", "#57606a", "#0f5f5c", "#dbe8e6", "#8f2f1b", "#ffffff", "none"}


@pytest.fixture(scope="module")
def shown() -> Record:
    return record("four-figures")


def drawn(figure: AnyFigure) -> str:
    return "".join(svg(each, f"f{figure.number}") for each in charts.drawings(figure))


def texts(picture: str) -> list[str]:
    """The labels of a picture."""
    root = ET.fromstring(picture)  # noqa: S314
    return ["".join(node.itertext()) for node in root.iter("{http://www.w3.org/2000/svg}text")]


def test_axes_are_quantity_divided_by_unit(shown: Record) -> None:
    """T22: a symbol, a solidus, the unit; nothing in brackets but a compound unit."""
    labels = [texts(drawn(each)) for each in shown.figures]
    assert {"Vk/V", "Rs/Ω"} <= set(labels[0])
    assert {"Tk/°C", "Ta/°C"} <= set(labels[1])
    assert {"Vk/V", "share of draws/%"} <= set(labels[2])
    assert {"Tk/°C", "share of draws/%"} <= set(labels[3])
    assert "change of Fk" in labels[4]
    assert "change of Tk/K" in labels[5]
    assert "margin as a share of the limit/%" in labels[6]


def test_symbols_are_italic_with_an_upright_subscript() -> None:
    """T1: the base in italic serif, a descriptive subscript upright; units upright."""
    assert named("V_reg_max") == (
        Run("V", serif=True, italic=True),
        Run("reg,max", serif=True, low=True),
    )
    assert per_unit("R_th", "K/W")[-1] == Run("/(K/W)", serif=True)
    assert per_unit("n", "") == (Run("n", serif=True, italic=True),)


def test_lines_are_named_where_they_end(shown: Record) -> None:
    """No key: nominal, least, greatest and the limit stand beside their lines."""
    for number, limit in ((0, "limit Vhalf + 6 V"), (1, "limit 80 °C")):
        assert {"nominal", "least", "greatest", limit} <= {
            each.replace("\u00a0", " ") for each in texts(drawn(shown.figures[number]))
        }


def test_labels_stay_on_the_paper(shown: Record) -> None:
    """Every label, as wide as it can be, lies within the picture, so that nothing is cut off."""
    for figure in shown.figures:
        for one in charts.drawings(figure):
            frame = one.frame
            for label in one.labels:
                wide = extent(label.runs, label.size)
                left = frame.left + frame.points_x(label.x) + label.right
                left -= {"start": 0.0, "middle": 0.5, "end": 1.0}[label.anchor] * wide
                assert -6 < left < left + wide < frame.width + 6, label


def test_numbers_have_a_true_minus(shown: Record) -> None:
    """T17: no hyphen stands for a minus in any label."""
    for figure in shown.figures:
        assert [each for each in texts(drawn(figure)) if re.search(r"-[0-9]", each)] == []
    assert "−20" in texts(drawn(shown.figures[1]))


def test_verdicts_stand_in_words_and_failures_are_hatched(shown: Record) -> None:
    """A margin names its verdict; one without a share has its difference and no bar."""
    picture = drawn(shown.figures[6])
    labels = [each.replace("\u00a0", " ") for each in texts(picture)]
    assert labels.count("pass") == 4
    assert labels.count("fail") == 2
    assert {"−3.5 K", "9.2 V", "−2.7 %"} <= set(labels)
    assert picture.count("<pattern") == 1


def test_inks_are_those_of_the_sheet(shown: Record) -> None:
    """Ink, the accent and its tint, red-brown for failures; the screen changes each by its name."""
    used = {
        ink
        for each in shown.figures
        for ink in re.findall(r'(?:fill|stroke)="([^"]+)"', drawn(each))
    }
    assert {each for each in used if not each.startswith("url(")} <= INKS
    page = html(shown, b"{}")
    for ink in INKS - {"none"}:
        assert f'.fig [fill="{ink}"]' in page


def test_same_bytes_twice_and_no_date(shown: Record) -> None:
    """Equal figures give equal pictures, without stamps, styles or ids that could meet others."""
    for figure in shown.figures:
        one, other = drawn(figure), drawn(figure)
        assert one == other
        assert "metadata" not in one
        assert " style=" not in one
        assert "<use" not in one
        ids = re.findall(r' id="([^"]+)"', one)
        assert all(each.startswith(f"f{figure.number}-") for each in ids)


def test_settings_of_the_library_are_left_alone(shown: Record) -> None:
    """Drawing changes no setting of matplotlib, and none of the user's reaches the picture."""
    import matplotlib as mpl  # noqa: PLC0415

    before = drawn(shown.figures[0])
    with mpl.rc_context({"lines.linewidth": 9, "axes.facecolor": "red", "path.sketch": (9, 9, 9)}):
        kept = dict(mpl.rcParams)
        assert drawn(shown.figures[0]) == before
        assert dict(mpl.rcParams) == kept


def test_html_tells_what_the_picture_shows(shown: Record) -> None:
    """A picture is an image with a label, and its caption has its number."""
    page = html(shown, b"{}")
    labels = [unescape(each) for each in re.findall(r'<svg role="img" aria-label="([^"]*)"', page)]
    assert labels == [each.alternative for each in shown.figures]
    numbers = re.findall(r"<figcaption><b>Figure ([0-9]+)\.</b>", page)
    assert numbers == ["1", "2", "3", "4", "5", "6", "7"]
    assert "Temperature of the load.." not in page


def test_sheet_has_the_alternative_as_title(shown: Record) -> None:
    """The layout engine takes the alternative text of a picture from its title."""
    page = sheet_html(shown, b"{}", ISSUED)
    titles = [unescape(each) for each in re.findall(r"<svg [^>]*><title>([^<]*)</title>", page)]
    assert titles == [each.alternative for each in shown.figures]


def test_ids_are_unique_on_a_page(shown: Record) -> None:
    """Several pictures stand on one page, so no id may come twice."""
    found = re.findall(r' id="([^"]+)"', html(shown, b"{}"))
    assert sorted(set(found)) == sorted(found)


def test_many_criteria_go_on_in_a_further_picture() -> None:
    """A sheet holds 40 rows; all parts share one scale, and the first one tells of all."""
    lines = "\n".join(f"R{n}: a <= {n + 2} V" for n in range(45))
    made = worked(inputs="a = 1 V ± 10 %", criteria=lines, figure="margins | all").record
    (figure,) = made.figures
    assert isinstance(figure, Margins)
    one, other = charts.drawings(figure)
    assert one.frame.x == other.frame.x
    assert texts(svg(other, "f"))[0] == "R40"
    page = html(made, b"{}")
    assert page.count('class="pic"') == 2
    assert 'aria-label="Figure 1, continued."' in page


@pytest.mark.parametrize(
    ("derive", "low", "high"),
    [("y = x*1e-90", "1", "2"), ("y = x*1e90", "1", "2"), ("y = 1000 + x*1e-12", "1", "2"),
     ("y = x*0", "1", "2"), ("y = if(x < 1.5, 0, 1)", "1", "2"), ("y = 1/(x - 1.5)", "1", "2")],
)  # fmt: skip
def test_odd_curves_are_drawn(derive: str, low: str, high: str) -> None:
    """Tiny, huge, level, jumping and running off: there is a picture, and no number is NaN."""
    made = worked(inputs="x = 1.1 ± 1 %", derive=derive,
                  figure=f"curve y against x from {low} to {high} with 1 | odd").record  # fmt: skip
    (figure,) = made.figures
    assert isinstance(figure, Curve)
    assert "nan" not in drawn(figure).lower()


def test_long_names_leave_room_for_the_bars() -> None:
    """Names of sixty letters are set smaller, and the axes keep their width."""
    name = "V_" + "long" * 15
    made = worked(
        inputs=f"{name} = 1 V ± 10 %",
        derive=f"y = 2*{name}",
        criteria=f"R_{'x' * 60}: y <= 3 V",
        figure=f"sensitivities of y | a\nmargins | b\nspread of {name} | c\n"
        f"curve y against {name} from 1 V to 2 V with {name} | d",
    ).record
    for figure in made.figures:
        (one,) = charts.drawings(figure)
        assert one.frame.width - one.frame.left - one.frame.right > 80
        assert name.removeprefix("V_")[:10] in drawn(figure) or isinstance(figure, Margins)


def test_ticks_are_round_and_few() -> None:
    """Steps of one, two or five times a power of ten, within the axis."""
    assert ticks(4.7, 22.0, 8) == (5.0, 10.0, 15.0, 20.0)
    assert ticks(0.0, 1.0, 5) == (0.0, 0.5, 1.0)
    assert ticks(-3.0, 3.0, 8) == (-3.0, -2.0, -1.0, 0.0, 1.0, 2.0, 3.0)
    assert ticks(1e-9, 3e-9, 5) == (1e-9, 1.5e-9, 2e-9, 2.5e-9, 3e-9)


def test_names_keep_apart() -> None:
    """Labels at the ends of lines move as little as they must, and in their order."""
    assert apart([0.0, 100.0], 10.0) == [0.0, 100.0]
    assert apart([50.0, 50.0, 52.0], 10.0) == pytest.approx([40.667, 50.667, 60.667], abs=0.001)


def test_names_of_rules_touch_no_rule() -> None:
    """Three close rules: the middle one's name stands a row higher, between the others."""
    places = spread_out([(100.0, 50.0), (120.0, 60.0), (140.0, 50.0)], 0.0, 300.0)
    assert [each.row for each in places].count(1) <= 1
    assert max(each.row for each in places) == 1


def test_check_loads_no_matplotlib(tmp_path: Path) -> None:
    """A check, also as JSON with its figures, draws nothing and loads nothing that draws."""
    design = DESIGNS / "quay-stair-light-230.md"
    program = (
        "import sys\nfrom calcdoc.commands.main import run\n"
        f"run(['check', {str(design)!r}, '--format', 'json'])\n"
        "print(sorted({'matplotlib', 'weasyprint'} & set(sys.modules)))\n"
    )
    said = subprocess.run(  # noqa: S603
        [sys.executable, "-c", program],
        capture_output=True,
        text=True,
        check=True,
        cwd=tmp_path,
        env={**os.environ, "PYTHONPATH": str(DESIGNS.parent)},
    )
    assert said.stdout.splitlines()[-1] == "[]"
    assert '"kind": "curve"' in said.stdout


@pytest.mark.slow
@pytest.mark.timeout(180)
@pytest.mark.filterwarnings("ignore::ResourceWarning")
@pytest.mark.filterwarnings("ignore::pytest.PytestUnraisableExceptionWarning")
def test_sheets_tell_what_pictures_show_and_hold_each_whole(shown: Record) -> None:
    """Every picture of the PDF has its alternative text, its labels are text on one sheet."""
    written = pdf(shown, b"", b"{}", issued=ISSUED)
    with pikepdf.open(io.BytesIO(written)) as file:
        found = [
            str(each.Alt)
            for each in file.objects
            if isinstance(each, pikepdf.Dictionary) and each.get("/S") == "/Figure"
        ]
    assert sorted(found) == sorted(each.alternative for each in shown.figures)
    assert pdf(shown, b"", b"{}", issued=ISSUED) == written
