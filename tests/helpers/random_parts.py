"""Criteria of a few lines by root sum square and by sampling, from a design text."""

from dataclasses import dataclass
from fractions import Fraction

from calcdoc.analysis.compile import Compiled, Limits, compile_model
from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.parts import Part, random_parts
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.root_sum_square import Combined, root_sum_square
from calcdoc.analysis.sampling import Asked, Job, Sampled, Setting, sampled
from calcdoc.analysis.sides import Side
from calcdoc.model.build import build
from calcdoc.model.model import Model
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document
from tests.helpers.checking import TITLE


@dataclass(frozen=True)
class Varied:
    """A compiled design with its parts."""

    model: Model
    compiled: Compiled
    parts: tuple[Part, ...]

    def sides(self, number: int = 0, case: str | None = None) -> tuple[Side, ...]:
        """The limits of a criterion, in the first case it is judged in unless another is named."""
        in_case = self.compiled.limits[number]
        limits = in_case[case or next(iter(in_case))]
        assert isinstance(limits, Limits), limits
        return limits.sides

    def governing(self, side: Side) -> tuple[FloatArray, float]:
        """The point of the least requirement, and that requirement."""
        box = self.compiled.box
        asked = Question(side.target, False, box.low, box.nominal, box.high)
        (found,) = extremes(self.compiled.tape, [asked])
        return found.point, found.value

    def combined(self, number: int = 0, which: int = 0) -> Combined:
        """A limit by root sum square."""
        side = self.sides(number)[which]
        point, worst = self.governing(side)
        return root_sum_square(self.compiled.tape, [side.requirement], self.parts, point, worst)

    def job(self, number: int = 0, share: str = "0.975", case: str | None = None) -> Job:
        """A criterion to be sampled with all its limits."""
        asked = tuple(
            Asked(
                each.requirement,
                "=" not in each.relation,
                1e-12,
                self.governing(each)[0],
                each.when,
            )
            for each in self.sides(number, case)
        )
        return Job(asked, self.parts, Fraction(share))

    def sampled(
        self, share: str = "0.975", *, draws: int = 100_000, seed: int = 1, quasi: bool = False
    ) -> tuple[Sampled, ...]:
        """All criteria by sampling."""
        jobs = [self.job(number, share) for number in range(len(self.compiled.limits))]
        return sampled(self.compiled.tape, jobs, Setting(draws, seed, quasi))


def varied(**blocks: str) -> Varied:
    """Compile a design of blocks: ``varied(inputs="a = 1 V ± 1 %", criteria="R1: a <= 1.1 V")``."""
    return varied_text(
        TITLE + "".join(f"\n```{word}\n{lines}\n```\n" for word, lines in blocks.items())
    )


def varied_text(text: str) -> Varied:
    """Compile a whole design text."""
    document, findings = read_document(SourceFile("trial.md", text))
    assert document is not None
    model, more = build(document)
    assert not findings + more
    assert model is not None
    compiled = compile_model(model)
    return Varied(model, compiled, random_parts(compiled.columns, model))
