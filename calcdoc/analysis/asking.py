"""All questions about extremes in one list, answered together, and read off as bands."""

from collections.abc import Iterable, Mapping
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import Band, Combination, Stand
from calcdoc.analysis.extremes import Extreme, Proof, Question, extremes
from calcdoc.analysis.looking_up import moves_apart
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.trouble import Setter
from calcdoc.frozen import Frozen, replace
from calcdoc.model.model import Judged, Model
from calcdoc.text.given import Given
from calcdoc.text.statements import PointValue

Key = tuple[str, int]
"""``criterion`` or ``measurement`` with its number, or the declared band."""
DECLARED: Final[Key] = ("declared", 0)
Ends = tuple[int, int]
"""Numbers of the two questions for a band."""


class Room(Frozen, frozen=True):
    """Ranges of all input columns, and who sets values in them."""

    box: Box
    setter: Setter | None


def rooms(compiled: Compiled, model: Model) -> dict[Key, Room]:
    """The band as declared, and a room for each criterion or measurement with values of its own."""
    found: dict[Key, Room] = {DECLARED: Room(compiled.box, None)}
    for at, judged in enumerate(judged_of(model)):
        if points := judged.statement.clauses.at:
            setter = Setter("criterion", judged.statement.id.name, points)
            found["criterion", at] = Room(_set(compiled, points), setter)
    for at, measured in enumerate(model.measurements):
        setter = Setter("measurement", measured.statement.id.name, measured.statement.at)
        box = _set(compiled, setter.points)
        found["measurement", at] = Room(box, setter if setter.points else None)
    return found


def _set(compiled: Compiled, points: tuple[PointValue, ...]) -> Box:
    """The declared box with some values set."""
    box = compiled.box
    low, nominal, high = box.low.copy(), box.nominal.copy(), box.high.copy()
    for point in points:
        column = compiled.columns[point.symbol.key]
        low[column], nominal[column], high[column] = point.given.si
    return Box(low, nominal, high)


def judged_of(model: Model) -> list[Judged]:
    """The calculated criteria, then the limits of validity of methods, in order."""
    return list(model.judged)


class Asker:
    """Collects questions; once answered, says what the answers mean."""

    def __init__(self, compiled: Compiled, rooms_: Mapping[Key, Room]) -> None:
        self.compiled, self.rooms = compiled, rooms_
        self.declared = rooms_[DECLARED].box
        self.keys = {column: key for key, column in compiled.columns.items()}
        self.questions: list[Question] = []
        self.answers: tuple[Extreme, ...] = ()

    def ask(self, target: int, greatest: bool, box: Box) -> int:
        """Ask for one end of a range; the number of the question."""
        self.questions.append(question(target, greatest, box))
        return len(self.questions) - 1

    def ask_both(self, target: int, box: Box | None = None) -> Ends:
        """Ask for a band, over the declared box if none is given."""
        box = box or self.declared
        return self.ask(target, False, box), self.ask(target, True, box)

    def answer(self) -> None:
        """Answer all questions; what a look-up moves apart from its argument is no exact end."""
        self.answers = tuple(
            replace(each, proof=weaker(each.proof, Proof.BOUNDED))
            if moves_apart(self.compiled.looked, each.matters)
            else each
            for each in extremes(self.compiled.tape, self.questions)
        )

    def points(self) -> FloatArray:
        """The nominal point and every point that was found, shape (n_columns, n_points)."""
        points = [self.declared.nominal, *(each.point for each in self.answers)]
        # Many questions end at one point. (np.unique would load all of NumPy's masked arrays.)
        return np.stack(list({each.tobytes(): each for each in points}.values()), axis=1)

    def band(self, nominal: float, asked: Ends) -> Band:
        """A band from the answers to its two questions."""
        least, greatest = (self.answers[at] for at in asked)
        # Rounding may put an attained end a hair on the wrong side of the nominal value.
        return Band(
            nominal, min(least.value, nominal), max(greatest.value, nominal),
            self.combination(least), self.combination(greatest),
            weaker(least.proof, greatest.proof), (least.bound, greatest.bound),
        )  # fmt: skip

    def combination(self, extreme: Extreme) -> Combination:
        """Where the inputs that matter stand."""
        return self.stands(extreme, map(int, np.flatnonzero(extreme.matters)))

    def stands(
        self,
        extreme: Extreme,
        columns: Iterable[int],
        point: FloatArray | None = None,
        box: Box | None = None,
    ) -> Combination:
        """Where some inputs stand: at an extreme, or at another point of a box."""
        if point is None or box is None:
            return {
                self.keys[at]: Stand(float(extreme.point[at]), bool(extreme.interior[at]))
                for at in columns
            }
        return {
            self.keys[at]: Stand(float(point[at]), bool(box.low[at] < point[at] < box.high[at]))
            for at in columns
        }


def given_band(given: Given) -> Band:
    """A given quantity is at its own limits: nothing to search."""
    least, nominal, greatest = given.si
    return Band(nominal, least, greatest, {}, {}, Proof.EXACT, (least, greatest))


def question(target: int, greatest: bool, box: Box) -> Question:
    """A question over a box."""
    return Question(target, greatest, box.low, box.nominal, box.high)


def weaker(*proofs: Proof) -> Proof:
    """The weakest of some proofs."""
    order = (Proof.SEARCHED, Proof.BOUNDED, Proof.EXACT)
    return next(each for each in order if each in proofs)
