"""The order of computation, and circles of definitions."""

from collections.abc import Mapping

from calcdoc.problems import Finding, Place, error
from calcdoc.text.scan import shown
from calcdoc.text.statements import Label


def in_order(
    uses: Mapping[str, tuple[str, ...]], labels: Mapping[str, Label]
) -> tuple[tuple[str, ...], list[Finding]]:
    """Keys such that each comes after those it uses; what stands in a circle is left out.

    Args:
        uses: For every key, the keys its formula mentions.
        labels: Where every key is defined.
    """
    order: list[str] = []
    state: dict[str, int] = {}  # 1 while its uses are being visited, 2 when done, 3 in a circle
    findings: list[Finding] = []
    for root in uses:
        path: list[tuple[str, int]] = [(root, 0)] if root not in state else []
        while path:
            key, at = path.pop()
            state.setdefault(key, 1)
            if at == len(uses[key]):
                state[key] = _settled(key, uses, state)
                if state[key] == 2:  # noqa: PLR2004
                    order.append(key)
                continue
            path.append((key, at + 1))
            used = uses[key][at]
            if state.get(used) == 1:
                findings.append(_circle([each for each, _ in path], used, labels))
                state[used] = 3
            elif used not in state:
                path.append((used, 0))
    return tuple(order), findings


def _settled(key: str, uses: Mapping[str, tuple[str, ...]], state: Mapping[str, int]) -> int:
    """2 when a key can be computed, 3 when it stands in a circle or rests on one."""
    blocked = state[key] == 3 or any(state.get(used) != 2 for used in uses[key])  # noqa: PLR2004
    return 3 if blocked else 2


def _circle(path: list[str], used: str, labels: Mapping[str, Label]) -> Finding:
    around = [*path[path.index(used) :], used]
    shape = " → ".join(labels[key].name for key in around)
    first, *rest = around[:-1]
    return error(
        "circle",
        f"{shown(labels[first].name)} depends on itself: {shape}",
        labels[first].span,
        related=tuple(Place(labels[key].span, "part of the circle") for key in rest[:5]),
        help="define one of them without the others, or settle one: settle "
        f"{labels[first].name} within a .. b",
    )
