"""The title block: the TOML of the `document` block, checked key by key."""

import re
import tomllib
from collections.abc import Mapping
from datetime import date
from typing import Final

from calcdoc.frozen import Frozen, Working
from calcdoc.problems import Finding, error
from calcdoc.source import Span
from calcdoc.text.names import nearest
from calcdoc.text.passage import Passage


class Revision(Frozen, frozen=True):
    """One row of the revision history."""

    revision: str
    date: str
    reason: str


class TitleBlock(Frozen, frozen=True):
    """What identifies a record. Empty text where the author gave none."""

    number: str
    title: str
    revision: str
    date: str = ""
    status: str = "draft"
    product: str = ""
    owner: str = ""
    language: str = "en"
    paper: str = "A4"
    digits: int = 4
    replaces: str = ""
    prepared: str = ""
    checked: str = ""
    approved: str = ""
    history: tuple[Revision, ...] = ()
    draws: int | None = None
    seed: int | None = None
    sequence: str = "random"
    """Of the draws: ``random`` or ``quasi-random``."""
    span: Span = Span("", 0, 0)


_TEXTS: Final = ("number", "title", "revision", "product", "owner", "language", "replaces")
_CHOICES: Final = {"status": ("draft", "for issue"), "paper": ("A4", "letter")}
_DATE: Final = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")
_KEYS: Final = (*_TEXTS, *_CHOICES, "date", "digits", "people", "history", "sampling")
_SHEET_KEYS: Final = ("number", "title", "revision", "date", "owner")
_PEOPLE: Final = ("prepared", "checked", "approved")
_ROW: Final = ("revision", "date", "reason")
_DIGITS: Final = range(2, 10)
_LARGEST_SEED: Final = 10**18 - 1
_SEQUENCES: Final = ("random", "quasi-random")
MOST_DRAWS: Final = 10_000_000
"""More draws would take minutes and tell little more: the bounds shrink with their root."""
_TOML_PLACE: Final = re.compile(r" \(at line ([0-9]+), column ([0-9]+)\)$| \(at end of document\)$")

Table = Mapping[str, object]


class _Reader(Working):
    """Takes values out of the table and notes what is wrong with them."""

    passage: Passage
    findings: list[Finding]

    def at(self, key: str) -> Span:
        """The place of a key, or of the whole block when it is not there."""
        found = re.search(rf"^\s*(?:\[+\s*)?({re.escape(key)})\b", self.passage.text, re.MULTILINE)
        return self.passage.span(*found.span(1)) if found else self.passage.whole

    def wrong(self, key: str, message: str, advice: str) -> None:
        """Note a mistake at a key."""
        self.findings.append(error("document-key", message, self.at(key), help=advice))

    def text(self, table: Table, key: str, where: str = "") -> str:
        """A text, or empty when it is not there."""
        value = table.get(key, "")
        if isinstance(value, date):
            return value.isoformat()
        if not isinstance(value, str):
            self.wrong(key, f"`{where}{key}` must be a text", f'write {key} = "..."')
            return ""
        return " ".join(value.split())

    def day(self, table: Table, key: str, where: str = "") -> str:
        """A date as YYYY-MM-DD."""
        value = self.text(table, key, where)
        if value and not _is_day(value):
            self.wrong(key, f"`{where}{key}` must be a date", "write it as 2026-12-01")
        return value

    def known(self, table: Table, keys: tuple[str, ...], where: str = "") -> None:
        """Note keys that are not on the list."""
        for key in table:
            if key not in keys:
                near = nearest(key, keys)
                advice = f"did you mean `{near}`?" if near else f"the keys are: {', '.join(keys)}"
                self.wrong(key, f"there is no key `{where}{key}`", advice)

    def table(self, table: Table, key: str) -> Table:
        """A table below the title block."""
        value = table.get(key, {})
        if isinstance(value, dict):
            return value
        self.wrong(key, f"`{key}` must be a table", f"write [{key}] on a line of its own")
        return {}

    def whole_number(self, table: Table, key: str, least: int, where: str = "") -> int | None:
        """A whole number, or None when it is not there."""
        value = table.get(key)
        if value is None:
            return None
        if isinstance(value, bool) or not isinstance(value, int) or value < least:
            self.wrong(key, f"`{where}{key}` must be a whole number of at least {least}", "")
            return None
        return value


def _is_day(text: str) -> bool:
    try:
        return bool(_DATE.fullmatch(text)) and bool(date.fromisoformat(text))
    except ValueError:
        return False


