"""What the section builders share: the record, who draws the formulas, and where things stand."""

import re
from dataclasses import dataclass
from functools import cached_property
from html import escape

from calcdoc.page import boxes, typeset
from calcdoc.page.markup import ident
from calcdoc.page.pieces import ROOM, Draw, is_formula, no_links, pieces, read
from calcdoc.records import wording
from calcdoc.records.pictures import symbol
from calcdoc.records.record import (
    AnyFigure,
    AppliedMethod,
    Assumption,
    Case,
    Criterion,
    Crosscheck,
    Quantity,
    Record,
    Relation,
    Restated,
    Sensitivity,
)
from calcdoc.records.shapes import MINUS, Picture
from calcdoc.text.names import fold

NAME = re.compile(r"[^\W\d_]\w*\.[^\W\d_]\w*|[^\W\d_][^\W_]*_\w+|[\u0370-\u03ff][^\W_]*")
"""What can only be a symbol in a sentence: of a method, with a subscript, or beginning with a Greek
letter."""
WORD = re.compile(r"(?<![^ (])[^\W\d_]\w*(?:\.[^\W\d_]\w*)?")
"""What may be a symbol in the language: not behind a number and its no-break space."""
TAG = re.compile(r"(<[^>]*>)")
FINE = 13.0
"""On a screen formulas are cut into pieces of this width, in em, to fit the narrowest."""
KEY = re.compile(r"\[([^\[\]]+)\]")


