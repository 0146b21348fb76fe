"""``calcdoc new``: start a design text that checks clean."""

from importlib import resources
from pathlib import Path

import click

from calcdoc.errors import FileTrouble
from calcdoc.folder import write_whole


@click.command()
@click.argument("name")
def new(name: str) -> int:
    """Start a design text NAME.md that checks clean."""
    path = Path(name if name.endswith(".md") else f"{name}.md")
    stem = path.name.removesuffix(".md")
    if not stem.strip(". ") or any(ord(c) < ord(" ") for c in name):
        raise FileTrouble(f"'{name}' is no file name")
    if path.exists():
        raise FileTrouble(f"{path} is there already; choose another name")
    template = resources.files("calcdoc.commands") / "new.md"
    safe = "".join(c if c.isalnum() or c in "-_." else "-" for c in stem)
    text = template.read_text(encoding="utf-8").replace("NUMBER", safe)
    write_whole(path, text.encode())
    click.echo(f"{path} is written. Next: calcdoc check {path}")
    return 0