def title_block(
    passage: Passage, opening: Span, *, sheet: bool = False
) -> tuple[TitleBlock | None, list[Finding]]:
    """Read the title block; None when it is no TOML or lacks a required key.

    That of a sheet says what it is; all else is said by the design that applies it.
    """
    try:
        table = tomllib.loads(passage.text)
    except tomllib.TOMLDecodeError as trouble:
        return None, [_not_toml(passage, str(trouble))]
    except ValueError:  # TOML's own limit is 19 digits, Python's 4300
        return None, [
            error(
                "document-toml",
                "a whole number of the title block is too long",
                passage.whole,
                help="write at most 18 digits",
            )
        ]
    except RecursionError:
        return None, [error("document-toml", "the title block is nested too deeply", passage.whole)]
    reader = _Reader(passage, [])
    reader.known(table, _SHEET_KEYS if sheet else _KEYS)
    for key in ("title", "revision") if sheet else ("number", "title", "revision"):
        if not table.get(key):
            reader.findings.append(
                error(
                    "document-key",
                    f"the title block has no `{key}`",
                    opening,
                    help=f'write {key} = "..."',
                )
            )
    block = _block(reader, table)
    return (None if reader.findings else block), reader.findings


def _block(reader: _Reader, table: Table) -> TitleBlock:
    texts = {key: reader.text(table, key) for key in _TEXTS}
    texts["language"] = texts["language"] or "en"
    choices = {key: reader.text(table, key) or options[0] for key, options in _CHOICES.items()}
    for key, options in _CHOICES.items():
        if choices[key] not in options:
            reader.wrong(key, f"`{key}` must be one of: {', '.join(options)}", "")
    digits = reader.whole_number(table, "digits", _DIGITS.start)
    if digits is not None and digits not in _DIGITS:
        reader.wrong("digits", f"`digits` must be at most {_DIGITS.stop - 1}", "")
    people = reader.table(table, "people")
    reader.known(people, _PEOPLE, "people.")
    draws, seed, sequence = _sampling(reader, reader.table(table, "sampling"))
    return TitleBlock(
        **texts,
        **choices,
        date=reader.day(table, "date"),
        digits=digits or 4,
        **{role: reader.text(people, role, "people.") for role in _PEOPLE},
        history=_history(reader, table),
        draws=draws,
        seed=seed,
        sequence=sequence,
        span=reader.passage.whole,
    )


def _sampling(reader: _Reader, sampling: Table) -> tuple[int | None, int | None, str]:
    """How criteria are sampled."""
    reader.known(sampling, ("draws", "seed", "sequence"), "sampling.")
    draws = reader.whole_number(sampling, "draws", 1, "sampling.")
    if draws is not None and draws > MOST_DRAWS:
        reader.wrong("draws", f"`sampling.draws` must be at most {MOST_DRAWS:_}", "")
    seed = reader.whole_number(sampling, "seed", 0, "sampling.")
    if seed is not None and seed > _LARGEST_SEED:
        reader.wrong("seed", "`sampling.seed` must have at most 18 digits", "")
    sequence = reader.text(sampling, "sequence", "sampling.") or _SEQUENCES[0]
    if sequence not in _SEQUENCES:
        reader.wrong("sequence", f"`sampling.sequence` must be one of: {', '.join(_SEQUENCES)}", "")
    return draws, seed, sequence


def _history(reader: _Reader, table: Table) -> tuple[Revision, ...]:
    rows = table.get("history", [])
    if not isinstance(rows, list) or not all(isinstance(row, dict) for row in rows):
        reader.wrong(
            "history", "`history` must be a list of tables", "write [[history]] before each row"
        )
        return ()
    for row in rows:
        reader.known(row, _ROW, "history.")
    return tuple(
        Revision(
            reader.text(row, "revision", "history."),
            reader.day(row, "date", "history."),
            reader.text(row, "reason", "history."),
        )
        for row in rows
    )


def _not_toml(passage: Passage, message: str) -> Finding:
    found = _TOML_PLACE.search(message)
    said = message[: found.start()] if found else message
    start = len(passage.text) - 1
    if found and found[1]:
        lines = passage.text.split("\n")
        start = sum(len(line) + 1 for line in lines[: int(found[1]) - 1]) + int(found[2]) - 1
    start = max(0, min(start, len(passage.text) - 1))
    return error(
        "document-toml",
        f"the title block is not TOML: {said[:1].lower()}{said[1:]}",
        passage.span(start, min(start + 1, len(passage.text))),
        help='write one key = "value" per line',
    )
