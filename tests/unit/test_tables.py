"""Table files: what is wrong with one is said with the file, the line and what to do."""

import re
from pathlib import Path

import pytest

from calcdoc import pipeline
from calcdoc.tables import reader
from calcdoc.tables.reader import TableTrouble, read_table
from tests.helpers.checking import TITLE as BLOCK

GOOD = """\
title = "Creepage distances"
edition = "IEC 60664-1"
clause = "table F.4"
rows = [
    [200, "I", 1.0],
    [250, "I", 1.25, "unverified"],
]

[value]
unit = "mm"

[[axis]]
name = "working voltage"
unit = "V"
rule = "next higher"

[[axis]]
name = "material group"
text = true
"""


def refused(text: str | bytes) -> str:
    """The whole message for a table file that is refused."""
    data = text.encode() if isinstance(text, str) else text
    with pytest.raises(TableTrouble) as caught:
        read_table("lin", data)
    return str(caught.value)


def changed(old: str, new: str) -> str:
    """The good table with one part of it changed."""
    assert GOOD.count(old) == 1
    return GOOD.replace(old, new)


def said(what: str, where: str) -> str:
    """The message that a fault has, with what follows the file's name."""
    return f"the table `lin` cannot be read: {what}\nin tables/lin.toml{where}"


def test_good_table() -> None:
    """The table the others differ from is read, with the mark of its one row."""
    table = read_table("lin", GOOD.encode())
    assert [row.verified for row in table.rows] == [True, False]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (changed('unit = "mm"', "unit = mm"), said("it is not TOML: invalid value", ", line 10")),
        (changed("[250, ", "[250 "), said("it is not TOML: unclosed array", ", line 6")),
        ("rows = [", said("it is not TOML: invalid value", ", line 1")),
        (
            b'title = "a"\nedition = "\xff"\n',
            said("it is not UTF-8", ", line 2: save the file as UTF-8"),
        ),
        (f"a = {'[' * 5000}", said("it is nested too deeply", "")),
        (changed("[250,", f"[{'9' * 5000},"), said("a number in it is too long", "")),
    ],
)
def test_file_that_is_no_toml(text: str | bytes, message: str) -> None:
    """A file that is no TOML is named, with the line where reading it ends."""
    assert refused(text) == message


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('[250, "I", 1.25,', '[250, "I", 1.25, 3,', said(
            "row 2 has 5 entries, expected 3, or 4 with a mark",
            ", line 6: write a place on each axis, then the value",
        )),
        ('[200, "I", 1.0]', "250", said("row 1 is 250, expected a list", "")),
        ('[250, "I"', "[250, 3", said(
            "on the axis material group stand texts, not 3", ", line 6"
        )),
        ("[250,", "[true,", said("true is no number", ", line 6")),
        ("[250,", "[inf,", said("inf is no number to compute with", ", line 6")),
        ("[250,", "[nan,", said("nan is no number to compute with", ", line 6")),
        ("[250,", f"[1{'0' * 301},", said(
            f"1{'0' * 38}… is no number to compute with", ", line 6"
        )),
        ("[250,", "[200,", said("row 2 stands at the same place as row 1", ", line 6")),
        ('unit = "V"', "unit = 3", said("a unit is a text", ", line 14")),
        ('unit = "V"', 'unit = "°C"', said(
            "a table is in kelvin, or in differences", ", line 14"
        )),
    ],
)  # fmt: skip
def test_fault_has_file_and_line(old: str, new: str, message: str) -> None:
    """What is wrong in a row or a section is said with the file and the line."""
    assert refused(changed(old, new)) == message


def test_line_that_is_not_sure() -> None:
    """A bracket in a comment opens no row, and what has no line of its own is said without one."""
    text = changed("rows = [\n", "rows = [ # [not a row]\n").replace("[250,", "[true,")
    assert refused(text) == said("true is no number", ", line 6")
    inline = 'title = "a"\nedition = "b"\nclause = "c"\nrows = [[1, 2]]\naxis = [{name = 3}]\n'
    assert refused(inline) == said("`name` is 3, expected a text", "")


