"""Formula tree -> picture tree: how a formula looks, without saying in what it is drawn.

The picture keeps the author's order, digits and groups. It only turns notation into shapes: a
quotient into a bar, ``sqrt`` into a radical, ``^`` into a superscript, underscores into
subscripts. Views draw pictures (see ``calcdoc.page.mathml`` and ``calcdoc.page.boxes``).
"""

from typing import Final

from calcdoc.records.shapes import (
    MINUS,
    NARROW,
    NO_BREAK,
    THIN,
    Cases,
    Fence,
    Fraction,
    Glyphs,
    Picture,
    Root,
    Row,
    Script,
    Symbol,
    first,
    joined,
    last,
    mentions_symbol,
    row,
    row_of,
)
from calcdoc.text import nodes
from calcdoc.text.names import GREEK

RELATIONS: Final = {"<=": "≤", ">=": "≥", "!=": "≠", "==": "="}
ARCS: Final = {"asin": "arcsin", "acos": "arccos", "atan": "arctan"}
BARS: Final = {"abs": ("|", "|"), "floor": ("⌊", "⌋"), "ceil": ("⌈", "⌉")}
PPM: Final = "ppm"
"""Read, but printed as the power of ten it stands for."""
SERIES_INDEX: Final = frozenset("nki")


# --- symbols ----------------------------------------------------------------------------------


def symbol(name: str, index: "Picture | None" = None) -> Symbol:
    """The picture of a symbol: italic base, upright subscript, the method's name before it."""
    *owner, plain = name.split(".")
    base, _, below = plain.partition("_")
    sub: list[Picture] = [Glyphs(below.replace("_", ","), "upright")] if below else []
    if index is not None:
        sub += [Glyphs(",", "upright"), index] if sub else [index]
    shape: Picture = _base(base)
    if sub:
        shape = Script(shape, sub=row(sub))
    if owner:
        shape = row([Glyphs(".".join(owner) + ".", "upright"), shape])
    return Symbol(name, shape)


def _base(base: str) -> Picture:
    """Letters italic, digits upright; a difference sign before a letter stands upright."""
    base = GREEK.get(base, base)
    runs: list[Picture] = []
    if base.startswith("Δ") and len(base) > 1:
        runs.append(Glyphs("Δ", "upright"))
        base = base[1:]
    while base:
        digits = base[0].isdigit()
        end = next((at for at, char in enumerate(base) if char.isdigit() != digits), len(base))
        runs.append(Glyphs(base[:end], "number" if digits else "italic"))
        base = base[end:]
    return row(runs)


# --- numbers and units ------------------------------------------------------------------------


def number(digits: str) -> Picture:
    r"""A number in the author's digits: true minus, thin groups, powers of ten as × 10ⁿ.

    >>> number("12345.6")
    Glyphs(text='12\u202f345.6', kind='number')
    """
    mantissa, _, exponent = digits.partition("e")
    shown = Glyphs(grouped(mantissa), "number")
    if not exponent:
        return shown
    times = Glyphs(f"{NO_BREAK}×{NO_BREAK}", "number")
    return Row((shown, times, _ten(_trimmed(exponent))))


def _ten(power: int | str) -> Script:
    return Script(Glyphs("10", "number"), sup=Glyphs(grouped(str(power)), "number"))


def grouped(digits: str) -> str:
    """Digits in threes, both sides of the marker, where a side has more than four."""
    sign = MINUS if digits.startswith("-") else ""
    whole, marker, rest = digits.lstrip("+-").partition(".")
    if len(whole) > 4:  # noqa: PLR2004  four digits may stay closed
        lead = len(whole) % 3 or 3
        threes = [whole[:lead], *(whole[at : at + 3] for at in range(lead, len(whole), 3))]
        whole = NARROW.join(threes)
    if len(rest) > 4:  # noqa: PLR2004
        rest = NARROW.join(rest[at : at + 3] for at in range(0, len(rest), 3))
    return sign + whole + marker + rest


