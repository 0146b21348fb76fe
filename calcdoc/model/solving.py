"""Solved lines: unknowns of relations in closed form, or between two values."""

from collections.abc import Mapping

from calcdoc.model.model import Implicit, Root, Solved
from calcdoc.model.symbolic import Failure, Solution, Step, is_identity, solve
from calcdoc.model.symbolic.trees import replaced
from calcdoc.problems import Finding, Mistake, Place, error
from calcdoc.text.names import fold
from calcdoc.text.nodes import names
from calcdoc.text.scan import shown
from calcdoc.text.statements import RelationStatement, SolvedStatement
from calcdoc.text.unparse import unparse
from calcdoc.units import ONE

Relations = Mapping[str, RelationStatement]


def solved_for(statement: SolvedStatement, relations: Relations) -> Solved | Implicit | None:
    """Solve the relations of a line for its unknowns; None when a relation is missing.

    Raises:
        Mistake: when there is no way to, with the reason.
    """
    used = [relations[each.key] for each in statement.relations if each.key in relations]
    if len(used) < len(statement.relations):
        return None
    _check_counts(statement)
    if statement.bracket is not None:
        return _numerically(statement, used[0])
    keys = tuple(unknown.symbol.key for unknown in statement.unknowns)
    outcome = solve([(each.name.name, each.left, each.right) for each in used], keys)
    if isinstance(outcome, Failure):
        raise Mistake(_refusal(statement, used, outcome))
    return Solved(
        keys,
        tuple(each.key for each in statement.relations),
        tuple(tuple(_root(each) for each in roots) for roots in outcome.combinations),
        statement.where,
        all(_satisfies(roots, used) for roots in outcome.combinations),
        statement.unknowns[0].symbol,
    )


def _satisfies(roots: tuple[Solution, ...], relations: list[RelationStatement]) -> bool:
    """Whether a combination put back makes every relation an identity."""
    trees = {each.unknown: each.tree for each in roots}
    return all(
        is_identity(replaced(each.left, trees), replaced(each.right, trees)) is True
        for each in relations
    )


def _root(solution: Solution) -> Root:
    return Root(solution.tree, tuple(_in_words(step) for step in solution.steps))


def _in_words(step: Step) -> str:
    return f"{step.words}: {unparse(step.left)} = {unparse(step.right)}"


def _numerically(statement: SolvedStatement, relation: RelationStatement) -> Implicit:
    assert statement.bracket is not None
    unknown = statement.unknowns[0].symbol
    keys = {fold(each.name) for tree in (relation.left, relation.right) for each in names(tree)}
    if unknown.key not in keys:
        raise Mistake(_not_in_relation(statement, relation))
    return Implicit(
        relation.left,
        relation.right,
        ONE,  # found out when both sides are typed
        statement.bracket,
        (),
        is_loop=False,
        relation=relation.name.key,
    )


def _check_counts(statement: SolvedStatement) -> None:
    unknowns, relations = len(statement.unknowns), len(statement.relations)
    if statement.bracket is not None and (unknowns > 1 or relations > 1):
        raise Mistake(
            error(
                "solve",
                "`within` solves one relation for one unknown",
                statement.span,
                help="solve the other unknowns on lines of their own",
            )
        )
    if unknowns != relations:
        which = (
            "more unknowns than relations"
            if unknowns > relations
            else ("more relations than unknowns")
        )
        raise Mistake(
            error(
                "solve",
                f"there are {which}: {unknowns} and {relations}"
                if unknowns > relations
                else f"there are {which}: {relations} and {unknowns}",
                statement.span,
                help="name as many relations as unknowns",
            )
        )


def _refusal(
    statement: SolvedStatement, used: list[RelationStatement], failure: Failure
) -> Finding:
    places = tuple(Place(each.span, "the relation") for each in used)
    symbols = ", ".join(each.symbol.name for each in statement.unknowns)
    match failure.kind:
        case "unknown not in relation":
            return _not_in_relation(statement, used[0])
        case "contradiction":
            message, advice = "these relations contradict each other", "check both sides"
        case "dependent":
            message = f"these relations do not determine {symbols}: one follows from the others"
            advice = "state a relation that says something new"
        case "out of time":
            message = f"solving for {shown(symbols)} took more than five seconds"
            advice = "solve numerically: add `within a .. b` with values around the root"
        case _:
            message = f"no closed form was found for {shown(symbols)}"
            advice = "solve numerically: add `within a .. b` with values around the root"
    return error("solve", message, statement.span, related=places, help=advice)


def _not_in_relation(statement: SolvedStatement, relation: RelationStatement) -> Finding:
    missing = statement.unknowns[0].symbol
    for unknown in statement.unknowns:
        trees = (relation.left, relation.right)
        if unknown.symbol.key not in {fold(n.name) for tree in trees for n in names(tree)}:
            missing = unknown.symbol
    return error(
        "solve",
        f"{shown(missing.name)} does not stand in the relation {shown(relation.name.name)}",
        missing.span,
        related=(Place(relation.span, "the relation"),),
        help="name the relation it stands in",
    )
