"""Methods applied: each `use` block becomes the lines of its sheet, in names of its own.

What a method takes becomes definitions, ``bleed.C = C_res``; so everything that knows lines of a
design knows those of a method.
"""

import os
from collections.abc import Mapping
from pathlib import PurePosixPath
from typing import Final

from calcdoc.errors import FileTrouble
from calcdoc.frozen import replace
from calcdoc.methods.expanded import Expanded, Reader
from calcdoc.methods.library import method, method_names
from calcdoc.methods.naming import Naming, renamed
from calcdoc.methods.sheet import Sheet, read_sheet
from calcdoc.problems import Finding, Place, error
from calcdoc.source import SourceFile
from calcdoc.text import prose
from calcdoc.text.decode import decoded
from calcdoc.text.document import LARGEST, Document
from calcdoc.text.names import nearest
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    Applied,
    Basis,
    Binding,
    CaseStatement,
    Definition,
    Inequality,
    Label,
    ReferenceStatement,
    Statement,
    Take,
)

Said = tuple[str, str, str]
"""Title, edition and place of a reference."""
NO_BASIS: Final = Basis("")


def expand(document: Document, read: Reader) -> tuple[Expanded, tuple[Finding, ...]]:
    """Write out every method that a design applies.

    A method that cannot be applied is left out, and its name is among the broken ones.

    Args:
        document: The design text as it was read.
        read: Reads the sheets of the project.
    """
    applier = _Applier(document, read)
    body = applier.blocks(document.body)
    made = replace(
        document,
        body=body,
        broken=document.broken | applier.broken,
        applied=tuple(applier.applied.values()),
    )
    return Expanded(made, applier.sources, applier.files), tuple(applier.findings)