def _trimmed(exponent: str) -> str:
    sign = "-" if exponent.startswith("-") else ""
    return sign + (exponent.lstrip("+-").lstrip("0") or "0")


def unit_word(word: str) -> str:
    """A unit word as it is printed: ``uF`` as µF, ``ohm`` as Ω, ``degC`` as °C."""
    if word == "deg":
        return "°"
    word = word.replace("\u03bc", "µ").replace("\u2126", "Ω").replace("ohm", "Ω")
    word = word.replace("degC", "°C")
    return "µ" + word[1:] if word.startswith("u") and len(word) > 1 else word


def unit(text: nodes.UnitText) -> Picture:
    """A unit with at most one solidus: what is divided by stands together behind it."""
    over = [_unit_power(word) for word in text.words if word.joint != "/"]
    under = [_unit_power(word) for word in text.words if word.joint == "/"]
    parts: list[Picture] = joined(over, Glyphs("·", "unit")) or [Glyphs("1", "unit")]
    if len(under) == 1:
        parts += [Glyphs("/", "unit"), *under]
    elif under:
        together = row(joined(under, Glyphs("·", "unit")))
        parts += [Glyphs("/", "unit"), Fence("(", ")", together)]
    return row(parts)


def _unit_power(word: nodes.UnitWord) -> Picture:
    if word.word == PPM:
        return _ten(-6 * word.exponent)
    shown = Glyphs(unit_word(word.word), "unit")
    if word.exponent == 1:
        return shown
    return Script(shown, sup=Glyphs(grouped(str(word.exponent)), "number"))


def quantity(digits: str, text: nodes.UnitText) -> Picture:
    """A number with its unit, held together by a no-break space; a plane angle is closed up."""
    shown = unit(text)
    space = [Glyphs(NO_BREAK, "space")]
    if shown == Glyphs("°", "unit"):
        space = []
    elif text.words[0].word == PPM and not text.words[0].joint:
        space = [Glyphs(f"{NO_BREAK}×{NO_BREAK}", "number")]
    return row([number(digits), *space, shown])


# --- formulas ---------------------------------------------------------------------------------


def picture(node: nodes.Node, *, flat: bool = False) -> Picture:
    """The picture of a formula; ``flat`` draws quotients with a solidus (in superscripts)."""
    match node:
        case nodes.Number(digits):
            return number(digits)
        case nodes.Quantity(digits, text):
            return quantity(digits, text)
        case nodes.Name(name):
            return Glyphs("π", "upright") if name == "pi" else symbol(name)
        case nodes.Element(name, index):
            return symbol(name, _index(index))
        case nodes.Text(value):
            return Glyphs(f"“{value}”", "upright")
        case nodes.Negate(operand):
            return row([Glyphs(MINUS, "sign"), _operand(operand, "-", flat=flat)])
        case nodes.Group(inner):
            return Fence("(", ")", picture(inner, flat=flat))
        case nodes.Call(function, arguments):
            return _call(function, arguments, flat=flat)
        case nodes.Binary():
            return _binary(node, flat=flat)
        case _:
            return _condition(node, flat=flat)


def equation(left: Picture, right: Picture, relation: str = "=") -> Row:
    """Two pictures with a relation between them."""
    return row_of([left, Glyphs(relation, "relation"), right])


def _index(node: nodes.Node) -> Picture:
    match node:
        case nodes.Name(name) if name in SERIES_INDEX:
            return Glyphs(name, "italic")
        case nodes.Name(name):
            return Glyphs(name, "upright")
        case _:
            return picture(node, flat=True)


def _binary(node: nodes.Binary, *, flat: bool) -> Picture:
    match node.op:
        case "/" if not flat:
            return Fraction(picture(_bare(node.left)), picture(_bare(node.right)))
        case "/":
            left, right = _operand(node.left, "*", flat=True), _operand(node.right, "^", flat=True)
            return row([left, Glyphs("/", "upright"), right])
        case "^":
            sup = picture(_bare(node.right), flat=True)
            return Script(_operand(node.left, "^", flat=flat), sup=sup)
        case "*":
            first_one = picture if _leads_negative(node.left) else _factor
            left, right = first_one(node.left, flat=flat), _factor(node.right, flat=flat)
            return row([left, _times(left, right), right])
        case op:
            left = picture(node.left, flat=flat)
            sign = Glyphs(MINUS if op == "-" else op, "operator")
            return row([left, sign, _operand(node.right, op, flat=flat)])


