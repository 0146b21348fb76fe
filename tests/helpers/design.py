"""A design of a few lines, evaluated: values in the units that are shown."""

from dataclasses import dataclass

from calcdoc import pipeline
from calcdoc.model.build import build
from calcdoc.records.record import Criterion, Quantity, Record
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document
from tests.helpers.checking import TITLE


@dataclass(frozen=True)
class Worked:
    """A record with its quantities and criteria by name."""

    record: Record

    def __getitem__(self, symbol: str) -> Quantity:
        return next(each for each in self.record.quantities if each.symbol == symbol)

    def criterion(self, name: str) -> Criterion:
        """A criterion by its id."""
        return next(each for each in self.record.criteria if each.id == name)


def worked(**blocks: str) -> Worked:
    """Evaluate a design of blocks: ``worked(inputs="a = 1 V", derive="b = 2*a")``."""
    text = TITLE + "".join(f"\n```{word}\n{lines}\n```\n" for word, lines in blocks.items())
    source = SourceFile("trial.md", text)
    document, findings = read_document(source)
    assert document is not None
    model, more = build(document)
    design = pipeline.Design(source, text.encode(), model, (*findings, *more))
    evaluated = pipeline.evaluate(design)
    assert evaluated.evaluation is not None, evaluated.problems()
    return Worked(pipeline.record(evaluated))
