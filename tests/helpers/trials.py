"""Random small designs as text: inputs of every kind, and lines that are formulas, solved, settled.

Every formula can be computed wherever its inputs stand, so a design is never refused.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Final

from numpy.random import Generator

from calcdoc import pipeline
from calcdoc.analysis.evaluation import Evaluation
from calcdoc.model.build import build
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document
from tests.helpers.checking import TITLE

FORMULAS: Final = (
    "{a} + {b} - {c}",
    "{a}*{b} + {c}",
    "{a}*(1 - {b})",
    "{a}/({b}^2 + 0.2) - {c}",
    "{a}/({a}^2 + {b}^2 + 0.4)",
    "sqrt({a}^2 + 0.2) - {b}",
    "exp(0.9*sin({a})) - {b}",
    "ln({a}^2 + 0.2)*{b}",
    "abs({a} - {b})",
    "min({a}, {b}) + {c}",
    "max({a}, {b}*{c})",
    "if({a} < {b}, {c}, {a}*{b})",
    "sin({a}) + cos({b})",
    "-{a}^3",
    "atan({a}) - {b}",
)
"""Of three symbols each."""
SOLVED: Final = (
    ("relation {r}: ({b}^2 + 0.2)*{x} = {a}", "{x} from {r}"),
    ("relation {r}: {x}^2 = {a}^2 + 0.1", "{x} from {r} where {x} > 0"),
    ("relation {r}: {x}^3 + {x} = atan({a}) - sin({b})", "{x} from {r} within -5 .. 5"),
    ("{x} = 0.3*sin({x}) + atan({a})", "settle {x} within -5 .. 5"),
)
"""Isolated, the root of a square, between two values, and a loop of gain 0.3 at most."""
TOLERANCES: Final = (
    "", " ± 10 %", " ± 0.2", " -5 % +20 %", " ± 30 % as triangular", " ± 0.3 as triangular",
    " ± 5 % bias -2 % .. 1 %",
)  # fmt: skip


@dataclass(frozen=True)
class Trial:
    """A design: given values by symbol, and lines in the order they are written."""

    inputs: Mapping[str, str]
    derive: tuple[str, ...]
    symbols: tuple[str, ...]
    """Of the lines, in order."""
    conditions: Mapping[str, str] = field(default_factory=dict)

    def blocks(self, **more: str) -> dict[str, str]:
        """The blocks of the design, and others."""
        given = {
            word: "\n".join(f"{symbol} = {text}" for symbol, text in values.items())
            for word, values in (("conditions", self.conditions), ("inputs", self.inputs))
            if values
        }
        return {**given, "derive": "\n".join(self.derive), **more}


def trial(random: Generator) -> Trial:
    """A design of one condition, one to four inputs and two to six lines."""
    inputs = {f"x_{n}": given(random) for n in range(int(random.integers(1, 5)))}
    conditions = {"c": given(random).partition(" as ")[0].partition(" bias ")[0]}
    known = ["c", *inputs]
    lines: list[str] = []
    symbols = []
    for n in range(int(random.integers(2, 7))):
        a, b, c = (known[int(at)] for at in random.integers(0, len(known), 3))
        name = f"y_{n}"
        if random.random() < 0.25:
            pair = SOLVED[int(random.integers(len(SOLVED)))]
            lines += [each.format(a=a, b=b, x=name, r=f"r{n}") for each in pair]
        else:
            form = FORMULAS[int(random.integers(len(FORMULAS)))]
            lines.append(f"{name} = {form.format(a=a, b=b, c=c)}")
        known.append(name)
        symbols.append(name)
    return Trial(inputs, tuple(lines), tuple(symbols), conditions)


def given(random: Generator) -> str:
    """A value between -1 and 1.5, with or without a tolerance."""
    value = round(float(random.uniform(-1.0, 1.5)), 2) or 0.5
    return f"{value}{TOLERANCES[int(random.integers(len(TOLERANCES)))]}"


def evaluation_of(**blocks: str) -> Evaluation:
    """The numbers of a design of blocks, in coherent SI."""
    text = TITLE + "".join(f"\n```{word}\n{lines}\n```\n" for word, lines in blocks.items())
    source = SourceFile("trial.md", text)
    document, findings = read_document(source)
    assert document is not None
    model, more = build(document)
    design = pipeline.Design(source, text.encode(), model, (*findings, *more))
    evaluated = pipeline.evaluate(design)
    assert evaluated.evaluation is not None, evaluated.problems()
    return evaluated.evaluation
