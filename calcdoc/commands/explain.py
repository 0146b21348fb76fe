"""``calcdoc explain``: what a problem code means, with an example."""

import click

from calcdoc.errors import CalcdocError
from calcdoc.problems.codes import codes
from calcdoc.text.names import nearest


@click.command()
@click.argument("code", required=False)
def explain(code: str | None) -> int:
    """Say what the problem CODE means, with an example; without CODE list all codes."""
    known = codes()
    if code is None:
        width = max(map(len, known))
        for name, each in known.items():
            click.echo(f"{name.ljust(width)}  {each.title}")
        return 0
    name = code.strip().removeprefix("error[").removeprefix("warning[").removesuffix("]")
    if name not in known:
        near = nearest(name, known)
        advice = f"; did you mean {near}?" if near else "; calcdoc explain lists all codes"
        raise CalcdocError(f"there is no problem code '{name}'{advice}")
    found = known[name]
    click.echo(f"{name}: {found.title}\n\n{found.why}\n\nAn example that is refused:\n")
    click.echo("\n".join(f"    {line}".rstrip() for line in found.example.rstrip().split("\n")))
    return 0
