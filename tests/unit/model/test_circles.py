"""The order of computation, and circles of definitions."""

from calcdoc.model.circles import in_order
from calcdoc.source import Span
from calcdoc.text.statements import Label


def order_of(uses: dict[str, str]) -> tuple[tuple[str, ...], list[str]]:
    """The order, and the headlines of what was found."""
    labels = {key: Label(key, Span("a", at, at + 1)) for at, key in enumerate(uses)}
    order, findings = in_order({key: tuple(used) for key, used in uses.items()}, labels)
    return order, [each.message for each in findings]


def test_a_line_of_uses() -> None:
    """What is used comes first."""
    assert order_of({"a": "b", "b": "c", "c": ""}) == (("c", "b", "a"), [])


def test_a_diamond() -> None:
    """What is used twice comes once."""
    order, found = order_of({"a": "bc", "b": "d", "c": "d", "d": ""})
    assert sorted(order) == ["a", "b", "c", "d"]
    assert order[0] == "d"
    assert order[-1] == "a"
    assert found == []


def test_a_circle_is_left_out() -> None:
    """A circle and what rests on it cannot be computed; the rest can."""
    order, found = order_of({"a": "b", "b": "c", "c": "b", "d": "a", "e": "f", "f": ""})
    assert order == ("f", "e")
    assert found == ["`b` depends on itself: b → c → b"]


def test_two_circles() -> None:
    """Each circle is reported once."""
    _, found = order_of({"a": "b", "b": "a", "c": "d", "d": "c"})
    assert found == [
        "`a` depends on itself: a → b → a",
        "`c` depends on itself: c → d → c",
    ]


def test_a_circle_of_one() -> None:
    """A symbol in its own formula is a circle."""
    assert order_of({"a": "a"}) == ((), ["`a` depends on itself: a → a"])


def test_a_long_line_needs_no_deep_stack() -> None:
    """Thousands of lines that rest on each other are ordered without recursion."""
    keys = [str(k) for k in range(20_000)]
    labels = {key: Label(key, Span("a", 0, 1)) for key in keys}
    uses = {key: (keys[at + 1],) if at + 1 < len(keys) else () for at, key in enumerate(keys)}
    order, found = in_order(uses, labels)
    assert order == tuple(reversed(keys))
    assert found == []
