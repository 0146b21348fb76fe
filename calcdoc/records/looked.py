"""Tables that were looked up: the rows that were used, and what is not verified yet."""

from collections.abc import Iterable
from collections.abc import Set as AbstractSet

from calcdoc.analysis.evaluation import Evaluation
from calcdoc.analysis.looking_up import LookedUp
from calcdoc.model.model import Judged
from calcdoc.records.rounding import trimmed
from calcdoc.records.values import with_unit
from calcdoc.tables.table import Axis, Row, Table

_MOST = 4
"""Rows that are named one by one."""
MARK = "not verified against the edition in force"


def looked_up(evaluation: Evaluation, owner: str) -> tuple[str, ...]:
    """What a line looked up, one sentence for each table."""
    by_table: dict[str, list[LookedUp]] = {}
    for each in evaluation.looked:
        if each.owner == owner:
            by_table.setdefault(each.table.name, []).append(each)
    return tuple(_sentence(found) for found in by_table.values())


def _sentence(found: list[LookedUp]) -> str:
    table = found[0].table
    used = {row for each in found for row in each.found.rows}
    rows = [row for row in table.rows if row in used]
    shown = [_row(table, row) for row in rows]
    if len(shown) > _MOST:
        shown = [*shown[:2], "...", shown[-1]]
    mark = "" if all(row.verified for row in rows) else f"; {MARK}"
    return f"table {table.name} ({table.source}): {'; '.join(shown)}{mark}"


def _row(table: Table, row: Row) -> str:
    at = ", ".join(_place(axis, place) for axis, place in zip(table.axes, row.at, strict=True))
    mark = "" if row.verified else " (not verified)"
    return f"{at}: {with_unit(trimmed(row.value, 6), table.unit)}{mark}"


def _place(axis: Axis, place: object) -> str:
    if isinstance(place, str) or axis.unit is None:
        return f"{axis.name} {place}"
    return f"{axis.name} {with_unit(trimmed(place, 6), axis.unit)}"  # type: ignore[arg-type]


def unverified(evaluation: Evaluation, judged: Judged) -> tuple[str, ...]:
    """The tables with unverified rows that a criterion rests on, through all steps."""
    owners = {judged.statement.id.key, *_reached(evaluation, judged.depends_on)}
    return unverified_in(evaluation, owners)


def unverified_in(evaluation: Evaluation, owners: AbstractSet[str]) -> tuple[str, ...]:
    """The tables of which one of these lines uses a row that is not verified."""
    return tuple(
        dict.fromkeys(
            f"table {each.table.name} ({each.table.source})"
            for each in evaluation.looked
            if each.owner in owners and not all(row.verified for row in each.found.rows)
        )
    )


def _reached(evaluation: Evaluation, keys: Iterable[str]) -> set[str]:
    reached: set[str] = set()
    waiting = list(keys)
    while waiting:
        key = waiting.pop()
        if key not in reached:
            reached.add(key)
            variable = evaluation.model.variables[key]
            waiting.extend(variable.depends_on)
            waiting.extend(variable.implicit.inner if variable.implicit else ())
    return reached
