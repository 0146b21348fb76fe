"""Small pieces of HTML both pages are made of: tables and bars."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from html import escape


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


def band_bar(least: float, nominal: float, greatest: float) -> str:
    """A rule from least to greatest with a tick at the nominal value; decoration beside numbers."""
    width = greatest - least
    at = 100 * (nominal - least) / width if width > 0 else 50.0
    return f'<span class="bb" aria-hidden="true"><span style="left:{at:.1f}%"></span></span>'


def margin_bar(margin: float | None, verdict: str) -> str:
    """A bar against the limit, which is the upright tick; decoration beside the margin.

    The bar ends short of the limit by the margin; past it, when the criterion fails, the whole
    length is what is there and the tick stands where it should have ended.
    """
    if margin is None:
        return ""
    if margin >= 0:
        filled, limit = 96 * max(0.0, 1 - margin), 96.0
    else:
        filled, limit = 100.0, max(30.0, 100 / (1 - margin))
    kind = " bad" if verdict == "fail" else ""
    return (
        f'<span class="mb{kind}" aria-hidden="true"><span class="fill" style="width:{filled:.1f}%">'
        f'</span><span class="tick" style="left:{limit:.1f}%"></span></span>'
    )


def verdict(words: str, accepted: str | None = None) -> str:
    """A verdict in words; a failure also in the ink kept for it."""
    reason = f" (accepted: {escape(accepted)})" if accepted else ""
    return f'<span class="v{" bad" if words == "fail" else ""}">{escape(words)}</span>{reason}'
