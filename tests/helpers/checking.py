"""From a design text to its findings as people read them."""

from collections.abc import Callable, Mapping
from typing import Final

from calcdoc.analysis.evaluate import evaluate_model
from calcdoc.errors import FileTrouble
from calcdoc.methods.apply import expand
from calcdoc.model.accepting import expired
from calcdoc.model.build import build
from calcdoc.model.cases import undone
from calcdoc.model.judging import outside_band
from calcdoc.model.varying import nothing_random
from calcdoc.problems import Finding
from calcdoc.problems.views import full, has_errors, in_order
from calcdoc.records.accepting import unused
from calcdoc.records.methods import outside_validity
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document

NO_FILES: Final[Mapping[str, str]] = {}
TITLE = '```document\nnumber = "T-1"\ntitle = "Trial"\nrevision = "A"\n```\n'
"""A title block of five lines, for texts that are about something else."""


Files = Mapping[str, str]
"""Sheets of the project: what they hold, by path."""


def _checked(
    text: str, path: str, files: Files
) -> tuple[tuple[Finding, ...], Mapping[str, SourceFile]]:
    source = SourceFile(path, text)
    document, findings = read_document(source)
    if document is None:
        return in_order(findings), {path: source}
    expanded, wrong = expand(document, reader(files))
    model, more = build(expanded.document)
    findings += (*wrong, *more)
    if model is not None and not has_errors(findings):
        evaluation, trouble = evaluate_model(model)
        findings += (
            trouble
            if evaluation is None
            else (
                *outside_band(model),
                *expired(model),
                *undone(model),
                *unused(evaluation),
                *nothing_random(model),
                *outside_validity(evaluation),
            )
        )
    return in_order(findings), {**expanded.sheets, path: source}


def reader(files: Files) -> Callable[[str], bytes]:
    """Reads a project that holds these files."""

    def read(name: str) -> bytes:
        if name not in files:
            raise FileTrouble(f"there is no file {name}")
        return files[name].encode()

    return read


def findings_of(text: str, path: str = "lamp.md", files: Files = NO_FILES) -> tuple[Finding, ...]:
    """Everything that reading, checking and computing find, in the order shown."""
    return _checked(text, path, files)[0]


def rendered(text: str, path: str = "lamp.md", files: Files = NO_FILES) -> str:
    """The findings in full, as printed; empty when there are none."""
    findings, sources = _checked(text, path, files)
    return "\n".join(full(each, sources) for each in findings)


def codes(text: str) -> tuple[str, ...]:
    """The code of every finding, in the order shown."""
    return tuple(each.code for each in findings_of(text))
