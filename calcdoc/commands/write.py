"""``calcdoc write``: write the records of designs as HTML, PDF and JSON."""

import click

from calcdoc.commands.bars import draw_bar
from calcdoc.commands.checked import TEXT_HAS_ERRORS, WORLD_IS_WRONG
from calcdoc.errors import CalcdocError
from calcdoc.pipeline import FORMS, Evaluated, evaluate, file_stem, read, record
from calcdoc.pipeline import write as write_record


def _forms(_context: click.Context, _parameter: click.Parameter, value: str) -> tuple[str, ...]:
    forms = tuple(dict.fromkeys(part.strip() for part in value.split(",")))
    for form in forms:
        if form not in FORMS:
            raise click.BadParameter(f"'{form}' is no form; the forms are {', '.join(FORMS)}")
    return forms


@click.command()
@click.argument("files", nargs=-1, required=True, metavar="FILE...")
@click.option("--to", "folder", default="output", show_default=True, metavar="DIR",
              help="The folder to write to.")  # fmt: skip
@click.option("--as", "forms", default=",".join(FORMS), show_default=True, callback=_forms,
              metavar="FORMS", help="Which forms to write.")  # fmt: skip
def write(files: tuple[str, ...], folder: str, forms: tuple[str, ...]) -> int:
    """Write the calculation records of designs.

    Exit status 0 when the records were written, whatever their verdicts; 2 when a text has errors;
    3 when something cannot be read or written.
    """
    status, ready = 0, []
    for name in files:
        evaluated = _evaluated(name)
        if evaluated is None:
            status = WORLD_IS_WRONG
        elif not evaluated.ok:
            status = max(status, TEXT_HAS_ERRORS)
        else:
            ready.append(evaluated)
    _refuse_one_name(ready)
    for evaluated in ready:
        status = max(status, _written(evaluated, folder, forms))
    return status


def _evaluated(name: str) -> Evaluated | None:
    try:
        with draw_bar() as told:
            evaluated = evaluate(read(name), told)
    except CalcdocError as trouble:
        click.echo(f"calcdoc: {trouble}", err=True)
        return None
    if evaluated.findings:
        click.echo(evaluated.problems(), err=True)
    return evaluated


def _refuse_one_name(ready: list[Evaluated]) -> None:
    """Two designs of one number and revision would overwrite each other."""
    seen: dict[str, str] = {}
    for evaluated in ready:
        stem, path = file_stem(record(evaluated)), evaluated.design.source.path
        if stem in seen:
            raise CalcdocError(f"{seen[stem]} and {path} would both be written as {stem};"
                               " give one of them another number or revision")  # fmt: skip
        seen[stem] = path


def _written(evaluated: Evaluated, folder: str, forms: tuple[str, ...]) -> int:
    """Write one form after the other, so that what stands in the way of one leaves the others."""
    status = 0
    for form in forms:
        try:
            (path,) = write_record(evaluated, folder, (form,))
        except CalcdocError as trouble:
            click.echo(f"calcdoc: {evaluated.design.source.path}: {trouble}", err=True)
            status = WORLD_IS_WRONG
        else:
            click.echo(str(path))
    return status
