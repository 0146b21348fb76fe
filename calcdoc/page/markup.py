"""Small pieces of HTML both pages are made of: tables and bars."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from html import escape
from typing import Final

from calcdoc.records.record import Criterion

BAR: Final = 96.0
"""Where the limit stands on a bar, in per cent of its length."""
SHORTEST: Final = 30.0
"""Where it stands at the least when the bar runs over it."""
BAD: Final = frozenset({"fail", "differs"})
EQUAL: Final = 1e-9
"""Share by which a value may pass its limit and still count as equal to it."""


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: its head (plain text), its share of the width, its class."""

    head: str
    share: float
    kind: str = ""
    """``num`` aligns right."""


def table(name: str, label: str, columns: Sequence[Column], rows: Iterable[Sequence[str]]) -> str:
    """A table; cells are HTML, the first of a row is its heading.

    ``label`` is a caption for those who hear the table.
    """
    widths = "".join(f'<col style="width:{column.share:g}%">' for column in columns)
    heads = "".join(_head(column) for column in columns)
    lines = "".join(f"<tr>{_cells(columns, row)}</tr>\n" for row in rows)
    return (
        f'<table class="{name}"><caption>{escape(label)}</caption><colgroup>{widths}</colgroup>'
        f"<thead><tr>{heads}</tr></thead>\n<tbody>{lines}</tbody></table>\n"
    )


def _head(column: Column) -> str:
    if not column.head:
        return "<td></td>"
    return f'<th scope="col"{_class(column.kind)}>{escape(column.head)}</th>'


def _cells(columns: Sequence[Column], row: Sequence[str]) -> str:
    first, *rest = row
    cells = [f'<th scope="row"{_class(columns[0].kind)}>{first}</th>']
    for column, cell in zip(columns[1:], rest, strict=True):
        label = f' data-h="{escape(column.head)}"' if column.head and cell else ""
        cells.append(f"<td{_class(column.kind)}{label}>{cell}</td>")
    return "".join(cells)


def _class(kind: str) -> str:
    return f' class="{kind}"' if kind else ""


def ident(name: str) -> str:
    """An id or a line where room is narrow: the name of a method small and before a break."""
    owner, dot, own = name.rpartition(".")
    if not dot or not owner[0].isalpha():
        return escape(name)
    return f"<small>{escape(owner)}.</small><wbr>{escape(own)}"


def band_bar(least: float, nominal: float, greatest: float) -> str:
    """A rule from least to greatest with a tick at the nominal value; decoration beside numbers."""
    width = greatest - least
    at = 100 * (nominal - least) / width if width > 0 else 50.0
    return f'<span class="bb" aria-hidden="true"><span style="left:{at:.1f}%"></span></span>'


def margin_bar(criterion: Criterion) -> str:
    """A bar against the limit, which is the upright tick; decoration beside the margin.

    What is filled is the share of the limit that is used up: value/limit below an upper limit,
    limit/value above a lower one. A bar that runs over the tick fails.
    """
    used = _used(criterion)
    if used is None:
        return ""
    filled, limit = BAR * used, BAR
    if used > 1 + EQUAL:
        filled, limit = 100.0, max(SHORTEST, 100 / used)
    kind = " bad" if criterion.verdict == "fail" and not criterion.route_of else ""
    return (
        f'<span class="mb{kind}" aria-hidden="true"><span class="fill" style="width:{filled:.1f}%">'
        f'</span><span class="tick" style="left:{limit:.1f}%"></span></span>'
    )


def _used(criterion: Criterion) -> float | None:
    """The share of the limit that is used up; None where there is none (zero, temperatures)."""
    value, limit, upper = criterion.value, criterion.limit, criterion.relation.startswith("<")
    if value is None or not limit or criterion.margin is None or criterion.unit == "°C":
        return None
    if limit < 0:  # -5 V against a least of -6 V is 5 V against a greatest of 6 V
        value, limit, upper = -value, -limit, not upper
    if upper:
        return max(0.0, value / limit)
    return limit / value if value > 0 else float("inf")


def verdict(words: str, *, accepted: bool = False, route_of: str = "") -> str:
    """A verdict in words; a failure that counts also in the ink kept for it."""
    said = f"{words}, accepted" if accepted else words
    route = f", a route of {escape(route_of)}" if route_of else ""
    bad = " bad" if words.partition(",")[0] in BAD and not route_of else ""
    return f'<span class="v{bad}">{escape(said)}</span>{route}'
