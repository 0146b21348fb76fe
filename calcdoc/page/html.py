"""The record as one HTML file: no script, nothing loaded, mathematics as MathML."""

from hashlib import sha256
from html import escape
from typing import Final

from calcdoc.page.faces import faces, style
from calcdoc.page.mathml import mathml
from calcdoc.page.sections import Entry, contents, sections
from calcdoc.page.typeset import author
from calcdoc.page.view import View
from calcdoc.records.record import Record

POLICY: Final = (
    "default-src 'none'; style-src 'unsafe-inline'; img-src data:; font-src data:; "
    "base-uri 'none'; form-action 'none'"
)


def html(record: Record, data: bytes) -> str:
    """The page of a record.

    Args:
        record: What to show.
        data: The record's canonical JSON; it is embedded, and its digest is printed.

    Returns:
        A complete HTML document; equal input gives equal text.
    """
    view = View(record=record, draw=mathml, paper=False, record_digest=sha256(data).hexdigest())
    parts = sections(view)
    main = "".join(f'<section id="{part.name}">{part.html}</section>\n' for part in parts)
    body = (
        '<a class="skip" href="#cover">to the record</a>\n'
        f"{_strip(view)}{_contents(contents(view, parts))}<main>\n{main}</main>\n{_foot(view)}"
    )
    rules = faces(body) + style("common.css") + style("screen.css")
    return (
        f'<!DOCTYPE html>\n<html lang="{escape(record.document.language or "en")}">\n<head>\n'
        f'<meta http-equiv="Content-Security-Policy" content="{POLICY}">\n'
        '<meta charset="utf-8">\n<meta name="viewport" content="width=device-width">\n'
        '<meta name="color-scheme" content="light dark">\n'
        f"<title>{escape(title(record))}</title>\n<style>\n{rules}</style>\n</head>\n<body>\n{body}"
        f'<script type="application/json" id="record">{inert(data)}</script>\n</body>\n</html>\n'
    )


def title(record: Record) -> str:
    """Title of the file: number, revision, title."""
    document = record.document
    return f"{document.number} revision {document.revision}: {document.title}"


def inert(data: bytes) -> str:
    r"""JSON that can stand in a script element: still valid, and no tag can begin in it.

    >>> inert(b'{"a":"</script>"}')
    '{"a":"\\u003c/script>"}'
    """
    return data.decode("utf-8").replace("<", "\\u003c")


def _strip(view: View) -> str:
    document = view.record.document
    draft = '<strong class="draft">DRAFT</strong> ' if document.status == "draft" else ""
    return (
        f'<header class="strip"><b>{escape(document.number)} · revision '
        f"{escape(document.revision)}</b> {draft}<span>{author(document.title)}</span></header>\n"
    )


def _contents(entries: tuple[Entry, ...]) -> str:
    rows = "".join(
        f'<li><a href="#{escape(each.anchor)}"><span class="hn">{escape(each.number)}</span>'
        f"{each.title}</a></li>\n"
        for each in entries
    )
    return (
        f'<nav class="contents" aria-label="Contents"><details open><summary>Contents</summary>'
        f"<ul>\n{rows}</ul></details></nav>\n"
    )


def _foot(view: View) -> str:
    date = view.record.document.date
    when = f"{escape(date)} · " if date else ""
    return f"<footer>{when}uncontrolled when printed</footer>\n"
