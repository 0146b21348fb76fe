"""The unknown of very many points at once, by Newton's rule where that is safe."""

from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from typing import Final

import numpy as np

from calcdoc.analysis.buffers import Source, Stream, Value
from calcdoc.analysis.derivative import derivative
from calcdoc.analysis.points import BoolArray, FloatArray, compile_steps, solved
from calcdoc.analysis.tape import Implicit, Op, Tape, TapeBuilder

NEWTON_STEPS: Final = 8
CLOSE: Final = 1e-8
"""A step of this share of the unknown is the last: the next one would be its square."""


Bind = Callable[[Tape, Sequence[int], FloatArray, Mapping[int, Source]], Stream]
"""Makes a stream of some targets: (tape, targets, base, sources)."""


class Root:
    """Solves for an unknown by Newton's rule from the root at the base, all points together.

    Points where that does not settle within the bracket, or where the residual does not change
    its sign over the bracket, go to the solver that never leaves the bracket; it yields NaN where
    there is no root.
    """

    def __init__(
        self,
        implicit: Implicit,
        known: Sequence[Value],
        start: FloatArray,
        out: FloatArray,
        bind: Bind,
    ) -> None:
        self.implicit, self.known, self.start, self.out = implicit, known, start, out
        self.bind = bind
        self.low, self.high = float(implicit.low), float(implicit.high)
        self.step, self.size = np.zeros_like(out), np.zeros_like(out)
        builder = TapeBuilder.on(implicit.tape)
        slope = derivative(builder, implicit.residual, builder.add(Op.INPUT, value=0))
        self.slope = implicit.residual if slope is None else slope
        self.at = self._bound(builder.tape(), [implicit.residual, self.slope], Source(out))
        self.ends = [
            self._bound(implicit.tape, [implicit.residual], end)
            for end in (implicit.low, implicit.high)
        ]
        self.steps = compile_steps(implicit.tape)

    def _bound(self, tape: Tape, targets: list[int], x: Source | Fraction | float) -> Stream:
        """The residual where the unknown moves or stands still."""
        moving = {
            at: Source(each) for at, each in enumerate(self.known, 1) if not isinstance(each, float)
        }
        base = self.start.copy()
        if isinstance(x, Source):
            moving[0] = x
        else:
            base[0] = float(x)
        return self.bind(tape, targets, base, moving)

    def __call__(self) -> None:
        """Fill ``out`` with roots."""
        rest = ~(self._newton() & self._signs_change())
        if rest.any():
            known = [
                np.full(len(self.out), each)[rest] if isinstance(each, float) else each[rest]
                for each in self.known
            ]
            args = np.stack(known) if known else np.empty((0, int(rest.sum())))
            self.out[rest] = solved(self.implicit, self.steps, args)

    def _newton(self) -> BoolArray:
        """Whether Newton's rule settled, for each point."""
        residual, slope = (self.at.values[row] for row in (self.implicit.residual, self.slope))
        x, step, size = self.out, self.step, self.size
        x.fill(self.start[0])
        settled: BoolArray = np.zeros(len(x), dtype=bool)
        for _ in range(0 if residual is slope else NEWTON_STEPS):
            self.at.run()
            np.divide(residual, slope, step)
            np.subtract(x, step, x)
            np.abs(step, step)
            np.abs(x, size)
            np.multiply(size, CLOSE, size)
            settled = step <= size
            if settled.all():
                break
        return settled & (x >= self.low) & (x <= self.high)

    def _signs_change(self) -> BoolArray:
        """Whether the ends of the bracket have residuals of either sign, for each point."""
        for end in self.ends:
            end.run()
        first, last = (np.sign(end.values[self.implicit.residual]) for end in self.ends)
        changes: BoolArray = first * last <= 0.0
        return changes
