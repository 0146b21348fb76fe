"""The stages in order: read, evaluate, record, write.

    path -> Design -> Evaluated -> Record -> files

Each stage returns what it made and what it found; only a text without errors goes on.
"""

import os
from collections.abc import Iterable, Mapping
from datetime import UTC, datetime
from importlib import import_module
from pathlib import Path
from typing import Final

from calcdoc import __version__
from calcdoc.analysis.evaluate import evaluate_model
from calcdoc.analysis.evaluation import Evaluation, Progress
from calcdoc.beside import Beside, read_beside
from calcdoc.errors import CalcdocError
from calcdoc.folder import Folder, read_bytes, write_whole
from calcdoc.frozen import Frozen, replace
from calcdoc.methods.expanded import Expanded, Reader
from calcdoc.model.accepting import expired
from calcdoc.model.build import build
from calcdoc.model.cases import undone
from calcdoc.model.judging import outside_band
from calcdoc.model.model import Model
from calcdoc.model.varying import nothing_random
from calcdoc.problems import Finding
from calcdoc.problems.views import full, has_errors, in_order
from calcdoc.records.accepting import unused
from calcdoc.records.build import Circumstances, build_record
from calcdoc.records.cautions import hazard_warning
from calcdoc.records.methods import outside_validity
from calcdoc.records.record import Record, Tool
from calcdoc.records.store import to_json
from calcdoc.source import SourceFile
from calcdoc.text.decode import decoded
from calcdoc.text.document import Document, read_document, walk
from calcdoc.text.prose import Use

FORMS: Final = ("html", "pdf", "json")
LIBRARIES: Final[Mapping[str, str]] = {
    "markdown-it-py": "markdown_it",
    "msgspec": "msgspec",
    "numpy": "numpy",
    "pint": "pint",
}
"""Libraries the numbers and the stored record depend on, with the module that knows its version."""


class TextHasErrors(CalcdocError):
    """The design text has errors, so there is no record of it."""


class Design(Frozen, frozen=True):
    """A design text that was read and checked; ``model`` is None when it has errors."""

    source: SourceFile
    data: bytes
    """The file as it is on disk."""
    model: Model | None
    findings: tuple[Finding, ...]
    beside: Beside = Beside()
    """The files it uses."""
    sheets: Mapping[str, SourceFile] = {}
    """The sheets of methods it applies, by the path that places in them name."""

    @property
    def ok(self) -> bool:
        """Whether the text has no errors so far."""
        return not has_errors(self.findings)

    @property
    def sources(self) -> Mapping[str, SourceFile]:
        """Every text that findings may point into, by path."""
        return {**self.sheets, self.source.path: self.source}


class Evaluated(Frozen, frozen=True):
    """A design with its numbers; ``evaluation`` is None when the text has errors."""

    design: Design
    evaluation: Evaluation | None
    findings: tuple[Finding, ...]
    """All findings, those of reading included."""

    @property
    def ok(self) -> bool:
        """Whether the design could be computed."""
        return self.evaluation is not None

    def problems(self) -> str:
        """Every finding with its line and caret, in the order of the text."""
        sources = self.design.sources
        return "\n\n".join(full(each, sources) for each in in_order(self.findings))


def read(path: str | os.PathLike[str]) -> Design:
    """Read a design text and check names, units and circles.

    Args:
        path: A CommonMark file in UTF-8.

    Returns:
        The design; every mistake of the text is in its ``findings``.

    Raises:
        FileTrouble: when the file cannot be read.
    """
    name = os.fspath(path)
    data = read_bytes(Path(name), name)
    # A name that is no UTF-8 cannot stand in a record as it is.
    source, findings = decoded(os.fsencode(name).decode("utf-8", "replace"), data)
    if findings:
        return Design(source, data, None, findings)
    document, findings = read_document(source)
    if document is None:
        return Design(source, data, None, in_order(findings))
    folder = Folder(Path(name).parent)
    expanded, wrong = _written_out(document, folder.read)
    beside, trouble = read_beside(expanded.document, folder)
    beside = replace(beside, files={**beside.files, **expanded.files})
    model, more = build(expanded.document, beside.tables)
    if has_errors((*wrong, *trouble)):
        model = None
    findings = in_order((*findings, *wrong, *trouble, *more))
    return Design(source, data, model, findings, beside, expanded.sheets)


def _written_out(document: Document, read: Reader) -> tuple[Expanded, tuple[Finding, ...]]:
    """The text with its methods written out line by line."""
    if not any(isinstance(each, Use) for each in walk(document.body)):
        return Expanded(document, {}, {}), ()
    from calcdoc.methods.apply import expand  # noqa: PLC0415  (many designs apply none)

    return expand(document, read)