@pytest.mark.parametrize(
    ("written", "shown"),
    [
        ('"no"', '"no"'),
        ('"false"', '"false"'),
        ('"unverified"', '"unverified"'),
        ("0", "0"),
        ("[]", "a list"),
        ("{}", "a table"),
    ],
)
def test_mark_of_the_table_is_strict(written: str, shown: str) -> None:
    """The mark of a table is true or false; no other value counts as either."""
    assert refused(f"verified = {written}\n{GOOD}") == said(
        f"`verified` is {shown}, expected true or false", ", line 1: write verified = false"
    )


@pytest.mark.parametrize(
    ("mark", "shown"),
    [
        ('"Unverified"', '"Unverified"'),
        ('"verified"', '"verified"'),
        ("false", "false"),
        ("[]", "a list"),
    ],
)
def test_mark_of_a_row_is_strict(mark: str, shown: str) -> None:
    """Behind the value of a row only "unverified" can stand."""
    assert refused(changed('"unverified"', mark)) == said(
        f"{shown} is no mark of a row", ', line 6: behind the value only "unverified" can stand'
    )


@pytest.mark.parametrize(("written", "verified"), [("true", [True, False]), ("false", [False] * 2)])
def test_mark_of_the_table_holds_for_its_rows(written: str, verified: list[bool]) -> None:
    """A table that is not verified has no verified row; in one that is, rows keep their marks."""
    table = read_table("lin", f"verified = {written}\n{GOOD}".encode())
    assert [row.verified for row in table.rows] == verified


def test_axis_of_texts_is_said_strictly() -> None:
    """That an axis is one of texts is said by true or false."""
    assert refused(changed("text = true", 'text = "no"')) == said(
        '`text` is "no", expected true or false', ", line 19: write text = true"
    )


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("rows =", "raws =", said("there is no key `raws`", ", line 4: did you mean `rows`?")),
        ("clause =", "page =", said(
            "there is no key `page`",
            ", line 3: the keys are: title, edition, clause, verified, note, rows, value, axis",
        )),
        ('unit = "mm"', 'unti = "mm"', said(
            "there is no key `unti` in [value]", ", line 10: did you mean `unit`?"
        )),
        ('unit = "V"', 'unti = "V"', said(
            "there is no key `unti` in [[axis]]", ", line 14: did you mean `unit`?"
        )),
        ("rule =", "rul =", said(
            "there is no key `rul` in [[axis]]", ", line 15: did you mean `rule`?"
        )),
        ("rule =", "between =", said(
            "there is no key `between` in [[axis]]",
            ", line 15: the keys are: name, unit, rule, text",
        )),
        ("text = true", "txt = true", said(
            "there is no key `txt` in [[axis]]", ", line 19: did you mean `text`?"
        )),
    ],
)  # fmt: skip
def test_unknown_key(old: str, new: str, message: str) -> None:
    """A key that means nothing is refused wherever it stands, with the key that is like it."""
    assert refused(changed(old, new)) == message


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('"next higher"', '"next-higher"', said(
            'there is no rule "next-higher"', ', line 15: did you mean "next higher"?'
        )),
        ('"next higher"', "3", said(
            "there is no rule 3", ", line 15: the rules are: exact, next higher, linear"
        )),
        ("text = true", 'text = true\nunit = "V"', said(
            "an axis of texts has no unit", ", line 20: remove `unit`"
        )),
        ("text = true", 'text = true\nrule = "linear"', said(
            "an axis of texts is exact", ", line 20: remove `rule`"
        )),
        ("[value]", "[[value]]", said("`value` is written as [value]", ", line 9")),
        ("rows =", "note = 3\nrows =", said("`note` is a text", ", line 4")),
    ],
)  # fmt: skip
def test_key_that_would_be_ignored(old: str, new: str, message: str) -> None:
    """A known key that could not be followed is refused, not ignored."""
    assert refused(changed(old, new)) == message


def test_unit_that_is_unknown() -> None:
    """A unit that nobody knows is refused with the help the units give in a design."""
    assert refused(changed('unit = "mm"', 'unit = "mmm"')) == said(
        "`mmm` is not a unit", ", line 10: the nearest unit is mm"
    )