class _Applier:
    """Applies the methods of one design in the author's order."""

    def __init__(self, document: Document, read: Reader) -> None:
        self.document, self.read = document, read
        self.applied: dict[str, Applied] = {}
        """By the key of the name."""
        self.broken: frozenset[str] = frozenset()
        self.sheets: dict[str, Sheet | None] = {}
        self.sources: dict[str, SourceFile] = {}
        self.files: dict[str, bytes] = {}
        self.findings: list[Finding] = []
        self.names: dict[str, Label] = {}
        self.room = LARGEST
        self.kinds = frozenset(
            kind
            for each in document.statements
            if isinstance(each, CaseStatement)
            for kind in ("case", each.kind)
        )
        self.references: dict[str, Said] = {
            each.key: (each.title, each.edition, each.held)
            for each in document.statements
            if isinstance(each, ReferenceStatement)
        }

    def blocks(self, body: tuple[prose.Block, ...]) -> tuple[prose.Block, ...]:
        """Blocks with every method among them written out."""
        found = (self._block(each) for each in body)
        return tuple(each for each in found if each is not None)

    def _block(self, block: prose.Block) -> prose.Block | None:
        match block:
            case prose.Use():
                made = self._use(block)
                if made is None:
                    self.broken |= {block.name.key}
                return made
            case prose.Items(start, items):
                return prose.Items(start, tuple(self.blocks(item) for item in items))
            case prose.Quote(inner):
                return prose.Quote(self.blocks(inner))
            case _:
                return block

    # --- one application -----------------------------------------------------------------------

    def _use(self, use: prose.Use) -> prose.Method | None:
        first = self.names.setdefault(use.name.key, use.name)
        if first is not use.name:
            self._refuse(
                "defined-twice", f"there are two methods {shown(use.name.name)}", use.name,
                "give one of them another name", Place(first.span, "first here"),
            )  # fmt: skip
            return None
        sheet = self._sheet(use.method)
        if sheet is None or use.broken or not self._has_room(use, sheet):
            return None
        bindings = self._bindings(use, sheet)
        return None if bindings is None else self._written_out(use, sheet, bindings)

    def _has_room(self, use: prose.Use, sheet: Sheet) -> bool:
        self.room -= len(sheet.source.text)
        if self.room < 0:
            self._refuse(
                "text-size",
                f"the methods of this design have more than {LARGEST} characters together",
                use.method, "split the design into several texts",
            )  # fmt: skip
        return self.room >= 0

    def _bindings(self, use: prose.Use, sheet: Sheet) -> dict[str, Binding] | None:
        """What the method takes, by key; None when something is missing or makes no sense."""
        takes = {each.symbol.key: each for each in sheet.takes}
        bound: dict[str, Binding] = {}
        before = len(self.findings)
        for each in use.bindings:
            symbol = each.symbol
            if symbol.key not in takes:
                near = nearest(symbol.name, [one.symbol.name for one in takes.values()])
                self._refuse(
                    "unknown-take", f"{shown(use.method.name)} takes no {shown(symbol.name)}",
                    symbol, f"did you mean {near}?" if near else f"it takes {_listed(sheet.takes)}",
                )  # fmt: skip
            elif symbol.key in bound:
                self._refuse(
                    "defined-twice", f"{shown(symbol.name)} stands here twice", symbol,
                    "keep one of them", Place(bound[symbol.key].symbol.span, "first here"),
                )  # fmt: skip
            else:
                bound[symbol.key] = each
        missing = [each for key, each in takes.items() if key not in bound and each.default is None]
        if missing:
            names = ", ".join(shown(each.symbol.name) for each in missing)
            line = f"{missing[0].symbol.name} = ..."
            about = f" ({missing[0].description})" if missing[0].description else ""
            self._refuse(
                "missing-take", f"{shown(use.method.name)} also takes {names}", use.method,
                f"add a line {line}{about}",
            )  # fmt: skip
        return bound if len(self.findings) == before else None

    def _written_out(
        self, use: prose.Use, sheet: Sheet, bound: Mapping[str, Binding]
    ) -> prose.Method:
        name = use.name.name
        naming = Naming(name, sheet.own, self._cited(use, sheet))
        limits = tuple(
            _limit(renamed(each.inequality, naming), name, number)
            for number, each in enumerate(sheet.limits, 1)
        )
        keys = {each.symbol.key for each in sheet.gives} | sheet.ids
        applied = Applied(
            use.name,
            use.method.name,
            sheet.title.title,
            sheet.title.revision,
            limits,
            frozenset(f"{use.name.key}.{key}" for key in keys),
            frozenset(
                f"{use.name.key}.{each.symbol.key}"
                for each in sheet.takes
                if each.symbol.key not in bound
            ),
        )
        self.applied[use.name.key] = applied
        blocks: list[prose.Block] = []
        for block in _shown(sheet.body):
            if isinstance(block, prose.Takes):
                lines = tuple(_taken(each, naming, bound) for each in block.takes)
                blocks.append(prose.Statements("derive", lines))
            else:
                shown_here = self._without_known(renamed(block, naming), naming)
                blocks.append(_in_cases(shown_here, self.kinds))
        return prose.Method(applied, tuple(blocks))

    # --- references ----------------------------------------------------------------------------

    def _cited(self, use: prose.Use, sheet: Sheet) -> dict[str, str]:
        """The keys that references of a sheet have in the record.

        One keeps its key when no other says something else under it.
        """
        keys = {}
        for each in sheet.statements:
            if not isinstance(each, ReferenceStatement):
                continue
            said = (each.title, each.edition, each.held)
            own = self.references.get(each.key, said) == said
            stem = PurePosixPath(use.method.name).stem
            keys[each.key] = each.key if own else f"{stem}:{each.key}"
        return keys

    def _without_known(self, block: prose.Block, naming: Naming) -> prose.Block:
        """A block of references without those that the record has already."""
        if not isinstance(block, prose.Statements) or block.word != "references":
            return block
        kept = []
        for each in block.statements:
            assert isinstance(each, ReferenceStatement)
            key = naming.cited[each.key]
            if key not in self.references:
                self.references[key] = (each.title, each.edition, each.held)
                kept.append(replace(each, key=key))
        return prose.Statements(block.word, tuple(kept))

    # --- sheets --------------------------------------------------------------------------------

    def _sheet(self, named: Label) -> Sheet | None:
        """The sheet of a method, read once."""
        if named.name not in self.sheets:
            is_path = named.name.startswith("./")
            self.sheets[named.name] = self._read(named) if is_path else self._of_library(named)
        return self.sheets[named.name]

    def _of_library(self, named: Label) -> Sheet | None:
        known = method_names()
        if named.name in known:
            sheet = method(named.name)
            self.sources[sheet.source.path] = sheet.source
            return sheet
        near = nearest(named.name, known)
        advice = f"did you mean {near}? " if near else ""
        self._refuse(
            "unknown-method", f"there is no method {shown(named.name)}", named,
            f"{advice}the methods are {', '.join(known)}; a sheet of the project is named by its"
            " path, as in ./sheets/bleed.md",
        )  # fmt: skip
        return None

    def _read(self, named: Label) -> Sheet | None:
        name = os.path.normpath(named.name).replace("\\", "/")
        try:
            data = self.read(name)
        except FileTrouble as trouble:
            self._refuse(
                "sheet-file", f"this sheet cannot be applied: {trouble}", named,
                "put it beside the design and name it from there",
            )  # fmt: skip
            return None
        beside = self.document.source.path.replace("\\", "/").rpartition("/")
        source, trouble_ = decoded(f"{beside[0]}{beside[1]}{name}", data)
        self.sources[source.path] = source
        self.files[name] = data
        sheet, findings = (None, trouble_) if trouble_ else read_sheet(source)
        self.findings += findings
        return sheet

    def _refuse(self, code: str, message: str, at: Label, advice: str, *related: Place) -> None:
        self.findings.append(error(code, message, at.span, related=related, help=advice))


