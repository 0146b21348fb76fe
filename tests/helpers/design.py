"""A design of a few lines, evaluated: values in the units that are shown."""

from dataclasses import dataclass

from calcdoc import pipeline
from calcdoc.methods.apply import expand
from calcdoc.model.build import build
from calcdoc.records.record import Criterion, Quantity, Record
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document
from tests.helpers.checking import NO_FILES, TITLE, Files, reader


@dataclass(frozen=True)
class Worked:
    """A record with its quantities and criteria by name."""

    record: Record

    def __getitem__(self, symbol: str) -> Quantity:
        return next(each for each in self.record.quantities if each.symbol == symbol)

    def criterion(self, name: str) -> Criterion:
        """A criterion by its id."""
        return next(each for each in self.record.criteria if each.id == name)


def worked(*uses: str, **blocks: str) -> Worked:
    r"""Evaluate a design of blocks: ``worked(inputs="a = 1 V", derive="b = 2*a")``.

    ``uses`` are blocks that apply methods, without their fences: ``"use inrush as i\nC = C_1"``.
    """
    return worked_with(NO_FILES, *uses, **blocks)


def worked_with(files: Files, *uses: str, **blocks: str) -> Worked:
    """The same for a project that has sheets."""
    fenced = [f"{word}\n{lines}" for word, lines in blocks.items()] + list(uses)
    text = TITLE + "".join(f"\n```{each}\n```\n" for each in fenced)
    source = SourceFile("trial.md", text)
    document, findings = read_document(source)
    assert document is not None
    expanded, wrong = expand(document, reader(files))
    model, more = build(expanded.document)
    found = (*findings, *wrong, *more)
    design = pipeline.Design(source, text.encode(), model, found, sheets=expanded.sheets)
    evaluated = pipeline.evaluate(design)
    assert evaluated.evaluation is not None, evaluated.problems()
    return Worked(pipeline.record(evaluated))
