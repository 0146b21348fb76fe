"""What a design may name of its methods: what they give, and the ids of what they judge."""

from calcdoc.problems import Finding, Mistake, error
from calcdoc.problems.finding import Place
from calcdoc.text.document import Document
from calcdoc.text.names import nearest, owner
from calcdoc.text.scan import shown
from calcdoc.text.statements import Applied, Definition, Label
from calcdoc.units import ONE, Dimension

METHOD = "method"
"""What the name of an application is."""


def out_of_sight(label: Label, document: Document) -> Finding | None:
    """What is wrong with a name that has a dot, where the design itself says it."""
    key, path = label.key, document.source.path
    method = owner(key)
    if not method or label.span.path != path or document.is_broken(key):
        return None
    applied = next((each for each in document.applied if each.name.key == method), None)
    if applied is None:
        return _no_method(label, document)
    return None if key in applied.gives else _not_given(label, applied)


def _no_method(label: Label, document: Document) -> Finding:
    name = label.name.partition(".")[0]
    near = nearest(name, [each.name.name for each in document.applied])
    return error(
        "unknown-symbol",
        f"no method is applied as {shown(name)}",
        label.span,
        help=f"did you mean {near}?" if near else f"apply one: use METHOD as {name}",
    )


def _not_given(label: Label, applied: Applied) -> Finding:
    name, _, symbol = label.name.partition(".")
    given = [each.partition(".")[2] for each in sorted(applied.gives)]
    near = nearest(symbol, given)
    return error(
        "unknown-symbol",
        f"the method {shown(name)} gives no {shown(symbol)}",
        label.span,
        help=f"did you mean {name}.{near}?" if near else f"it gives {', '.join(given)}",
    )


def check_taken(line: Definition, dimension: Dimension, weight: object) -> None:
    """What a method takes is of the kind its sheet asks for.

    Raises:
        Mistake: when it is not.
    """
    take, unit = line.taken, line.unit
    assert take is not None
    wanted = unit.dimension if unit else ONE
    expected, found = wanted.in_words(), dimension.in_words()
    if wanted == dimension:
        celsius = bool(unit and unit.celsius)
        if celsius == bool(weight):
            return
        words = ("a temperature in °C", "a difference of temperatures")
        expected, found = words if celsius else words[::-1]
    raise Mistake(
        error(
            "take-kind",
            f"{shown(take.symbol.name)} is {expected}, this is {found}",
            line.formula.span,
            related=(Place(take.symbol.span, "what the method takes"),),
            help="give the method a quantity of the kind it asks for",
        )
    )
