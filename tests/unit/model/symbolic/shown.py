"""Relations from text and solutions as text, for the tests of the symbolic package."""

from calcdoc.model.symbolic import Failure, Outcome, solve
from calcdoc.text.formula import parse_text
from calcdoc.text.nodes import Node
from calcdoc.text.unparse import unparse

NAMES = ("loop", "node", "third")


def relations(text: str) -> list[tuple[str, Node, Node]]:
    """``a = b; c = d`` as relations named loop, node, third."""
    found = []
    for label, line in zip(NAMES, text.split(";"), strict=False):
        left, right = line.split(" = ")
        found.append((label, parse_text(left.strip()), parse_text(right.strip())))
    return found


def printed(tree: Node) -> str:
    """The text of a tree, which reads back as the same tree."""
    text = unparse(tree)
    assert parse_text(text) == tree, text
    return text


def told(outcome: Outcome) -> str:
    """Every solution: how it was found, each step with the relation after it, the result."""
    if isinstance(outcome, Failure):
        return f"{outcome.kind}: {outcome.message}"
    lines = []
    for combination in outcome.combinations:
        for each in combination:
            lines.append(f"{each.how}")
            lines += [f"  {s.words}: {printed(s.left)} = {printed(s.right)}" for s in each.steps]
            lines.append(f"{each.unknown} = {printed(each.tree)}")
    return "\n".join(lines)


def roots(text: str, *unknowns: str, seconds: float = 5.0) -> list[str]:
    """The solutions alone, one ``x = ...; y = ...`` per combination, or the failure."""
    outcome = solve(relations(text), unknowns, seconds)
    if isinstance(outcome, Failure):
        return [f"{outcome.kind}: {outcome.message}"]
    return [
        "; ".join(f"{each.unknown} = {printed(each.tree)}" for each in combination)
        for combination in outcome.combinations
    ]
