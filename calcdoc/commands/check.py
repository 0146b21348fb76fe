"""``calcdoc check``: evaluate and print the verdict table and every problem."""

import click

from calcdoc.commands.table import verdict_table
from calcdoc.errors import CalcdocError
from calcdoc.frozen import Frozen
from calcdoc.pipeline import Evaluated, evaluate, read, record
from calcdoc.problems.views import as_data, in_order
from calcdoc.records.record import SCHEMA, Record
from calcdoc.records.store import to_json

PASSES, FAILS, TEXT_HAS_ERRORS, WORLD_IS_WRONG = 0, 1, 2, 3


class Checked(Frozen, frozen=True):
    """One file: what came out of it, and what to say about it."""

    status: int
    evaluated: Evaluated | None
    record: Record | None
    trouble: str = ""


@click.command()
@click.argument("files", nargs=-1, required=True, metavar="FILE...")
@click.option("--format", "form", type=click.Choice(["text", "json"]), default="text",
              help="What to print on standard output.")  # fmt: skip
def check(files: tuple[str, ...], form: str) -> int:
    """Evaluate designs and print verdicts and problems.

    Exit status 0 when everything passes, 1 when a criterion fails or is not decided, 2 when a text
    has errors, 3 when a file cannot be read.
    """
    checked = [check_file(name) for name in files]
    for each in checked:
        _say_problems(each)
    if form == "json":
        _print_json(checked)
    else:
        _print_text(checked)
    return max(each.status for each in checked)


def check_file(name: str) -> Checked:
    """Read and evaluate one file; trouble with the file is said, not raised."""
    try:
        evaluated = evaluate(read(name))
    except CalcdocError as trouble:
        return Checked(WORLD_IS_WRONG, None, None, str(trouble))
    if not evaluated.ok:
        return Checked(TEXT_HAS_ERRORS, evaluated, None)
    made = record(evaluated)
    return Checked(status_of(made), evaluated, made)


def status_of(made: Record) -> int:
    """0 when every criterion passes, or is not for calculation, and cross-checks agree; else 1."""
    differs = any(not each.agrees for each in made.crosschecks)
    return FAILS if made.verdict.failed or made.verdict.undecided or differs else PASSES


def _say_problems(checked: Checked) -> None:
    if checked.trouble:
        click.echo(f"calcdoc: {checked.trouble}", err=True)
    if checked.evaluated and checked.evaluated.findings:
        click.echo(checked.evaluated.problems(), err=True)


def _print_text(checked: list[Checked]) -> None:
    shown = [verdict_table(each.record) for each in checked if each.record]
    if shown:
        click.echo("\n\n".join(shown))


def _print_json(checked: list[Checked]) -> None:
    """One object, or a list for several files; a file that cannot be read has none."""
    objects = [_object(each) for each in checked if each.evaluated]
    if objects:
        click.echo(to_json(objects[0] if len(checked) == 1 else objects).decode(), nl=False)


def _object(checked: Checked) -> object:
    if checked.record is not None:
        return checked.record
    assert checked.evaluated is not None
    source = checked.evaluated.design.source
    sources = {source.path: source}
    return {
        "schema": SCHEMA,
        "source": {"name": source.path.rpartition("/")[2], "sha256": source.sha256, "files": []},
        "problems": [as_data(each, sources) for each in in_order(checked.evaluated.findings)],
    }
