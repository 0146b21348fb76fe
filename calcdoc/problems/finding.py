"""A finding: one mistake of the author, at the smallest wrong place."""

from enum import Enum

from calcdoc.frozen import Frozen
from calcdoc.source import Span


class Severity(Enum):
    """How much a finding stops."""

    ERROR = "error"
    WARNING = "warning"


class Place(Frozen, frozen=True):
    """A place in a text with a few words about it."""

    span: Span
    label: str = ""


class Finding(Frozen, frozen=True):
    """One mistake: a stable code, a headline, where it is, and what to do about it."""

    code: str
    severity: Severity
    message: str
    place: Place
    related: tuple[Place, ...] = ()
    """Places that set the expectation."""
    help: str = ""


def error(  # noqa: PLR0913  (a finding has that many parts)
    code: str,
    message: str,
    span: Span,
    *,
    label: str = "",
    related: tuple[Place, ...] = (),
    help: str = "",  # noqa: A002  (the word a reader knows)
) -> Finding:
    """A finding that stops the text from being evaluated."""
    return Finding(code, Severity.ERROR, message, Place(span, label), related, help)


def warning(  # noqa: PLR0913  (a finding has that many parts)
    code: str,
    message: str,
    span: Span,
    *,
    label: str = "",
    related: tuple[Place, ...] = (),
    help: str = "",  # noqa: A002  (the word a reader knows)
) -> Finding:
    """A finding the record is written in spite of."""
    return Finding(code, Severity.WARNING, message, Place(span, label), related, help)


class Mistake(Exception):
    """Carries a finding out of a rule; caught where the rule's statement was begun."""

    def __init__(self, finding: Finding) -> None:
        super().__init__(finding.message)
        self.finding = finding
