"""One file checked: everything that is said about it, in a form that goes between processes."""

from collections.abc import Container, Mapping

from calcdoc.analysis.evaluation import Progress
from calcdoc.errors import CalcdocError
from calcdoc.frozen import Frozen
from calcdoc.model.accepting import ended_since, since_then
from calcdoc.pipeline import Evaluated, evaluate, read, record, today
from calcdoc.problems import Finding
from calcdoc.problems.views import full
from calcdoc.records.record import Record
from calcdoc.source import SourceFile, Span
from calcdoc.text.statements import Uncalculated

PASSES, FAILS, TEXT_HAS_ERRORS, WORLD_IS_WRONG = 0, 1, 2, 3


class Checked(Frozen, frozen=True):
    """One file: what came out of it, and what to say about it."""

    name: str
    """As the user named it."""
    status: int
    trouble: str = ""
    """Why it could not be read or computed; then there is nothing else."""
    source: SourceFile | None = None
    sheets: Mapping[str, SourceFile] = {}
    """Sheets of methods that places of findings may name, by path."""
    findings: tuple[Finding, ...] = ()
    """In the order of the text."""
    problems: str = ""
    """The findings in full."""
    record: Record | None = None
    """None when the text has errors."""
    places: Mapping[str, Span] = {}
    """Ids of criteria and cross-checks to where they stand."""
    lapsed: tuple[str, ...] = ()
    """Ids of criteria whose acceptance held on the date of the document and has ended since."""


def check_file(name: str, progress: Progress | None = None) -> Checked:
    """Read and evaluate one file; trouble with it, even a fault of ours, is said, not raised."""
    try:
        evaluated = evaluate(read(name), progress)
        return _checked(name, evaluated)
    except CalcdocError as trouble:
        return Checked(name, WORLD_IS_WRONG, str(trouble))
    except Exception as trouble:  # noqa: BLE001  (the other files are still to be reported)
        from calcdoc.commands.faults import our_fault  # noqa: PLC0415  (seldom needed)

        return Checked(name, WORLD_IS_WRONG, f"{name}: {our_fault(trouble)}")


def status_of(made: Record, *, accepted: bool = False, lapsed: Container[str] = ()) -> int:
    """0 when every criterion passes, or is not for calculation, and cross-checks agree; else 1.

    Args:
        made: The record.
        accepted: Whether a failure that is accepted counts as passing.
        lapsed: Ids of criteria of which that has ended.
    """
    tally = made.verdict
    failed = tally.failed
    if accepted:
        failed -= sum(
            each.accepted is not None and not each.route_of and each.id not in lapsed
            for each in made.criteria
        )
    differs = any(not each.agrees for each in made.crosschecks)
    return FAILS if failed or tally.undecided or differs else PASSES


def _checked(name: str, evaluated: Evaluated) -> Checked:
    made = record(evaluated) if evaluated.ok else None
    lapsed = ended_since(evaluated.design.model, today()) if made and evaluated.design.model else ()
    problems = evaluated.problems()
    if lapsed:
        source = evaluated.design.source
        more = [full(since_then(each, today()), {source.path: source}) for each in lapsed]
        problems = "\n\n".join(filter(None, (problems, *more)))
    return Checked(
        name,
        status_of(made) if made else TEXT_HAS_ERRORS,
        source=evaluated.design.source,
        sheets=evaluated.design.sheets,
        findings=evaluated.findings,
        problems=problems,
        record=made,
        places=_places(evaluated),
        lapsed=tuple(each.statement.criterion.name for each in lapsed),
    )


def _places(evaluated: Evaluated) -> dict[str, Span]:
    if evaluated.evaluation is None:
        return {}
    model = evaluated.evaluation.model
    statements = [
        each if isinstance(each, Uncalculated) else each.statement
        for each in (*model.criteria, *model.crosschecks, *model.measurements)
    ]
    return {each.id.name: each.span for each in statements}
