"""Cases: what each mode and fault changes, and which cases a criterion is judged in."""

from collections.abc import Collection, Mapping
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.model import blame, series
from calcdoc.model.model import Case, Judged, Model, Variable
from calcdoc.model.namespace import Namespace
from calcdoc.model.quantities import typed_as
from calcdoc.model.typing import Checker, Unknown
from calcdoc.problems import Finding, Mistake, Place, error, warning
from calcdoc.text.cases import NORMAL
from calcdoc.text.document import Document
from calcdoc.text.given import Given
from calcdoc.text.names import CLAUSE_WORDS, fold, nearest
from calcdoc.text.nodes import Node
from calcdoc.text.scan import shown
from calcdoc.text.statements import CaseStatement, Change, Label, PointValue, Scope

MOST_CASES: Final = 200
MODE: Final = "mode"
FAULT: Final = "fault"


_KINDS: Final = frozenset({"cases", "modes", "mode", "faults", "fault", "everywhere", "any"})
"""Words that are meant for several cases."""


class Stated(Frozen, frozen=True):
    """The cases of a document by name, in the author's order, before anything is typed."""

    cases: Mapping[str, CaseStatement]
    broken: Collection[str] = frozenset()
    """Keys of words in lines that could not be read; a case may be among them."""

    def of_kind(self, kind: str) -> tuple[str, ...]:
        """The names of all modes or all faults."""
        return tuple(name for name, each in self.cases.items() if each.kind == kind)

    def in_order(self, names: Collection[str]) -> tuple[str, ...]:
        """Names of cases with ``normal`` first, the others in the author's order."""
        return tuple(each for each in (NORMAL, *self.cases) if each in names)


def stated(document: Document) -> tuple[Stated, list[Finding]]:
    """Every case by its name, and the names that are used twice."""
    cases: dict[str, CaseStatement] = {}
    findings = []
    for each in document.statements:
        if not isinstance(each, CaseStatement):
            continue
        first = cases.setdefault(each.name.name, each)
        if first is not each:
            findings.append(
                error(
                    "defined-twice",
                    f"there are two cases {shown(each.name.name)}",
                    each.name.span,
                    related=(Place(first.name.span, "first here"),),
                    help="give one of them another name",
                )
            )
    beyond = list(cases)[MOST_CASES:]
    if beyond:
        findings.append(
            error(
                "case-form",
                f"a design has at most {MOST_CASES} cases, this one has {len(cases)}",
                cases[beyond[0]].name.span,
                help="split the design into several texts",
            )
        )
    for name in beyond:
        del cases[name]
    return Stated(cases, document.broken), findings


_WORDS: Final = frozenset({
    *CLAUSE_WORDS, "nominal", "extremes", "sampling", "margin", "until", "accept", "case", "cases",
    "mode", "modes", "fault", "faults", "all", "any",
})  # fmt: skip


def check_names(known: Stated, space: Namespace) -> list[Finding]:
    """Names that would be read as something else where a record says ``in NAME``."""
    findings = []
    firsts: dict[str, CaseStatement | None] = {NORMAL.casefold(): None}
    for name, each in known.cases.items():
        key = fold(name)
        first = firsts.setdefault(name.casefold(), each)
        related: tuple[Place, ...] = ()
        if key in space.labels:
            what = space.ids.get(key, "symbol")
            message = f"{shown(name)} is also the name of a {what}"
            related = (Place(space.labels[key].span, "defined here"),)
        elif name.casefold() in _WORDS:
            message = f"{shown(name)} alone is a word of the language"
        elif first is not each:
            other = first.name.name if first else NORMAL
            message = f"{shown(name)} and {shown(other)} differ only in capitals"
            related = (Place(first.name.span, "first here"),) if first else ()
        else:
            continue
        findings.append(
            error(
                "case-form",
                message,
                each.name.span,
                related=related,
                help="give the case another name, which says what happens",
            )
        )
    return findings


# --- which cases -------------------------------------------------------------------------------


def judged_in(scope: Scope | None, known: Stated, stated: Collection[str] = ()) -> tuple[str, ...]:
    """The names of the cases a criterion is judged in.

    Unless the criterion says so, it is not judged in a mode that would be undone by the operating
    point it states: nothing is different there.

    Args:
        scope: What the criterion says.
        known: Every case.
        stated: Keys of the quantities its operating point sets.

    Raises:
        Mistake: when there is no such case, or when nothing would be checked.
        Unknown: when the case may stand in a line that could not be read.
    """
    if scope is None:
        modes = known.of_kind(MODE)
        return (NORMAL, *(name for name in modes if not _undone(known.cases[name], stated)))
    if not scope.every:
        return named(scope.names, known)
    faults = known.of_kind(FAULT)
    found = faults if scope.every == "fault" else (NORMAL, *known.cases)
    if not (faults if scope.every == "fault" else known.cases):
        if scope.every in known.broken or MODE in known.broken:
            raise Unknown
        raise Mistake(
            error(
                "unknown-case",
                f"there is no {scope.every}, so `every {scope.every}` checks nothing"
                if scope.every == FAULT
                else "there is no case besides `normal`, so `every case` checks nothing more",
                scope.span,
                help="state it in a `cases` block: fault one LED shorted: n_LED = n_LED - 1",
            )
        )
    return found


def _undone(case: CaseStatement, stated: Collection[str]) -> bool:
    return all(each.symbol.key in stated for each in case.changes)


