"""``calcdoc methods``: the library, and what one of its methods takes, gives and rests on."""

from collections.abc import Iterator
from typing import TYPE_CHECKING

import click

from calcdoc.errors import CalcdocError
from calcdoc.text import prose
from calcdoc.text.document import walk
from calcdoc.text.names import nearest
from calcdoc.text.statements import (
    Definition,
    Inequality,
    ReferenceStatement,
    SolvedStatement,
    Take,
)
from calcdoc.text.unparse import unit_text, unparse

if TYPE_CHECKING:
    from calcdoc.methods.sheet import Sheet


@click.command()
@click.argument("name", required=False)
def methods(name: str | None) -> int:
    """List the methods of the library; with NAME say what one takes and gives, and its sources."""
    from calcdoc.methods.library import method, method_names  # noqa: PLC0415  (needed only here)

    known = method_names()
    if name is None:
        width = max(map(len, known))
        for each in known:
            click.echo(f"{each.ljust(width)}  {method(each).title.title}")
        return 0
    if name not in known:
        near = nearest(name, known)
        advice = f"did you mean {near}?" if near else "calcdoc methods lists all methods"
        raise CalcdocError(f"there is no method '{name}'; {advice}")
    click.echo("\n".join(_described(name, method(name))))
    return 0


def _described(name: str, sheet: "Sheet") -> Iterator[str]:
    title = sheet.title
    issued = f", {title.date}" if title.date else ""
    yield f"{name}: {title.title} (revision {title.revision}{issued})"
    yield from _part("takes", [(_take(each), _about(each)) for each in sheet.takes])
    units = _units(sheet)
    gives = [(each.symbol.name + units.get(each.symbol.key, ""), each.description)
             for each in sheet.gives]  # fmt: skip
    yield from _part("gives", gives)
    limits = [
        (_inequality(each.inequality), _joined(each.description, each.inequality.basis.text))
        for each in sheet.limits
    ]
    yield from _part("valid where", limits)
    judged = [
        (f"{each.id.name}: {_inequality(each)} {each.clauses.text}".rstrip(), each.description)
        for each in sheet.statements
        if isinstance(each, Inequality)
    ]
    yield from _part("judges", judged)
    yield from _part("cautions", [(signal, text) for signal, text in _cautions(sheet)])
    sources = [
        (each.key, ", ".join(filter(None, (each.title, each.edition, each.held))))
        for each in sheet.statements
        if isinstance(each, ReferenceStatement)
    ]
    yield from _part("sources", sources)


def _part(title: str, rows: list[tuple[str, str]]) -> Iterator[str]:
    if not rows:
        return
    yield ""
    yield f"{title}:"
    width = max(len(first) for first, _ in rows)
    for first, second in rows:
        yield f"  {first.ljust(width)}  {second}".rstrip()


def _take(take: Take) -> str:
    unit = f" [{unit_text(take.unit_text)}]" if take.unit_text else ""
    default = f" = {unparse(take.default)}" if take.default is not None else ""
    return f"{take.symbol.name}{unit}{default}"


def _about(take: Take) -> str:
    return _joined(take.description, take.basis.text if take.default is not None else "")


def _joined(*parts: str) -> str:
    return "; ".join(part for part in parts if part)


def _inequality(limit: Inequality) -> str:
    first, *rest = (unparse(each) for each in limit.operands)
    pairs = zip(limit.operators, rest, strict=True)
    return first + "".join(f" {sign} {side}" for sign, side in pairs)


def _units(sheet: "Sheet") -> dict[str, str]:
    """The unit of every symbol that has one, as it is shown behind it."""
    found = {each.symbol.key: each.unit_text for each in sheet.takes}
    for each in sheet.statements:
        if isinstance(each, Definition):
            found[each.symbol.key] = each.unit_text
        elif isinstance(each, SolvedStatement):
            found |= {one.symbol.key: one.unit_text for one in each.unknowns}
    return {key: f" [{unit_text(text)}]" for key, text in found.items() if text}


def _cautions(sheet: "Sheet") -> Iterator[tuple[str, str]]:
    for block in walk(sheet.body):
        if isinstance(block, prose.CautionBlock):
            yield block.signal, " ".join(_words(block.blocks)).strip()


def _words(blocks: tuple[prose.Block, ...]) -> Iterator[str]:
    for block in walk(blocks):
        if isinstance(block, prose.Paragraph | prose.Heading):
            yield "".join(_plain(each) for each in block.inline)


def _plain(inline: prose.Inline) -> str:
    match inline:
        case prose.Words(text) | prose.Code(text):
            return text
        case prose.Emphasis(_, inner) | prose.Link(_, inner):
            return "".join(map(_plain, inner))
        case prose.Mention(name):
            return name
        case prose.Break():
            return " "
        case prose.Brace():
            return "{"
        case prose.Picture():
            return inline.alternative
