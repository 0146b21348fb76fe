"""The record as a list of sections, the same on both pages and in the same order."""

import re
from dataclasses import dataclass

from calcdoc.page import back, cover, prose
from calcdoc.page.view import View
from calcdoc.records.record import Heading


@dataclass(frozen=True, slots=True)
class Section:
    """A part of the page."""

    name: str
    """``cover``, ``body`` or ``back``."""
    html: str


@dataclass(frozen=True, slots=True)
class Entry:
    """An entry of the contents list."""

    anchor: str
    number: str
    title: str
    """HTML."""


def sections(view: View) -> tuple[Section, ...]:
    """Cover, body, back matter."""
    return (
        Section("cover", cover.cover(view)),
        Section("body", prose.body(view)),
        Section("back", _back(view)),
    )


def _back(view: View) -> str:
    parts = []
    for part in back.PARTS:
        content = part.content(view)
        if content:
            parts.append(f'<h2 id="back-{part.anchor}">{part.title}</h2>\n{content}')
    return "".join(parts) + back.end_mark(view)


def contents(view: View, shown: tuple[Section, ...]) -> tuple[Entry, ...]:
    """Top headings of the page, in order."""
    top = min((item.level for item in view.record.body if isinstance(item, Heading)), default=2)
    entries = [Entry("cover", "", "Cover")]
    entries += [
        Entry(item.anchor, item.number, re.sub(r"</?a[^>]*>", "", prose.inlines(view, item.inline)))
        for item in view.record.body
        if isinstance(item, Heading) and item.level == top
    ]
    last = shown[-1].html
    entries += [
        Entry(f"back-{part.anchor}", "", part.title)
        for part in back.PARTS
        if f'id="back-{part.anchor}"' in last
    ]
    return tuple(entries)