def evaluate(design: Design, progress: Progress | None = None) -> Evaluated:
    """Compute a design at nominal and over its bands.

    Args:
        design: A design that was read.
        progress: Told how many draws of how many are done, when criteria are judged by sampling.

    Returns:
        The numbers, or None with the findings when the text has errors or a value cannot be
        computed.
    """
    if design.model is None or not design.ok:
        return Evaluated(design, None, design.findings)
    evaluation, findings = evaluate_model(design.model, progress)
    if evaluation is not None:
        findings += (
            *hazard_warning(evaluation),
            *outside_band(design.model),
            *expired(design.model, today()),
            *undone(design.model),
            *unused(evaluation, today()),
            *nothing_random(design.model),
            *outside_validity(evaluation),
            *_doubts(evaluation),
        )
    return Evaluated(design, evaluation, in_order((*design.findings, *findings)))


def _doubts(evaluation: Evaluation) -> tuple[Finding, ...]:
    if all(each.judged.statement.clauses.by == "extremes" for each in evaluation.conclusions):
        return ()
    from calcdoc.records.statistics import doubts  # noqa: PLC0415  (many designs need none)

    return doubts(evaluation)


def record(evaluated: Evaluated) -> Record:
    """The calculation record of an evaluated design.

    Raises:
        TextHasErrors: when there is nothing to record.
    """
    if evaluated.evaluation is None:
        raise TextHasErrors(
            f"{evaluated.design.source.path} has errors, so there is no record of it"
        )
    used = LIBRARIES
    if evaluated.evaluation.setting is not None:
        used = {**LIBRARIES, "scipy": "scipy"}  # bounds of shares, and quasi-random draws
    versions = {name: import_module(module).__version__ for name, module in used.items()}
    tool = Tool(version=__version__, libraries=versions)
    made = Circumstances(
        tool,
        evaluated.findings,
        evaluated.design.beside.pictures,
        evaluated.design.beside.files,
        today(),
        evaluated.design.sheets,
    )
    return build_record(evaluated.evaluation, made)


def write(
    evaluated: Evaluated, to: str | os.PathLike[str] = "output", forms: Iterable[str] = FORMS
) -> tuple[Path, ...]:
    """Write the record of an evaluated design, each file whole or not at all.

    Args:
        evaluated: An evaluated design without errors.
        to: The folder, made when it is not there.
        forms: Any of ``html``, ``pdf``, ``json``.

    Returns:
        The paths written, in the order of ``forms``.

    Raises:
        TextHasErrors: when there is nothing to record.
        FileTrouble: when the folder cannot be written to.
        MissingLibrary: when a library of the PDF is not installed; the other forms are written
            before.
    """
    made = record(evaluated)
    data = to_json(made)
    stem = file_stem(made)
    wanted = sorted(dict.fromkeys(forms), key=lambda form: form == "pdf")
    written = {}
    for form in wanted:
        path = Path(os.fspath(to)) / f"{stem}.{form}"
        write_whole(path, _rendered(form, made, data, evaluated.design))
        written[form] = path
    return tuple(written[form] for form in forms)


def today() -> str:
    """Today as YYYY-MM-DD, or the day of SOURCE_DATE_EPOCH."""
    return (_epoch() or datetime.now(UTC)).date().isoformat()


def file_stem(made: Record) -> str:
    """``NUMBER-REVISION`` with only letters, digits, point, dash and underscore."""
    text = f"{made.document.number}-{made.document.revision}"
    safe = "".join(c if c.isalnum() or c in "._-" else "-" for c in text)
    return safe.lstrip(".") or "record"


def _rendered(form: str, made: Record, data: bytes, design: Design) -> bytes:
    if form == "json":
        return data
    if form == "html":
        from calcdoc.page.html import html  # noqa: PLC0415  (check needs no page)

        return html(made, data).encode()
    if form == "pdf":
        from calcdoc.page.pdf import pdf  # noqa: PLC0415  (slow to load)

        return pdf(made, design.data, data, issued=_issued(made), files=design.beside.files)
    raise CalcdocError(f"there is no form {form}; the forms are {', '.join(FORMS)}")


def _issued(made: Record) -> datetime:
    """The date of every stamp in a file: SOURCE_DATE_EPOCH, else the document's, else 1980."""
    if epoch := _epoch():
        return epoch
    if made.document.date:
        return datetime.fromisoformat(made.document.date).replace(tzinfo=UTC)
    return datetime(1980, 1, 1, tzinfo=UTC)


def _epoch() -> datetime | None:
    epoch = os.environ.get("SOURCE_DATE_EPOCH", "")
    if not epoch:
        return None
    try:
        return datetime.fromtimestamp(int(epoch), UTC)
    except (ValueError, OverflowError, OSError) as trouble:
        raise CalcdocError("SOURCE_DATE_EPOCH is no number of seconds since 1970") from trouble