TITLE, EDITION, CLAUSE, *_ = GOOD.splitlines(keepends=True)
ROWS = GOOD[GOOD.index("rows") : GOOD.index("[value]")]


@pytest.mark.parametrize(
    ("part", "key", "line"), [(ROWS, "rows", 15), (EDITION, "edition", 19), (CLAUSE, "clause", 19)]
)
def test_key_of_the_table_behind_an_axis(part: str, key: str, line: int) -> None:
    """What belongs to the table and stands behind an axis is said to be in the wrong place."""
    assert refused(changed(part, "") + part) == said(
        f"`{key}` must stand before the first [[axis]]",
        f", line {line}: move it to the top: it is in [[axis]] now",
    )


def test_rows_behind_the_value() -> None:
    """Rows that stand in the section of the value are said to be in the wrong place."""
    text = changed(ROWS, "").replace('unit = "mm"\n', f'unit = "mm"\n{ROWS}')
    assert refused(text) == said(
        "`rows` must stand before [value]",
        ", line 6: move it to the top: it is in [value] now",
    )


@pytest.mark.parametrize(
    ("part", "what", "where"),
    [
        (TITLE, "`title` is missing", ': write title = "..."'),
        (EDITION, "`edition` is missing", ': write edition = "..."'),
        (CLAUSE, "`clause` is missing", ': write clause = "..."'),
        (ROWS, "`rows` is missing", ": write rows = [[place, value], ...] before [[axis]]"),
        (
            GOOD[GOOD.index("[[axis]]") :],
            "[[axis]] is missing",
            ": an axis is what a value is looked up by",
        ),
        (
            'name = "material group"\n',
            "`name` is missing in [[axis]]",
            ', line 17: write name = "..."',
        ),
    ],
)
def test_missing(part: str, what: str, where: str) -> None:
    """What a table needs and does not have is said to be missing."""
    assert refused(changed(part, "")) == said(what, where)


@pytest.mark.parametrize(
    ("written", "what"),
    [("3", "`edition` is 3, expected a text"), ('" "', "`edition` is empty")],
)
def test_source_that_is_no_text(written: str, what: str) -> None:
    """Title, edition and clause are texts that say something."""
    assert refused(changed('"IEC 60664-1"', written)) == said(what, ", line 2")


def test_order_shown_in_the_reader() -> None:
    """The table shown in the docstring of the reader is read as it stands there."""
    assert reader.__doc__ is not None
    _, *parts, _ = reader.__doc__.split("\n\n")
    table = read_table("shown", "\n\n".join(parts).encode())
    assert [row.verified for row in table.rows] == [False, False]


EXACT = """\
title = "Loss"
edition = "issue 2"
clause = "table 1"
rows = [[0, 1.0], [10, 2.0], [20, 4.0]]

[value]
unit = "W"

[[axis]]
name = "supply"
unit = "V"
"""


def evaluated(folder: Path, given: str, line: str, table: str = EXACT) -> pipeline.Evaluated:
    """A design of one input and one derived line, with the table `lin` beside it."""
    (folder / "tables").mkdir()
    (folder / "tables" / "lin.toml").write_text(table)
    path = folder / "lamp.md"
    path.write_text(f"{BLOCK}\n```inputs\n{given}\n```\n```derive\n{line}\n```\n")
    return pipeline.evaluate(pipeline.read(path))


def problems(found: pipeline.Evaluated) -> str:
    """All its findings as they are printed, without the folder."""
    return found.problems().replace(str(Path(found.design.source.path).parent) + "/", "")


@pytest.mark.parametrize(
    ("given", "low", "high"),
    [
        ("V = 10 V ± 9 V", "1", "19"),
        ("V = 0 .. 15 .. 20 V", "0", "20"),
        ("V = 10 V ± 1 %", "9.9", "10.1"),
        ("V = 11 .. 12 .. 13 V", "11", "13"),
    ],
)
def test_band_on_an_exact_axis(tmp_path: Path, given: str, low: str, high: str) -> None:
    """A band on an exact axis is refused when an end or its middle stands on no row."""
    assert problems(evaluated(tmp_path, given, 'P = lookup("lin", V)')) == (
        "lamp.md:11:19: error[outside-axis]: `V` lies outside of the table `lin`\n"
        '   |\n11 | P = lookup("lin", V)\n   |                   ^\n'
        "help: supply is exact: the ends and the nominal value of a range must stand on the rows"
        f" 0, 10, 20 V; this one goes from {low} to {high} V"
    )