@dataclass(frozen=True)
class View:
    """A record on its way to a page; ``paper`` for the sheets of the PDF."""

    record: Record
    draw: Draw
    paper: bool
    record_digest: str
    """SHA-256 of the record's JSON."""

    @cached_property
    def quantities(self) -> dict[str, Quantity]:
        """Quantities by symbol."""
        return {each.symbol: each for each in self.record.quantities}

    @cached_property
    def criteria(self) -> dict[str, Criterion]:
        """Criteria by id."""
        return {each.id: each for each in self.record.criteria}

    @cached_property
    def assumptions(self) -> dict[str, Assumption]:
        """Assumptions by id."""
        return {each.id: each for each in self.record.assumptions}

    @cached_property
    def _places(self) -> dict[str, tuple[str, str]]:
        """Name, id or line number -> what to call it, and its anchor."""
        places = {each.id: (each.id, f"a-{each.id}") for each in self.record.assumptions}
        places |= {each.line: places[each.id] for each in self.record.assumptions if each.line}
        for each in self.record.quantities:
            here = (each.id or each.line, f"q-{each.symbol}")
            places |= dict.fromkeys(filter(None, (each.symbol, each.line, each.id)), here)
        for one in self.record.criteria:
            places |= dict.fromkeys(filter(None, (one.line, one.id)), (one.id, f"c-{one.id}"))
        for check in self.record.crosschecks:
            places |= dict.fromkeys((check.line, check.id), (check.id, f"k-{check.id}"))
        for relation in self.record.relations:
            here = (relation.line, f"r-{relation.line}")
            places |= dict.fromkeys((relation.line, relation.name), here)
        return {fold(name): place for name, place in places.items()}

    @cached_property
    def _links(self) -> dict[str, str]:
        return {
            fold(each.symbol): f' href="#q-{escape(each.symbol)}" data-card="{escape(card(each))}"'
            for each in self.record.quantities
        }

    @cached_property
    def destinations(self) -> dict[str, str]:
        """What a link leads to, in words, by its anchor."""
        known = {"back-assumptions": "register of assumptions"}
        for each in self.record.references:
            known[reference_anchor(each.key)] = f"reference {each.key}: {each.title}"
        for one in self.record.assumptions:
            known[f"a-{one.id}"] = f"assumption {one.id}: {one.text}"
        for criterion in self.record.criteria:
            known[f"c-{criterion.id}"] = f"criterion {criterion.id}: {criterion.description}"
        for check in self.record.crosschecks:
            known[f"k-{check.id}"] = f"cross-check {check.id}: {check.description}"
        for relation in self.record.relations:
            known[f"r-{relation.line}"] = f"relation {relation.name}: {relation.description}"
        for quantity in self.record.quantities:
            known[f"q-{quantity.symbol}"] = f"line {quantity.line}: {quantity.description}"
        return {anchor: words.rstrip(": ") for anchor, words in known.items()}

    @cached_property
    def relations(self) -> dict[str, Relation]:
        """Relations by name."""
        return {each.name: each for each in self.record.relations}

    @cached_property
    def restated(self) -> dict[str, Restated]:
        """Restated results by line."""
        return {each.line: each for each in self.record.restated}

    @cached_property
    def sensitivities(self) -> dict[str, Sensitivity]:
        """Sensitivities by line."""
        return {each.line: each for each in self.record.sensitivities}

    @cached_property
    def applied(self) -> dict[str, AppliedMethod]:
        """Methods by the names they are applied under."""
        return {each.name: each for each in self.record.applied}

    @cached_property
    def cases(self) -> dict[str, Case]:
        """Cases by name."""
        return {each.name: each for each in self.record.cases}

    @cached_property
    def crosschecks(self) -> dict[str, Crosscheck]:
        """Cross-checks by id."""
        return {each.id: each for each in self.record.crosschecks}

    @cached_property
    def figures(self) -> dict[int, AnyFigure]:
        """Figures by number."""
        return {each.number: each for each in self.record.figures}

    def links(self, name: str) -> str:
        """Attributes of the link to the line that defines a symbol; empty where there is none."""
        return self._links.get(fold(name), "")

    def math(self, shown: Picture | str, *, bold: bool = False, room: float = ROOM) -> str:
        """A formula, as pieces between which a line may break."""
        shown = read(shown) if isinstance(shown, str) else shown
        links = no_links if self.paper else self.links
        fine = None if self.paper else FINE
        cut = pieces(shown, room, fine=fine, bold=bold)
        return " ".join(self.draw(piece, links) for piece in cut)

    def symbol(self, name: str) -> str:
        """A symbol in running text, linked to its line."""
        text = boxes.inline(symbol(name))
        link = "" if self.paper else self.links(name)
        return f'<a class="sym"{link}>{text}</a>' if link else f'<span class="sym">{text}</span>'

    def sentence(self, text: str) -> str:
        """A sentence of the record: its numbers typeset, its symbols set as symbols."""
        return NAME.sub(self._named, typeset.sentence(text))

    def reason(self, text: str) -> str:
        """A sentence that has pieces of formulas between back quotes."""
        parts = text.split("`")  # what stands between quotes has the odd places
        return "".join(
            self._quoted(part) if at % 2 else self.sentence(wording.ranges(part))
            for at, part in enumerate(parts)
        )

    def _quoted(self, text: str) -> str:
        """A piece of a formula, or whatever else is quoted."""
        return self.math(text) if is_formula(text) else f"<code>{escape(text)}</code>"

    def named(self, text: str) -> str:
        """A sentence whose numbers are typeset already, its symbols set as symbols."""
        return NAME.sub(self._named, typeset.unbroken(text))

    def clauses(self, text: str) -> str:
        """Clauses in the language of the design text, their symbols set as symbols."""
        parts = TAG.split(typeset.unbroken(wording.clauses(text)))
        return "".join(
            part if at % 2 else WORD.sub(self._named, part) for at, part in enumerate(parts)
        )

    def step(self, text: str) -> str:
        """A step of a solution: words, and behind a colon an equation."""
        words, colon, equation = text.partition(": ")
        if colon and " = " in equation and is_formula(equation):
            return f"{self.sentence(words)}: {self.math(equation)}"
        return self.sentence(text.replace(" - ", f" {MINUS} "))

    def words(self, text: str) -> str:
        """The author's words in running text."""
        return NAME.sub(self._named, typeset.author(text))

    def opening(self, text: str) -> str:
        """The author's words where they stand as a line of their own: with a capital."""
        return self.words(wording.opened(text, self._links))

    def _named(self, found: re.Match[str]) -> str:
        return self.symbol(found[0]) if fold(found[0]) in self._links else found[0]

    def place(self, name: str) -> str:
        """A line, criterion or assumption by its number, linked."""
        label, anchor = self._places.get(fold(name), (name, ""))
        if not anchor:
            return escape(label)
        return f'<a href="#{escape(anchor)}">{escape(label)}</a>'

    def ident(self, name: str) -> str:
        """An id in a column of ids, linked."""
        label, anchor = self._places.get(fold(name), (name, ""))
        return f'<a href="#{escape(anchor)}">{ident(label)}</a>' if anchor else ident(label)

    def places(self, names: tuple[str, ...]) -> str:
        """Several of them, each once, in order."""
        return ", ".join(dict.fromkeys(self.place(name) for name in names))

    @cached_property
    def _keys(self) -> frozenset[str]:
        return frozenset(each.key for each in self.record.references)

    def basis(self, text: str) -> str:
        """A basis with its citations set off and linked to the list of references."""
        parts = KEY.split(text)  # what stands between the brackets has the odd places
        return "".join(
            self._citation(part) if at % 2 else self.words(part) for at, part in enumerate(parts)
        )

    def _citation(self, inner: str) -> str:
        key = inner.partition(",")[0].strip()
        shown = f"[{escape(inner)}]"
        if key in self._keys:
            shown = f'<a href="#{reference_anchor(key)}">{shown}</a>'
        return f"<b>{shown}</b>"

    def citations(self, text: str) -> tuple[str, ...]:
        """What a basis cites, as in ``EN 50160, clause 4.2``."""
        found = KEY.findall(text)
        return tuple(each for each in found if each.partition(",")[0].strip() in self._keys)

    def setting(self, values: dict[str, str]) -> str:
        """A combination of values, as in *V*line 253 V, *C*res 8.0 µF."""
        return ", ".join(self.stand(name, value) for name, value in values.items())

    def stand(self, name: str, value: str) -> str:
        """Where one quantity of a combination stands."""
        return f'<span class="nb">{self.symbol(name)} {typeset.quantity(value)}</span>'


def reference_anchor(key: str) -> str:
    """Anchor of a row in the list of references."""
    return "ref-" + re.sub(r"[^\w.-]+", "-", key)


def card(quantity: Quantity) -> str:
    """Meaning, value and band of a quantity in one line of plain text."""
    meaning = wording.sentence(quantity.description, groups=False)
    lines = [meaning or "no description", wording.typeset(quantity.result)]
    if quantity.varies:
        least, greatest = quantity.least_text, quantity.greatest_text
        lines.append(f"{wording.typeset(least)} to {wording.typeset(greatest)}")
    return " · ".join(line for line in lines if line)