def _factor(node: nodes.Node, *, flat: bool) -> Picture:
    return _operand(node, "*", flat=flat)


def _leads_negative(node: nodes.Node) -> bool:
    """Whether a product begins with a minus, which needs brackets behind another sign only."""
    while isinstance(node, nodes.Binary) and node.op == "*":
        node = node.left
    return isinstance(node, nodes.Negate)


def _operand(node: nodes.Node, op: str, *, flat: bool) -> Picture:
    """An operand, bracketed where the tree asks for it and the author's text did not."""
    shown = picture(node, flat=flat)
    match node:
        case nodes.Binary("+" | "-") if op != "+":
            bracket = True
        case nodes.Binary() | nodes.Number() | nodes.Quantity() if op == "^":
            bracket = not isinstance(shown, Glyphs)
        case _ if _leads_negative(node):
            bracket = True
        case nodes.Comparison() | nodes.Logic() | nodes.Not():
            bracket = True
        case _:
            bracket = False
    return Fence("(", ")", shown) if bracket else shown


def _bare(node: nodes.Node) -> nodes.Node:
    """The node without the author's parentheses, where the shape groups already."""
    while isinstance(node, nodes.Group):
        node = node.inner
    return node


def _times(left: Picture, right: Picture) -> Glyphs:
    """A thin space between symbols; a cross where numbers or units would run together."""
    numbers = not (mentions_symbol(left) or mentions_symbol(right))
    if numbers or first(right).kind == "number" or last(left).kind == "unit":
        return Glyphs("×", "operator")
    return Glyphs(THIN, "space")


def _call(function: str, arguments: tuple[nodes.Node, ...], *, flat: bool) -> Picture:
    if function == "sqrt" and len(arguments) == 1:
        return Root(picture(_bare(arguments[0]), flat=flat))
    shown = [picture(each, flat=flat) for each in arguments]
    if function in BARS and len(shown) == 1:
        return Fence(*BARS[function], shown[0])
    if function == "if" and len(shown) == 3:  # noqa: PLR2004  condition, then, else
        return _choice(shown[0], shown[1], shown[2])
    name: Picture = Glyphs(ARCS.get(function, function), "function")
    if function == "log10":
        name = Script(Glyphs("log", "function"), sub=Glyphs("10", "number"))
    return row([name, Fence("(", ")", row(joined(shown, Glyphs(", ", "upright"))))])


def _choice(condition: Picture, then: Picture, otherwise: Picture) -> Cases:
    """``if(c, a, b)`` as rows of a brace; a choice in the last place adds its own rows."""
    top = row_of([then, Glyphs(" if ", "upright"), condition])
    if isinstance(otherwise, Cases):
        return Cases((top, *otherwise.rows))
    return Cases((top, row_of([otherwise, Glyphs(" otherwise", "upright")])))


def _condition(node: nodes.Node, *, flat: bool) -> Picture:
    match node:
        case nodes.Comparison(operands, operators):
            parts = [picture(operands[0], flat=flat)]
            for operator, operand in zip(operators, operands[1:], strict=True):
                sign = RELATIONS.get(operator, operator)
                parts += [Glyphs(sign, "relation"), picture(operand, flat=flat)]
            return row(parts)
        case nodes.Logic(word, left, right):
            middle = Glyphs(f" {word} ", "upright")
            return row([picture(left, flat=flat), middle, picture(right, flat=flat)])
        case nodes.Not(operand):
            return row([Glyphs("not ", "upright"), picture(operand, flat=flat)])
        case _:
            raise TypeError(f"no picture for {type(node).__name__}")