def test_band_from_row_to_row(tmp_path: Path) -> None:
    """A band whose ends and middle stand on rows takes all rows in between."""
    found = evaluated(tmp_path, "V = 10 V ± 10 V", 'P = lookup("lin", V)')
    assert found.evaluation is not None
    (looked,) = found.evaluation.looked
    assert [looked.found.least, looked.found.nominal, looked.found.greatest] == [1, 2, 4]


@pytest.mark.parametrize(
    ("given", "argument", "value"),
    [
        ("V = 10 V", "V", 2.0),
        ("V = 10 .. 10 .. 10 V", "V", 2.0),
        ("V = 10 V", "sqrt(V)^2*(1/3 + 1/3 + 1/3)", 2.0),
        ("V = 10 V", "2*V", 4.0),
        ("V = 10 V", "0.1*V - 1 V", 1.0),
    ],
)
def test_point_on_an_exact_axis(tmp_path: Path, given: str, argument: str, value: float) -> None:
    """A point on a row of an exact axis is looked up, also one that is computed."""
    found = evaluated(tmp_path, given, f'P = lookup("lin", {argument})')
    assert problems(found) == ""
    assert found.evaluation is not None
    (looked,) = found.evaluation.looked
    assert [looked.found.least, looked.found.nominal, looked.found.greatest] == [value] * 3


def test_point_beside_the_rows(tmp_path: Path) -> None:
    """A point between the rows of an exact axis is refused with the rows there are."""
    assert problems(evaluated(tmp_path, "V = 10 V", 'P = lookup("lin", 1.5*V)')) == (
        "lamp.md:11:19: error[outside-axis]: `1.5*V` lies outside of the table `lin`\n"
        '   |\n11 | P = lookup("lin", 1.5*V)\n   |                   ^^^^^\n'
        "help: supply has the rows 0, 10, 20 V"
    )


def test_fault_stands_at_the_look_up(tmp_path: Path) -> None:
    """A fault of the table's file stands at the look-up, with the file and the line."""
    table = EXACT.replace("unit =", "unti =", 1)
    assert problems(evaluated(tmp_path, "V = 10 V", 'P = lookup("lin", V)', table)) == (
        "lamp.md:11:12: error[table]: the table `lin` cannot be read: there is no key `unti` in"
        " [value]\nin tables/lin.toml, line 7: did you mean `unit`?\n"
        '   |\n11 | P = lookup("lin", V)\n   |            ^^^^^'
    )


def test_example_of_the_readme(tmp_path: Path) -> None:
    """The README's table and design give what stands below them, with the mark on the verdict."""
    text = (Path(__file__).parents[2] / "README.md").read_text()
    section = text[text.index("## Tables\n") :]
    toml = re.search(r"^```toml\n(.*?)^```$", section, re.MULTILINE | re.DOTALL)
    shown = re.search(r"^````markdown\n(.*?)^````$", section, re.MULTILINE | re.DOTALL)
    assert toml is not None
    assert shown is not None
    (tmp_path / "tables").mkdir()
    (tmp_path / "tables" / "spacing.toml").write_text(toml[1])
    path = tmp_path / "lamp.md"
    path.write_text(shown[1])
    record = pipeline.record(pipeline.evaluate(pipeline.read(path)))
    (d_min,) = (each for each in record.quantities if each.symbol == "d_min")
    assert (d_min.least, d_min.nominal, d_min.greatest) == (1.0, 1.0, 1.3)
    (r1,) = record.criteria
    assert (r1.verdict, r1.value_text, r1.limit_text) == ("pass", "1.400 mm", "1.300 mm")
    assert r1.unverified == ("table spacing (Spacings on the board, issue 3, table 2)",)
