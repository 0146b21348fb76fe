"""Tables that formulas look up: which are named, and that the arguments fit the axes."""

from collections.abc import Callable, Iterator, Mapping

from calcdoc.model.model import Typed
from calcdoc.model.namespace import trees
from calcdoc.problems import Mistake, error
from calcdoc.tables.table import Axis, Table
from calcdoc.text.document import Document
from calcdoc.text.nodes import Call, Node, Text, walk
from calcdoc.text.scan import shown

TypeOf = Callable[[Node], Typed]


def tables_named(document: Document) -> Iterator[Text]:
    """Every table name in a look-up, where it stands."""
    for statement in document.statements:
        for tree in trees(statement):
            for node in walk(tree):
                if isinstance(node, Call) and node.function == "lookup":
                    first = node.arguments[0]
                    if isinstance(first, Text):
                        yield first


def typed_lookup(node: Call, tables: Mapping[str, Table], type_of: TypeOf) -> Typed | None:
    """The type of a look-up; None when its table could not be read, which was reported.

    Raises:
        Mistake: when the arguments do not fit the axes of the table.
    """
    name, *arguments = node.arguments
    if not isinstance(name, Text):
        raise Mistake(
            error(
                "table",
                "the first argument of lookup is the name of a table in quotes",
                name.span,
                help='write lookup("name", argument)',
            )
        )
    table = tables.get(name.value)
    if table is None:
        return None
    if len(arguments) != len(table.axes):
        axes = ", ".join(axis.name for axis in table.axes)
        raise Mistake(
            error(
                "argument-count",
                f"the table {shown(table.name)} has {len(table.axes)} axes, here it has"
                f" {len(arguments)} arguments",
                node.span,
                help=f"its axes are: {axes}",
            )
        )
    for axis, argument in zip(table.axes, arguments, strict=True):
        _check_argument(table, axis, argument, type_of)
    return Typed(table.unit.dimension)


def _check_argument(table: Table, axis: Axis, argument: Node, type_of: TypeOf) -> None:
    if axis.unit is None or isinstance(argument, Text):
        if isinstance(argument, Text) and axis.unit is None:
            return
        wanted = "a text in quotes" if axis.unit is None else axis.unit.dimension.in_words()
        raise Mistake(
            error(
                "table",
                f"the axis {shown(axis.name)} of {shown(table.name)} takes {wanted}",
                argument.span,
            )
        )
    typed = type_of(argument)
    if typed.dimension != axis.unit.dimension:
        raise Mistake(
            error(
                "unit-mismatch",
                f"the axis {shown(axis.name)} takes {axis.unit.dimension.in_words()}, this is"
                f" {typed.dimension.in_words()}",
                argument.span,
            )
        )