def _listed(takes: tuple[Take, ...]) -> str:
    return ", ".join(each.symbol.name for each in takes) or "nothing"


def _limit(limit: Inequality, name: str, number: int) -> Inequality:
    return replace(limit, id=Label(f"{name} limit {number}", limit.span))


def _taken(take: Take, naming: Naming, bound: Mapping[str, Binding]) -> Definition:
    """The line that hands over what a method takes."""
    binding = bound.get(take.symbol.key)
    described = naming.words(take.description)
    if binding is None:
        assert take.default is not None
        formula = renamed(take.default, naming)
        basis, at = renamed(take.basis, naming), take.symbol.span
    else:
        formula, basis, at = binding.formula, NO_BASIS, binding.symbol.span
    symbol = Label(f"{naming.name}.{take.symbol.name}", at)
    span = at.to(formula.span)
    return Definition(
        symbol, take.unit, take.unit_text, formula, described, basis, span, None, take
    )


def _in_cases(block: prose.Block, kinds: frozenset[str]) -> prose.Block:
    """A block of criteria without ``in every fault`` where the design has none."""
    if not isinstance(block, prose.Statements):
        return block
    return replace(block, statements=tuple(_in_case(each, kinds) for each in block.statements))


def _in_case(statement: Statement, kinds: frozenset[str]) -> Statement:
    if not isinstance(statement, Inequality):
        return statement
    clauses = statement.clauses
    if clauses.scope is None or clauses.scope.every in kinds:
        return statement
    text = clauses.text.replace(f"in every {clauses.scope.every}", "").strip()
    return replace(statement, clauses=replace(clauses, scope=None, text=text))


def _shown(body: tuple[prose.Block, ...]) -> tuple[prose.Block, ...]:
    """What a record shows of a sheet: its level-1 heading is for readers of the plain text."""
    return tuple(
        each
        for each in body
        if not isinstance(each, prose.Gives)
        and not (isinstance(each, prose.Heading) and each.level == 1)
    )