def undone(model: Model) -> tuple[Finding, ...]:
    """Criteria whose operating point sets what a case changes: there the operating point counts."""
    cases = {each.name: each for each in model.cases}
    findings = []
    for judged in model.criteria:
        if not isinstance(judged, Judged):
            continue
        points = {point.symbol.key: point for point in judged.statement.clauses.at}
        for name in judged.cases:
            both = [key for key in points if name in cases and key in cases[name].changes]
            if both:
                findings.append(_undoes(points[both[0]], cases[name]))
    return tuple(findings)


def _undoes(point: PointValue, case: Case) -> Finding:
    return warning(
        "case-undone",
        f"the case {shown(case.name)} changes {shown(point.symbol.name)}, this operating point sets"
        " it: here the operating point counts",
        point.symbol.span,
        related=(Place(case.statement.name.span, "the case"),),
        help="leave it out of the operating point, or judge the criterion in other cases",
    )


def named(labels: tuple[Label, ...], known: Stated) -> tuple[str, ...]:
    """Cases by name, each once; raises as :func:`judged_in` does."""
    found: dict[str, Label] = {}
    for each in labels:
        if each.name in found:
            raise Mistake(
                error(
                    "unknown-case",
                    f"the case {shown(each.name)} stands here twice",
                    each.span,
                    help="name each case once",
                )
            )
        if each.name != NORMAL and each.name not in known.cases:
            raise _unknown_case(each, known)
        found[each.name] = each
    return known.in_order(found)


def _unknown_case(label: Label, known: Stated) -> Mistake | Unknown:
    if all(fold(word) in known.broken for word in label.name.split()):
        return Unknown()
    near = nearest(label.name, (NORMAL, *known.cases))
    advice = "state it in a `cases` block: fault one LED shorted: n_LED = n_LED - 1"
    words = label.name.split()
    if together := _several(words, (NORMAL, *known.cases)):
        near, advice = None, f"names are separated by commas: {', '.join(together)}"
    elif words[0] == "all" or (len(words) == 1 and words[0] in _KINDS):
        near = None
        advice = (
            "without `in` it counts in normal and in every mode; write in every case, in every"
            " fault, or the names after commas"
        )
    return Mistake(
        error(
            "unknown-case",
            f"there is no case {shown(label.name)}",
            label.span,
            help=f"did you mean {near}?" if near else advice,
        )
    )


def _several(words: list[str], names: Collection[str]) -> list[str]:
    """The names that words written without commas consist of; empty when they are others."""
    found: list[str] = []
    while words:
        ends = (end for end in range(len(words), 0, -1) if " ".join(words[:end]) in names)
        end = next(ends, 0)
        if not end:
            return []
        found.append(" ".join(words[:end]))
        words = words[end:]
    return found


# --- what they change --------------------------------------------------------------------------


def build_cases(
    known: Stated, checker: Checker, variables: Mapping[str, Variable]
) -> tuple[tuple[Case, ...], list[Finding]]:
    """Every case with its changes by key, and what is wrong with them."""
    cases, findings = [], []
    for name, statement in known.cases.items():
        changes: dict[str, Given | Node] = {}
        firsts: dict[str, Label] = {}
        for change in statement.changes:
            try:
                changes[change.symbol.key] = _changed(change, firsts, checker, variables)
            except Mistake as mistake:
                findings.append(mistake.finding)
            except Unknown:
                pass
        cases.append(Case(name, name, statement.kind, statement, changes))
    return tuple(cases), findings


def _changed(
    change: Change,
    firsts: dict[str, Label],
    checker: Checker,
    variables: Mapping[str, Variable],
) -> Given | Node:
    """What a quantity becomes: a value, or a formula of normal values."""
    symbol = change.symbol
    first = firsts.setdefault(symbol.key, symbol)
    if first is not symbol:
        raise Mistake(
            error(
                "case-form",
                f"{shown(symbol.name)} is changed twice in this case",
                symbol.span,
                related=(Place(first.span, "first here"),),
                help="keep one of them",
            )
        )
    target = variables.get(symbol.key)
    if target is None:
        raise Unknown
    if target.given is None:
        raise Mistake(_not_given(symbol, target))
    if change.given is not None:
        _check_makeup(change.given, target)
        blame.other_kind(symbol, target, typed_as(change.given.unit))
        return change.given
    assert change.formula is not None
    typed = checker.quantity(change.formula)
    if series.over(change.formula, checker.sets):
        raise Mistake(
            error(
                "series-form",
                f"{shown(symbol.name)} is one value, this is a whole series",
                change.formula.span,
                help="name one element, or take max(...)",
            )
        )
    blame.other_kind(symbol, target, typed)
    return change.formula


def _not_given(symbol: Label, target: Variable) -> Finding:
    what = "a series" if target.index else target.kind
    return error(
        "case-form",
        f"{shown(symbol.name)} is {what}, a case changes conditions, inputs and assumptions",
        symbol.span,
        related=(Place(target.label.span, "defined here"),),
        help="change what it follows from",
    )


def _check_makeup(given: Given, target: Variable) -> None:
    if given.makeup is not None and target.kind == "condition":
        raise Mistake(
            error(
                "tolerance",
                "a condition is not random, so it has a band alone",
                given.span,
                related=(Place(target.label.span, "a condition"),),
                help="the design must hold at all of it; state parts in inputs",
            )
        )
