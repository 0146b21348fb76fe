"""``calcdoc check``: evaluate and print the verdict table and every problem."""

from typing import Final

import click

from calcdoc.commands.bars import draw_bar
from calcdoc.commands.checked import Checked, check_file, status_of
from calcdoc.commands.table import verdict_table
from calcdoc.problems.views import as_data
from calcdoc.records.record import SCHEMA
from calcdoc.records.store import to_json

FORMATS: Final = ("text", "json", "junit", "sarif")
MANY: Final = 3
"""From so many files on, processes are started and work side by side."""


@click.command()
@click.argument("files", nargs=-1, required=True, metavar="FILE...")
@click.option("--format", "form", type=click.Choice(FORMATS), default="text",
              help="What to print on standard output.")  # fmt: skip
@click.option("--accepted", is_flag=True,
              help="Let failures that the text accepts count as passing.")  # fmt: skip
def check(files: tuple[str, ...], form: str, accepted: bool) -> int:
    """Evaluate designs and print verdicts and problems.

    Exit status 0 when everything passes, 1 when a criterion fails or is not decided, 2 when a text
    has errors, 3 when a file cannot be read.
    """
    checked = _all_checked(files)
    for each in checked:
        _say_problems(each)
    click.echo(_shown(checked, form), nl=False)
    return max(_status(each, accepted=accepted) for each in checked)


def _status(checked: Checked, *, accepted: bool) -> int:
    if checked.record is None:
        return checked.status
    return status_of(checked.record, accepted=accepted, lapsed=checked.lapsed)


def _all_checked(files: tuple[str, ...]) -> list[Checked]:
    if len(files) < MANY:
        with draw_bar() as told:
            return [check_file(name, told) for name in files]
    from calcdoc.commands.many import check_many  # noqa: PLC0415  (a quick check needs none of it)

    return check_many(files)


def _say_problems(checked: Checked) -> None:
    if checked.trouble:
        click.echo(f"calcdoc: {checked.trouble}", err=True)
    if checked.problems:
        click.echo(checked.problems, err=True)


def _shown(checked: list[Checked], form: str) -> str | bytes:
    """What goes to standard output; XML names its encoding, so it goes as bytes."""
    if form == "json":
        return _json(checked)
    if form == "junit":
        from calcdoc.commands.junit import junit  # noqa: PLC0415  (loads the XML library)

        return junit(checked)
    if form == "sarif":
        from calcdoc.commands.sarif import sarif  # noqa: PLC0415  (only when asked for)

        return sarif(checked)
    tables = [verdict_table(each.record) for each in checked if each.record]
    return "\n\n".join(tables) + "\n" if tables else ""


def _json(checked: list[Checked]) -> str:
    """One object, or a list for several files; a file that cannot be read has none."""
    objects = [_object(each) for each in checked if each.source]
    if not objects:
        return ""
    return to_json(objects[0] if len(checked) == 1 else objects).decode()


def _object(checked: Checked) -> object:
    if checked.record is not None:
        return checked.record
    source = checked.source
    assert source is not None
    sources = {**checked.sheets, source.path: source}
    return {
        "schema": SCHEMA,
        "source": {"name": source.path.rpartition("/")[2], "sha256": source.sha256, "files": []},
        "problems": [as_data(each, sources) for each in checked.findings],
    }
