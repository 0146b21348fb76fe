"""Tables from TOML: title, edition, clause, rows with marks, and the axes with units.

title = "Creepage distances"
edition = "IEC 60664-1"
clause = "table F.4"
verified = false        # or a mark on single rows
rows = [[50, "I", 0.60], [50, "II", 0.85, "unverified"]]

[value]
unit = "mm"

[[axis]]
name = "working voltage"
unit = "V"
rule = "next higher"    # exact, next higher, linear

[[axis]]
name = "material group"
text = true

What belongs to the table stands before the first section: TOML gives what follows to the section.
"""

import re
import tomllib
from collections.abc import Mapping
from fractions import Fraction
from typing import Final, NoReturn

from calcdoc.errors import CalcdocError
from calcdoc.problems import Mistake
from calcdoc.tables.lines import TOP, Lines, Section
from calcdoc.tables.table import EXACT, LINEAR, RULES, Axis, Row, Table
from calcdoc.text.literal import bracketed_unit, resolve
from calcdoc.text.names import nearest
from calcdoc.text.passage import passage_of
from calcdoc.text.scan import Scanner, shown
from calcdoc.units import PLAIN, Unit

UNVERIFIED: Final = "unverified"
_BEFORE: Final = ("title", "edition", "clause", "verified", "note", "rows")
"""Keys that belong to the table, which TOML gives to the section they stand in."""
_KEYS: Final = (*_BEFORE, "value", "axis")
_AXIS_KEYS: Final = ("name", "unit", "rule", "text")
_VALUE_KEYS: Final = ("unit",)
_IN: Final = {"axis": " in [[axis]]", "value": " in [value]"}
MOST_ROWS: Final = 5000
_GREATEST: Final = 1e300
_TOML_PLACE: Final = re.compile(r" \(at (?:line ([0-9]+), column [0-9]+|end of document)\)$")


class TableTrouble(CalcdocError):
    """A table file does not say what a table needs; the second line says where and what to do."""


def read_table(name: str, data: bytes) -> Table:
    """A table from the bytes of its file.

    Raises:
        TableTrouble: with the first thing that is wrong.
    """
    reader = _Reader(name)
    found = reader.parsed(data)
    reader.known(found, _KEYS)
    reader.note(found)
    axes = tuple(
        reader.axis(each, ("axis", number))
        for number, each in enumerate(reader.tables(found, "axis"), 1)
    )
    if not axes:
        reader.wrong("[[axis]] is missing", "an axis is what a value is looked up by")
    if sum(axis.rule == LINEAR for axis in axes) > 1:
        reader.wrong("at most one axis is linear")
    unit = reader.value(found)
    title, edition, clause = (reader.text(found, key) for key in ("title", "edition", "clause"))
    verified = reader.flag(found, "verified", otherwise=True)
    if "rows" not in found:
        reader.wrong("`rows` is missing", "write rows = [[place, value], ...] before [[axis]]")
    rows = found["rows"]
    if not isinstance(rows, list) or not 0 < len(rows) <= MOST_ROWS:
        reader.wrong(f"`rows` is a list of 1 to {MOST_ROWS} rows", line=reader.lines.key("rows"))
    read = tuple(
        reader.row(each, number, axes, verified=verified) for number, each in enumerate(rows, 1)
    )
    reader.all_apart(read)
    return Table(
        name,
        title,
        edition,
        clause,
        axes,
        unit,
        read,
    )


