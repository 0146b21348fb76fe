"""Tables from TOML: title, edition, clause, axes with units, rows, and marks.

title = "Creepage distances"
edition = "IEC 60664-1"
clause = "table F.4"
verified = false        # or a mark on single rows

[value]
unit = "mm"

[[axis]]
name = "working voltage"
unit = "V"
rule = "next higher"    # exact, next higher, linear

[[axis]]
name = "material group"
text = true

rows = [[50, "I", 0.60], [50, "II", 0.85, "unverified"]]
"""

import tomllib
from collections.abc import Mapping
from fractions import Fraction
from typing import Final, NoReturn

from calcdoc.errors import CalcdocError
from calcdoc.problems import Mistake
from calcdoc.tables.table import EXACT, LINEAR, RULES, Axis, Row, Table
from calcdoc.text.literal import bracketed_unit, resolve
from calcdoc.text.passage import passage_of
from calcdoc.text.scan import Scanner
from calcdoc.units import PLAIN, Unit

UNVERIFIED: Final = "unverified"
_KEYS: Final = frozenset(
    {"title", "edition", "clause", "verified", "note", "value", "axis", "rows"}
)
MOST_ROWS: Final = 5000


class TableTrouble(CalcdocError):
    """A table file does not say what a table needs."""


def read_table(name: str, data: bytes) -> Table:
    """A table from the bytes of its file.

    Raises:
        TableTrouble: with the first thing that is wrong.
    """
    reader = _Reader(name)
    try:
        found = tomllib.loads(data.decode("utf-8"))
    except (UnicodeDecodeError, tomllib.TOMLDecodeError, RecursionError) as trouble:
        reader.wrong(f"it is not TOML: {trouble}")
    for key in found:
        if key not in _KEYS:
            reader.wrong(f"there is no key `{key}`")
    axes = tuple(reader.axis(each) for each in reader.tables(found, "axis"))
    if not axes:
        reader.wrong("it has no [[axis]]")
    if sum(axis.rule == LINEAR for axis in axes) > 1:
        reader.wrong("at most one axis is linear")
    value = found.get("value", {})
    unit = reader.unit(value.get("unit", "")) if isinstance(value, dict) else PLAIN
    verified = found.get("verified", True)
    rows = found.get("rows", [])
    if not isinstance(rows, list) or not 0 < len(rows) <= MOST_ROWS:
        reader.wrong(f"`rows` is a list of 1 to {MOST_ROWS} rows")
    read = tuple(reader.row(each, axes, verified=bool(verified)) for each in rows)
    if len({row.at for row in read}) < len(read):
        reader.wrong("two rows stand at the same place")
    return Table(
        name,
        reader.text(found, "title"),
        reader.text(found, "edition"),
        reader.text(found, "clause"),
        axes,
        unit,
        read,
    )


class _Reader:
    """Takes the parts of a table out of its TOML."""

    def __init__(self, name: str) -> None:
        self.name = name

    def wrong(self, what: str) -> NoReturn:
        """Say what is wrong."""
        raise TableTrouble(f"the table `{self.name}` cannot be read: {what}")

    def text(self, found: Mapping[str, object], key: str) -> str:
        """A text that must be there."""
        value = found.get(key, "")
        if not isinstance(value, str) or not value.strip():
            self.wrong(f"`{key}` is a text that says where the values come from")
        return " ".join(value.split())

    def tables(self, found: Mapping[str, object], key: str) -> list[Mapping[str, object]]:
        """A list of tables."""
        value = found.get(key, [])
        if not isinstance(value, list) or not all(isinstance(each, dict) for each in value):
            self.wrong(f"`{key}` is written as [[{key}]]")
        return value

    def unit(self, text: object) -> Unit:
        """A unit, or none for a plain number."""
        if not isinstance(text, str):
            self.wrong("a unit is a text")
        if not text:
            return PLAIN
        try:
            unit = resolve(bracketed_unit(Scanner(passage_of("", f"[{text}]"))))
        except Mistake as mistake:
            self.wrong(mistake.finding.message)
        if unit.celsius:
            self.wrong("a table is in kelvin, or in differences")
        return unit

    def axis(self, found: Mapping[str, object]) -> Axis:
        """One axis."""
        name, rule = self.text(found, "name"), found.get("rule", EXACT)
        if rule not in RULES:
            self.wrong(f"the rule of an axis is one of: {', '.join(RULES)}")
        if found.get("text"):
            return Axis(name, None, EXACT)
        return Axis(name, self.unit(found.get("unit", "")), str(rule))

    def row(self, found: object, axes: tuple[Axis, ...], *, verified: bool) -> Row:
        """One row: a place on every axis, the value, and perhaps the mark."""
        n_axes = len(axes)
        if not isinstance(found, list) or len(found) not in (n_axes + 1, n_axes + 2):
            self.wrong(f"a row has {n_axes + 1} entries, this one is {found}")
        *at, value = found[: n_axes + 1]
        mark = found[n_axes + 1 :]
        if mark not in ([], [UNVERIFIED]):
            self.wrong(f'behind the value only the mark "{UNVERIFIED}" can stand, not {mark}')
        places = tuple(self._place(each, axis) for each, axis in zip(at, axes, strict=True))
        return Row(places, self._number(value), verified and not mark)

    def _place(self, found: object, axis: Axis) -> Fraction | str:
        if axis.unit is None:
            if not isinstance(found, str):
                self.wrong(f"on the axis {axis.name} stand texts, not {found}")
            return found
        return self._number(found)

    def _number(self, found: object) -> Fraction:
        if isinstance(found, bool) or not isinstance(found, int | float):
            self.wrong(f"{found} is no number")
        return Fraction(repr(found))
