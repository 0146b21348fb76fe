"""Criteria about criteria: any of several, and failures that are accepted until a day."""

from collections.abc import Mapping
from typing import Final

from calcdoc.model.cases import Stated, named
from calcdoc.model.model import Accepted, Chosen, Criterion, Judged, Model
from calcdoc.model.namespace import Namespace
from calcdoc.model.typing import Unknown
from calcdoc.problems import Finding, Mistake, Place, error, warning
from calcdoc.text.names import nearest, owner
from calcdoc.text.scan import shown
from calcdoc.text.statements import Acceptance, AnyOf, Inequality, Label, Statement, Uncalculated

_ALL: Final = ""
"""Stands for every case; no case has an empty name."""
Stating = Mapping[str, Inequality | Uncalculated | AnyOf]
"""The statements of criteria by key."""


def expired(model: Model, today: str = "") -> tuple[Finding, ...]:
    """Acceptances that ended before the date of the document.

    Args:
        model: The design.
        today: As YYYY-MM-DD: counts where the document has no date.
    """
    day = model.document.title.date
    dated = f"this document is of {day}" if day else f"today is {today}"
    return tuple(_expired(each, dated) for each in model.acceptances if ended(model, each, today))


def ended_since(model: Model, today: str) -> tuple[Accepted, ...]:
    """Acceptances that held on the date of the document and have ended since."""
    return tuple(
        each
        for each in model.acceptances
        if each.statement.until < today and not ended(model, each, today)
    )


def ended(model: Model, accepted: Accepted, today: str) -> bool:
    """Whether an acceptance ended before the date of the document, or else before today."""
    return accepted.statement.until < (model.document.title.date or today)


def since_then(accepted: Accepted, today: str) -> Finding:
    """What to say of an acceptance that has ended since the document was dated."""
    return _expired(accepted, f"today is {today}")


def _expired(accepted: Accepted, dated: str) -> Finding:
    statement = accepted.statement
    return warning(
        "acceptance-expired",
        f"the failure of {shown(statement.criterion.name)} is accepted until {statement.until},"
        f" {dated}",
        statement.until_span,
        help="have it accepted anew, or remove the line",
    )


def criteria_of(statements: tuple[Statement, ...]) -> Stating:
    """Statements of criteria by the key of their id; the first when there are two."""
    found: dict[str, Inequality | Uncalculated | AnyOf] = {}
    for each in statements:
        if isinstance(each, Inequality | Uncalculated | AnyOf):
            found.setdefault(each.id.key, each)
    return found


def key_of(criterion: Criterion) -> str:
    """The key of a criterion's id."""
    return (criterion if isinstance(criterion, Uncalculated) else criterion.statement).id.key


class Accepting:
    """Checks what speaks of criteria by their ids."""

    def __init__(self, space: Namespace, stating: Stating, known: Stated) -> None:
        self.space, self.stating, self.known = space, stating, known

    def chosen(self, statement: AnyOf) -> Chosen:
        """One of several routes.

        Raises:
            Mistake: at the first member that cannot be one.
            Unknown: when a member stands in a line that could not be read.
        """
        members: dict[str, Label] = {}
        for label in statement.members:
            if label.key == statement.id.key:
                raise _form(label, "a criterion is not one of its own routes", "name the others")
            if label.key in members:
                raise _form(label, f"{shown(label.name)} stands here twice", "name each once")
            if isinstance(self._criterion(label), AnyOf):
                raise _form(
                    label,
                    f"{shown(label.name)} is an `any of` itself",
                    "name the criteria it chooses among",
                    Place(self.space.labels[label.key].span, "defined here"),
                )
            members[label.key] = label
        return Chosen(statement, tuple(members))

    def _criterion(self, label: Label) -> Inequality | Uncalculated | AnyOf:
        found = self.stating.get(label.key)
        if found is not None:
            return found
        if label.key in self.known.broken or owner(label.key) in self.known.broken:
            raise Unknown
        if label.key in self.space.labels:
            what = self.space.ids.get(label.key, "symbol")
            message = f"{shown(label.name)} is {_with_article(what)}, not a criterion"
            near = None
        else:
            message = f"there is no criterion {shown(label.name)}"
            near = nearest(label.name, [each.id.name for each in self.stating.values()])
        raise Mistake(
            error(
                "unknown-criterion",
                message,
                label.span,
                help=f"did you mean {near}?" if near else "name the id of a criterion",
            )
        )

    def accepted(self, statement: Acceptance, criteria: Mapping[str, Criterion]) -> Accepted:
        """An acceptance; ``criteria`` are those found good, by key. Raises as above."""
        label = statement.criterion
        about = self._criterion(label)
        if isinstance(about, Uncalculated):
            raise Mistake(
                error(
                    "acceptance",
                    f"{shown(label.name)} is not calculated, so it cannot fail here",
                    label.span,
                    related=(Place(about.id.span, about.verdict),),
                    help="remove the acceptance",
                )
            )
        names = named(statement.cases, self.known)
        criterion = criteria.get(label.key)
        if criterion is None:
            raise Unknown
        judged = _judged_in(criterion, criteria)
        for case in statement.cases:
            if case.name not in judged:
                raise Mistake(
                    error(
                        "acceptance",
                        f"{shown(label.name)} is not judged in {shown(case.name)}",
                        case.span,
                        related=(Place(about.span, f"it is judged in {', '.join(judged)}"),),
                        help="name a case it is judged in, or add this one to its `in`",
                    )
                )
        return Accepted(statement, label.key, names)


def _judged_in(criterion: Criterion, criteria: Mapping[str, Criterion]) -> tuple[str, ...]:
    """Names of the cases; for ``any of`` those of its members, each once."""
    match criterion:
        case Judged():
            return criterion.cases
        case Chosen():
            inside = [_judged_in(criteria[key], criteria) for key in criterion.members
                      if key in criteria]  # fmt: skip
            return tuple(dict.fromkeys(name for names in inside for name in names))
        case _:
            return ()


def check_once(accepted: list[Accepted]) -> list[Finding]:
    """No failure is accepted twice."""
    findings = []
    seen: dict[str, dict[str, Label]] = {}
    for each in accepted:
        label, firsts = each.statement.criterion, seen.setdefault(each.criterion, {})
        wanted = each.cases or tuple(firsts)
        first = next((firsts[at] for at in (*wanted, _ALL) if at in firsts), None)
        if first is not None:
            findings.append(
                error(
                    "acceptance",
                    f"a failure of {shown(label.name)} is accepted twice",
                    label.span,
                    related=(Place(first.span, "first here"),),
                    help="keep one of them, or name different cases",
                )
            )
        for at in each.cases or (_ALL,):
            firsts.setdefault(at, label)
    return findings


def _form(label: Label, message: str, advice: str, *related: Place) -> Mistake:
    return Mistake(error("criterion-form", message, label.span, related=related, help=advice))


def _with_article(what: str) -> str:
    return f"an {what}" if what[0] in "aeiou" else f"a {what}"
