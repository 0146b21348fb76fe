"""The method statement: how the numbers came about, one paragraph each."""

from collections.abc import Iterator

from calcdoc.records import record as r
from calcdoc.records.wording import counted, typeset


def method_statement(
    lines: tuple[r.Quantity, ...],
    criteria: tuple[r.Criterion, ...],
    digits: int,
    *,
    looked_up: bool,
    cases: bool,
) -> tuple[str, ...]:
    """What a reviewer must know of the computation, in the order it was done."""
    said = frozenset(each.method for each in criteria)
    return tuple(_paragraphs(lines, digits, looked_up, said, cases))


def _paragraphs(
    lines: tuple[r.Quantity, ...], digits: int, looked_up: bool, said: frozenset[str], cases: bool
) -> Iterator[str]:
    yield (
        "Units and dimensions of every formula were checked before any number was computed; the"
        " computation runs in coherent SI units and nothing is rounded on the way."
    )
    kinds = {each.kind for each in lines}
    if "solved" in kinds or any(each.from_relation for each in lines):
        yield (
            "Solved lines: a relation is solved step by step, or numerically between two values by"
            " bisection and inverse interpolation to the last digits; the solution is put back, at"
            " nominal and at every governing combination, and what is left is printed."
        )
    if "settled" in kinds:
        yield (
            "Settled quantities depend on themselves and are found as the fixed point between two"
            " values. The loop gain is the share of a small change that comes back: at one or more"
            " the quantity runs away, and what rests on it fails."
        )
    yield (
        "Extremes: every quantity is taken at its least and greatest value while all conditions,"
        " inputs and assumptions it depends on move through their whole bands at once; a quantity"
        " used twice moves once."
        + (
            ""
            if "root sum square" in said or "sampling" in said
            else " Bands are not combined statistically."
        )
    )
    if "root sum square" in said:
        yield (
            "Root sum square: conditions stand at the worst for this method of their corners and of"
            " where they govern at extremes, biases at their worse end or as new, and like parts"
            " that are stated vary on their own. The effects of the"
            " limits of all parts, to first order, are combined as the root of the sum of their"
            " squares, as if the parts were independent; the result is never beyond the extremes."
        )
    if "sampling" in said:
        yield (
            "Sampling: conditions are never drawn; they stand at the worst, to first order, of"
            " their corners and of where they govern at extremes, biases at their worse end or as"
            " new. Parts are drawn on their own. Every part has"
            " a stream of its own, keyed by seed and symbol, and the same draws in every case. A"
            " criterion passes when the one-sided bound of the share of draws that meet it, with"
            f" {typeset('95 %')} confidence, is at least the share asked for."
        )
    if cases:
        yield (
            "Cases: every mode and fault is computed like the normal case, with the values it"
            " changes. A criterion counts in the normal case and in every mode unless it says"
            " otherwise; the worst case governs. What cannot be computed in a case is not decided."
        )
    proofs = [each.proof for each in lines if each.varies and each.kind in _COMPUTED]
    if proofs:
        exact, bounded, searched = (proofs.count(p) for p in ("exact", "bounded", "searched"))
        many = counted(len(proofs), "computed quantity", "computed quantities")
        yield (
            f"Of the bands of {many} {exact} are exact (attained, and nothing in the band lies"
            f" beyond), {bounded} are attained and proven to within a share of {typeset('1e-9')},"
            f" {searched} were searched and are not proven."
        )
    if looked_up:
        yield (
            "A value looked up moves over all rows that its argument reaches, apart from the"
            " argument. Where both count, as in a product of the two, the band holds every value"
            " but its ends need not be attained: it is then counted as bounded at best."
        )
    yield (
        "A criterion is judged at the combination where limit less value is least, both sides"
        " moving together, on unrounded values; equality within a share of"
        f" {typeset('1e-12')} counts as equal."
    )
    yield (
        f"Values are shown with {digits} significant digits, ties to even; margins are rounded"
        " towards less margin, waiting times towards more. Limits and values get the digits it"
        " takes to tell them apart."
    )


_COMPUTED = frozenset({"derived", "solved", "settled", "method"})
