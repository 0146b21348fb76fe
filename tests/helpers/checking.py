"""From a design text to its findings as people read them."""

from calcdoc.analysis.evaluate import evaluate_model
from calcdoc.model.accepting import expired
from calcdoc.model.build import build
from calcdoc.model.cases import undone
from calcdoc.model.judging import outside_band
from calcdoc.model.varying import nothing_random
from calcdoc.problems import Finding
from calcdoc.problems.views import full, has_errors, in_order
from calcdoc.records.accepting import unused
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document

TITLE = '```document\nnumber = "T-1"\ntitle = "Trial"\nrevision = "A"\n```\n'
"""A title block of five lines, for texts that are about something else."""


def findings_of(text: str, path: str = "lamp.md") -> tuple[Finding, ...]:
    """Everything that reading, checking and computing find, in the order shown."""
    document, findings = read_document(SourceFile(path, text))
    if document is not None:
        model, more = build(document)
        findings += more
        if model is not None and not has_errors(findings):
            evaluation, trouble = evaluate_model(model)
            if evaluation is not None:
                trouble = (
                    *outside_band(model),
                    *expired(model),
                    *undone(model),
                    *unused(evaluation),
                    *nothing_random(model),
                )
            findings += trouble
    return in_order(findings)


def rendered(text: str, path: str = "lamp.md") -> str:
    """The findings in full, as printed; empty when there are none."""
    sources = {path: SourceFile(path, text)}
    return "\n".join(full(each, sources) for each in findings_of(text, path))


def codes(text: str) -> tuple[str, ...]:
    """The code of every finding, in the order shown."""
    return tuple(each.code for each in findings_of(text))