class _Reader:
    """Takes the parts of a table out of its TOML."""

    def __init__(self, name: str) -> None:
        self.name = name
        self.lines = Lines("")

    def wrong(self, what: str, advice: str = "", *, line: int | None = None) -> NoReturn:
        """Say what is wrong, in which file and line, and what to do."""
        where = f"in tables/{self.name}.toml" + (f", line {line}" if line else "")
        raise TableTrouble(
            f"the table `{self.name}` cannot be read: {what}\n{where}"
            + (f": {advice}" if advice else "")
        )

    def parsed(self, data: bytes) -> Mapping[str, object]:
        """The TOML of the file."""
        try:
            text = data.decode("utf-8").replace("\r\n", "\n")
        except UnicodeDecodeError as trouble:
            line = data.count(b"\n", 0, trouble.start) + 1
            self.wrong("it is not UTF-8", "save the file as UTF-8", line=line)
        self.lines = Lines(text)
        try:
            return tomllib.loads(text)
        except RecursionError:
            self.wrong("it is nested too deeply")
        except tomllib.TOMLDecodeError as trouble:
            said = str(trouble)
            place = _TOML_PLACE.search(said)
            line = text.rstrip().count("\n") + 1
            if place:
                said = said[: place.start()]
                line = int(place[1] or line)
            self.wrong(f"it is not TOML: {said[:1].lower()}{said[1:]}", line=line)
        except ValueError:
            self.wrong("a number in it is too long")

    def known(
        self, found: Mapping[str, object], keys: tuple[str, ...], section: Section = TOP
    ) -> None:
        """Refuse a key that is not on the list: it would say something nobody reads."""
        for key in found:
            if section != TOP and key in _BEFORE:
                first = {"axis": "the first [[axis]]", "value": "[value]"}[section[0]]
                what = f"`{key}` must stand before {first}"
                self.wrong(what, f"move it to the top: it is{_IN[section[0]]} now",
                           line=self.lines.key(key, section))  # fmt: skip
            if key not in keys:
                near = nearest(key, keys)
                self.wrong(
                    f"there is no key {shown(key)}{_IN.get(section[0], '')}",
                    f"did you mean `{near}`?" if near else f"the keys are: {', '.join(keys)}",
                    line=self.lines.key(key, section),
                )

    def note(self, found: Mapping[str, object]) -> None:
        """A note is for who reads the file."""
        if not isinstance(found.get("note", ""), str):
            self.wrong("`note` is a text", line=self.lines.key("note"))

    def value(self, found: Mapping[str, object]) -> Unit:
        """The unit of the value."""
        value = found.get("value", {})
        if not isinstance(value, dict):
            line = self.lines.key("value") or self.lines.section(("value", 1))
            self.wrong("`value` is written as [value]", line=line)
        self.known(value, _VALUE_KEYS, ("value", 1))
        return self.unit(value, ("value", 1))

    def text(self, found: Mapping[str, object], key: str, section: Section = TOP) -> str:
        """A text that must be there."""
        if key not in found:
            line = self.lines.section(section) if section != TOP else None
            self.wrong(f"`{key}` is missing{_IN.get(section[0], '')}", f'write {key} = "..."',
                       line=line)  # fmt: skip
        value = found[key]
        line = self.lines.key(key, section)
        if not isinstance(value, str):
            self.wrong(f"`{key}` is {_said(value)}, expected a text", line=line)
        if not value.strip():
            self.wrong(f"`{key}` is empty", line=line)
        return " ".join(value.split())

    def flag(
        self, found: Mapping[str, object], key: str, section: Section = TOP, *, otherwise: bool
    ) -> bool:
        """Strictly true or false, so that no word is taken for its opposite."""
        value = found.get(key, otherwise)
        if not isinstance(value, bool):
            self.wrong(
                f"`{key}` is {_said(value)}, expected true or false",
                f"write {key} = {str(not otherwise).lower()}",
                line=self.lines.key(key, section),
            )
        return value

    def tables(self, found: Mapping[str, object], key: str) -> list[Mapping[str, object]]:
        """A list of tables."""
        value = found.get(key, [])
        if not isinstance(value, list) or not all(isinstance(each, dict) for each in value):
            line = self.lines.key(key) or self.lines.section((key, 1))
            self.wrong(f"`{key}` is written as [[{key}]]", line=line)
        return value

    def unit(self, found: Mapping[str, object], section: Section) -> Unit:
        """The unit of an axis or of the value, or none for plain numbers."""
        text, line = found.get("unit", ""), self.lines.key("unit", section)
        if not isinstance(text, str):
            self.wrong("a unit is a text", line=line)
        if not text:
            return PLAIN
        try:
            unit = resolve(bracketed_unit(Scanner(passage_of("", f"[{text}]"))))
        except Mistake as mistake:
            self.wrong(mistake.finding.message, mistake.finding.help, line=line)
        if unit.celsius:
            self.wrong("a table is in kelvin, or in differences", line=line)
        return unit

    def axis(self, found: Mapping[str, object], section: Section) -> Axis:
        """One axis."""
        self.known(found, _AXIS_KEYS, section)
        name, rule = self.text(found, "name", section), found.get("rule", EXACT)
        if rule not in RULES:
            near = nearest(rule, RULES) if isinstance(rule, str) else None
            self.wrong(
                f"there is no rule {_said(rule)}",
                f'did you mean "{near}"?' if near else f"the rules are: {', '.join(RULES)}",
                line=self.lines.key("rule", section),
            )
        if not self.flag(found, "text", section, otherwise=False):
            return Axis(name, self.unit(found, section), str(rule))
        if "unit" in found:
            line = self.lines.key("unit", section)
            self.wrong("an axis of texts has no unit", "remove `unit`", line=line)
        if rule != EXACT:
            line = self.lines.key("rule", section)
            self.wrong("an axis of texts is exact", "remove `rule`", line=line)
        return Axis(name, None, EXACT)

    def row(self, found: object, number: int, axes: tuple[Axis, ...], *, verified: bool) -> Row:
        """One row: a place on every axis, the value, and perhaps the mark."""
        n_axes, line = len(axes), self.lines.row(number)
        if not isinstance(found, list):
            # Its line is not known: only lists are counted.
            self.wrong(f"row {number} is {_said(found)}, expected a list")
        if len(found) not in (n_axes + 1, n_axes + 2):
            self.wrong(
                f"row {number} has {len(found)} entries, expected {n_axes + 1},"
                f" or {n_axes + 2} with a mark",
                "write a place on each axis, then the value",
                line=line,
            )
        *at, value = found[: n_axes + 1]
        mark = found[n_axes + 1 :]
        if mark not in ([], [UNVERIFIED]):
            self.wrong(
                f"{_said(mark[0])} is no mark of a row",
                f'behind the value only "{UNVERIFIED}" can stand',
                line=line,
            )
        places = tuple(self._place(each, axis, line) for each, axis in zip(at, axes, strict=True))
        return Row(places, self._number(value, line), verified and not mark)

    def all_apart(self, rows: tuple[Row, ...]) -> None:
        """Refuse two rows at one place."""
        seen: dict[tuple[Fraction | str, ...], int] = {}
        for number, row in enumerate(rows, 1):
            first = seen.setdefault(row.at, number)
            if first < number:
                what = f"row {number} stands at the same place as row {first}"
                self.wrong(what, line=self.lines.row(number))

    def _place(self, found: object, axis: Axis, line: int | None) -> Fraction | str:
        if axis.unit is None:
            if not isinstance(found, str):
                self.wrong(f"on the axis {axis.name} stand texts, not {_said(found)}", line=line)
            return found
        return self._number(found, line)

    def _number(self, found: object, line: int | None) -> Fraction:
        if isinstance(found, bool) or not isinstance(found, int | float):
            self.wrong(f"{_said(found)} is no number", line=line)
        if not abs(found) <= _GREATEST:
            self.wrong(f"{_said(found)} is no number to compute with", line=line)
        return Fraction(repr(found))


def _said(found: object) -> str:
    """A value as it is written in TOML, or its kind."""
    if isinstance(found, str):
        return shown(f'"{found}"')[1:-1]
    if isinstance(found, bool):
        return str(found).lower()
    if isinstance(found, list | dict):
        return "a list" if isinstance(found, list) else "a table"
    return shown(str(found))[1:-1]
