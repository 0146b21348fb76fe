"""The record as sheets of a PDF/A-3 file: the one module that knows WeasyPrint."""

import os
from base64 import b64encode
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from datetime import UTC, datetime
from hashlib import sha256
from html import escape
from typing import Any, Final

from calcdoc.errors import CalcdocError, MissingLibrary
from calcdoc.page.boxes import boxes
from calcdoc.page.faces import faces, style
from calcdoc.page.html import title
from calcdoc.page.sections import sections
from calcdoc.page.typeset import digest
from calcdoc.page.view import View
from calcdoc.records.record import Record
from calcdoc.records.wording import sentence

PAPERS: Final = {"a4": "A4", "letter": "letter;margin:15mm 17mm 13mm"}
"""Paper by its name in the title block; letter is wider and lower."""
STRIP: Final = 64
"""Characters of the title in the strip of a sheet."""
EPOCH: Final = "SOURCE_DATE_EPOCH"
KINDS: Final = (
    "data:image/png;base64,",
    "data:image/jpeg;base64,",
    "data:image/svg+xml",
    "data:font/",
)


def pdf(
    record: Record,
    design_text: bytes,
    data: bytes,
    *,
    issued: datetime,
    files: Mapping[str, bytes] | None = None,
) -> bytes:
    """The sheets of a record.

    Args:
        record: What to show.
        design_text: The design text as it was read, to be attached under ``record.source.name``.
        data: The record's canonical JSON, to be attached; its digest is printed.
        issued: The date of every stamp in the file, with a time zone.
        files: Other files the text used, by name, to be attached.

    Returns:
        The bytes of the file; equal input and equal libraries give equal bytes.

    Raises:
        MissingLibrary: If a system library of the layout engine is not installed.
        CalcdocError: If the page asked for something that is not embedded in it.
    """
    engine = _engine()
    view = _view(record, data)
    page = _sheets(view, issued)
    fetcher = _fetcher(engine)

    def attached(content: bytes, name: str, relationship: str) -> Any:  # noqa: ANN401
        return engine.Attachment(
            string=content,
            name=name,
            description=name,
            relationship=relationship,
            created=issued,
            modified=issued,
        )

    source = record.source.name.rpartition("/")[2] or "design.md"
    attachments = [attached(design_text, source, "Source")]
    attachments += [attached(content, name, "Source") for name, content in (files or {}).items()]
    attachments.append(attached(data, "record.json", "Data"))
    with _clock(issued):
        written: bytes = engine.HTML(string=page, url_fetcher=fetcher).write_pdf(
            pdf_variant="pdf/a-3a",
            attachments=attachments,
            finisher=_finisher(view),
        )
    if fetcher.refused:
        raise CalcdocError(f"the page asked for {fetcher.refused[0][:60]}, which is not in it")
    return written


def sheet_html(record: Record, data: bytes, issued: datetime) -> str:
    """What is handed to the layout engine: one HTML document without MathML."""
    return _sheets(_view(record, data), issued)


def _view(record: Record, data: bytes) -> View:
    return View(record=record, draw=boxes, paper=True, record_digest=sha256(data).hexdigest())


def _sheets(view: View, issued: datetime) -> str:
    record = view.record
    main = "".join(
        f'<section class="{part.name}" id="{part.name}">{part.html}</section>\n'
        for part in sections(view)
    )
    assert "<math" not in main, "mathematics on paper is boxes"  # the engine drops MathML silently
    stamp = issued.astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
    rules = faces(main) + style("common.css") + style("sheet.css") + _sheet_rules(view)
    return (
        f'<!DOCTYPE html>\n<html lang="{escape(record.document.language or "en")}">\n<head>\n'
        f'<meta charset="utf-8">\n<title>{escape(title(record))}</title>\n'
        f'<meta name="author" content="{escape(record.document.people.prepared)}">\n'
        f'<meta name="dcterms.created" content="{stamp}">\n'
        f'<meta name="dcterms.modified" content="{stamp}">\n'
        f"<style>\n{rules}</style>\n</head>\n<body>\n{main}</body>\n</html>\n"
    )


def _sheet_rules(view: View) -> str:
    """Paper, title strip and foot of every sheet, which hold words of the record."""
    document = view.record.document
    date = document.date or "no date"
    middle = _short(sentence(document.title, groups=False))
    strip = f"{document.number} · revision {document.revision}"
    across = ""
    if document.status == "draft":
        strip += " · DRAFT"
        drawn = b64encode(style("draft.svg").encode()).decode()  # outlines: it is no text to search
        across = (
            f'background:url("data:image/svg+xml;base64,{drawn}") 50% 50%/150mm 150mm no-repeat;'
        )
    left = f"{date} · {document.status} · uncontrolled when printed"
    text, own = digest(view.record.source.sha256), digest(view.record_digest)
    return (
        f"@page{{size:{PAPERS.get(document.paper.lower(), 'A4')};{across}"
        f"@top-left{{content:{_quoted(strip)}}}@top-center{{content:{_quoted(middle)}}}"
        f"@bottom-left{{content:{_quoted(left)}}}"
        f"@bottom-right{{content:{_quoted(f'text {text} · record {own}')}}}}}\n"
    )


def _short(text: str) -> str:
    """What fits between the number and the sheet count."""
    return text if len(text) <= STRIP else text[: STRIP - 1].rstrip() + "…"


def _quoted(text: str) -> str:
    """A CSS string; whatever is not a plain letter or digit is written as its number."""
    return '"' + "".join(c if c.isalnum() and c.isascii() else f"\\{ord(c):x} " for c in text) + '"'


def _engine() -> Any:  # noqa: ANN401  the library has no types
    try:
        import weasyprint  # type: ignore[import-untyped]  # noqa: PLC0415  slow to load
    except OSError as trouble:
        raise MissingLibrary(
            "the PDF needs system libraries that are not installed: on Debian, "
            "apt-get install libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0"
        ) from trouble
    return weasyprint


def _fetcher(engine: Any) -> Any:  # noqa: ANN401
    """A reader of addresses that lets through only what calcdoc itself embeds."""

    class EmbeddedOnly(engine.urls.URLFetcher):  # type: ignore[misc]
        def __init__(self) -> None:
            super().__init__(allowed_protocols={"data"}, allow_redirects=False)
            self.refused: list[str] = []

        def fetch(self, url: str, headers: Any = None) -> Any:  # noqa: ANN401
            if url.startswith(KINDS):
                return super().fetch(url, headers)
            self.refused.append(url)
            raise ValueError(f"refused {url[:60]}")

    return EmbeddedOnly()


def _finisher(view: View) -> Callable[[Any, Any], None]:
    """What is put right in the file when it is laid out."""

    def finish(_document: Any, written: Any) -> None:  # noqa: ANN401
        listed = written.catalog.get("AF")
        if listed:  # the engine lists each attachment twice
            listed[:] = list(dict.fromkeys(listed))
        for each in written.objects:
            if isinstance(each, dict) and each.get("Subtype") == "/Link" and "Dest" in each:
                target = each["Dest"].string
                each["Contents"] = type(each["Dest"])(view.destinations.get(target, target))

    return finish


@contextmanager
def _clock(issued: datetime) -> Iterator[None]:
    """Embedded fonts are stamped with this date while the sheets are made."""
    before = os.environ.get(EPOCH)
    os.environ[EPOCH] = str(int(issued.timestamp()))
    try:
        yield
    finally:
        if before is None:
            del os.environ[EPOCH]
        else:
            os.environ[EPOCH] = before
