"""The process that runs SymPy: relations as JSON in, solutions as JSON out, nothing else.

It stands alone: it imports nothing of this package, opens no file and no connection. Expressions
are built node by node over generated symbols, never from text.
"""

import json
import operator
import sys
from typing import Any, Final

_BYTES_MOST: Final = 2**30
_SECONDS_MOST: Final = 20
_FUNCTIONS: Final = {
    "sqrt": "sqrt", "exp": "exp", "ln": "log", "sin": "sin", "cos": "cos", "tan": "tan",
    "asin": "asin", "acos": "acos", "atan": "atan", "abs": "Abs", "min": "Min", "max": "Max",
}  # fmt: skip
"""Our names of functions to SymPy's."""
_OPERATIONS: Final[dict[str, Any]] = {
    "neg": operator.neg,
    "-": operator.sub,
    "*": operator.mul,
    "/": operator.truediv,
    "^": operator.pow,
}


class _Foreign(Exception):
    """An expression that cannot be written as one of our formulas."""


def _limit() -> None:
    """Bound memory and processor time where the system can."""
    try:
        import resource  # noqa: PLC0415  (not there on every system)
    except ImportError:
        return
    for which, most in (
        (resource.RLIMIT_AS, _BYTES_MOST),
        (resource.RLIMIT_CPU, _SECONDS_MOST),
        (resource.RLIMIT_CORE, 0),
    ):
        try:
            resource.setrlimit(which, (most, most))
        except (ValueError, OSError):
            continue


class _Engine:
    """Builds expressions over symbols v0, v1, ... and writes them back."""

    def __init__(self) -> None:
        import sympy  # type: ignore[import-untyped]  # noqa: PLC0415  (after the limits are set)

        self.sympy: Any = sympy
        self.symbols: dict[int, Any] = {}

    def symbol(self, index: int) -> Any:  # noqa: ANN401
        if index not in self.symbols:
            self.symbols[index] = self.sympy.Symbol(f"v{index:04d}")
        return self.symbols[index]

    def built(self, lists: list[Any]) -> Any:  # noqa: ANN401
        """An expression from lists."""
        head, *rest = lists
        if head == "number":
            return self.sympy.Rational(int(rest[0]), int(rest[1]))
        if head == "symbol":
            return self.symbol(int(rest[0]))
        parts = [self.built(each) for each in rest]
        if head in _OPERATIONS:
            return _OPERATIONS[head](*parts)
        match head:
            case "+" | "sum":
                return self.sympy.Add(*parts)
            case "rss":
                return self.sympy.sqrt(self.sympy.Add(*(each**2 for each in parts)))
            case "log10":
                return self.sympy.log(parts[0], 10)
            case _:
                return getattr(self.sympy, _FUNCTIONS[head])(*parts)

    def written(self, expression: Any) -> list[Any]:  # noqa: ANN401
        """Lists from an expression.

        Raises:
            _Foreign: when it holds what our formulas have no word for.
        """
        sympy = self.sympy
        if expression.is_Rational:
            return ["number", str(expression.p), str(expression.q)]
        if expression.is_Symbol:
            return ["symbol", int(expression.name[1:])]
        if expression is sympy.pi:
            return ["pi"]
        if expression is sympy.E:
            return ["exp", ["number", "1", "1"]]
        parts = [self.written(each) for each in expression.args]
        if expression.is_Add or expression.is_Mul:
            return ["+" if expression.is_Add else "*", *parts]
        if expression.is_Pow:
            return ["^", *parts]
        ours = {name: word for word, name in _FUNCTIONS.items()}.get(type(expression).__name__)
        if ours is None:
            raise _Foreign
        return [ours, *parts]

    def solved(self, request: dict[str, Any]) -> list[list[Any]]:
        """All solutions that give every unknown as a formula, in a fixed order."""
        unknowns = [self.symbol(index) for index in range(request["unknowns"])]
        equations = [self.built(left) - self.built(right) for left, right in request["relations"]]
        found = []
        for solution in self.sympy.solve(equations, unknowns, dict=True):
            try:
                values = [solution[each] for each in unknowns]
                if any(value.free_symbols & set(unknowns) for value in values):
                    continue
                found.append([self.written(value) for value in values])
            except (_Foreign, KeyError):
                continue
        return sorted(found, key=json.dumps)


def _answer(request: dict[str, Any]) -> dict[str, Any]:
    _limit()
    sys.path[:] = request["path"]
    try:
        return {"solutions": _Engine().solved(request)}
    except NotImplementedError:
        return {"failure": "the symbolic engine knows no way to solve it"}
    except MemoryError:
        return {"failure": "the symbolic engine needs too much memory"}
    except Exception as trouble:  # noqa: BLE001  (a defect there must not end a whole check)
        return {"failure": f"the symbolic engine gave up: {type(trouble).__name__}"}


if __name__ == "__main__":
    json.dump(_answer(json.load(sys.stdin)), sys.stdout)
