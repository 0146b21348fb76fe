"""What the tolerance of a given value is made of, one sentence for each part."""

from collections.abc import Iterator

from calcdoc.model.model import Judged, Model, Variable
from calcdoc.records.wording import NO_BREAK, limit, typeset
from calcdoc.text.given import Given, Like
from calcdoc.text.nodes import Name

_PER_CENT = 100


def parts_in_words(model: Model, variable: Variable) -> tuple[str, ...]:
    """The random part with its distribution, every bias, and how many like parts; typeset.

    Where the author states no distribution it is said to be assumed, if any result rests on it.
    """
    given = variable.given
    if given is None or not given.varies or variable.kind == "condition":
        return ()
    if given.makeup is None and not _is_drawn(model):
        return ()
    return tuple(_parts(given))


def _is_drawn(model: Model) -> bool:
    """Whether any criterion lets parts vary on their own."""
    return any(
        isinstance(each, Judged) and each.statement.clauses.by != "extremes"
        for each in model.criteria
    )


def _parts(given: Given) -> Iterator[str]:
    made = given.parts
    if made.low < made.high:
        yield _random(given)
    for bias in made.biases:
        ends, _, label = bias.text.partition("(")
        low, _, high = ends.partition("..")
        about = f" ({label}" if label else ""
        yield f"bias {typeset(low.strip())} to {typeset(high.strip())}{about}, at its worse end"
    if made.like is not None:
        yield _like(made.like)
    if made.biases:
        least, greatest = (limit(given, given.unit, low=end) for end in (True, False))
        yield f"all together {least} to {greatest}"


def _random(given: Given) -> str:
    """The distribution, and within which limits when biases widen the band."""
    made = given.parts
    shape = made.shape
    if made.k is not None:
        shape = f"normal, limits at {float(made.k):g} standard deviations"
    if made.assumed:
        shape += " (assumed)"
    return shape if not made.biases and made.like is None else f"random part {shape}"


def _like(like: Like) -> str:
    count = like.count.name if isinstance(like.count, Name) else like.count.digits
    shared = f", {float(like.shared * _PER_CENT):g}{NO_BREAK}% of the band in common"
    return f"mean of {count} like parts that vary on their own{shared if like.shared else ''}"
