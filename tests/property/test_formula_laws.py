"""Laws of formulas: what is written is what was read, and every place is exact."""

import pytest
from hypothesis import given

from calcdoc.text.formula import parse_text
from calcdoc.text.nodes import Binary, Call, Comparison, Node, Quantity, UnitText, walk
from calcdoc.text.unparse import unit_text, unparse
from tests.property.strategies import formulas, units

pytestmark = pytest.mark.property


@given(formulas())
def test_parsing_is_the_inverse_of_writing(tree: Node) -> None:
    """parse(unparse(tree)) == tree."""
    assert parse_text(unparse(tree)) == tree


@given(formulas())
def test_writing_is_stable_after_one_pass(tree: Node) -> None:
    """unparse(parse(text)) == text for every text that unparse wrote."""
    text = unparse(tree)
    assert unparse(parse_text(text)) == text


@given(formulas())
def test_the_text_at_a_place_is_the_node(tree: Node) -> None:
    """The span of every node re-parses to an equal node, and of every operator to its sign."""
    text = unparse(tree)
    for node in walk(parse_text(text)):
        span = node.span
        assert parse_text(text[span.start : span.end]) == node
        if isinstance(node, Binary):
            assert text[node.op_span.start : node.op_span.end] == node.op
        if isinstance(node, Call):
            assert text[node.name_span.start : node.name_span.end] == node.function
        if isinstance(node, Quantity):
            unit = node.unit.span
            assert text[unit.start : unit.end] == unit_text(node.unit)


@given(formulas())
def test_blanks_do_not_matter_around_operators(tree: Node) -> None:
    """More blanks around signs and a line end between them give the same tree."""
    text = unparse(tree)
    assert parse_text(text.replace(" + ", "  +\n ").replace(", ", " ,  ")) == tree


@given(units())
def test_a_unit_reads_back(unit: UnitText) -> None:
    """A unit as written is read as the same words, joints and exponents."""
    node = parse_text(f"2 {unit_text(unit)}")
    assert isinstance(node, Quantity)
    assert node.unit == unit


@given(formulas())
def test_trees_are_compared_without_places(tree: Node) -> None:
    """The same formula further to the right is an equal tree with other places."""
    text = unparse(tree)
    shifted = parse_text(f"  {text}")
    assert shifted == parse_text(text)
    assert shifted.span != parse_text(text).span
    assert not isinstance(shifted, Comparison) or len(shifted.operands) > 1
