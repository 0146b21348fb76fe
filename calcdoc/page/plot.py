"""A drawing as SVG: the one module that knows matplotlib.

Matplotlib draws lines and areas; words are set by the page itself, as text in its own faces that
can be searched and copied. Every ink is a presentation attribute, so that a style sheet can change
it for a dark screen. Equal drawings give equal bytes.
"""

import io
import re
from typing import TYPE_CHECKING, Final
from xml.etree import ElementTree as ET

from calcdoc.page.marks import INK, Area, Bar, Drawing, Frame, Label, Ring, Run, Stroke

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

SVG: Final = "http://www.w3.org/2000/svg"
LINK: Final = "{http://www.w3.org/1999/xlink}href"
SANS: Final = "calcdoc sans, calcdoc sans greek, calcdoc signs, calcdoc sans more, sans-serif"
SERIF: Final = "calcdoc serif, calcdoc serif greek, calcdoc signs, calcdoc serif more, serif"
LOWERED: Final = 0.72
"""Size of a subscript."""
DROP: Final = 0.24
"""How far it stands below the line, in em of the base."""
RING: Final = 1.9
_DECIMALS: Final = re.compile(r"-?[0-9]*\.[0-9]+")
_REFERENCE: Final = re.compile(r"url\(#([^)]+)\)")


def svg(drawing: Drawing, name: str) -> str:
    """The drawing as one SVG element.

    Args:
        drawing: What to draw.
        name: Begins every id within, so that several drawings can stand on one page.
    """
    import matplotlib as mpl  # noqa: PLC0415  slow to load, and a check needs no picture
    from matplotlib.figure import Figure  # noqa: PLC0415

    frame = drawing.frame
    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update({
            "svg.hashsalt": name, "hatch.linewidth": 0.6, "path.simplify": False,
        })  # fmt: skip
        figure = Figure(figsize=(frame.width / 72, frame.height / 72), dpi=72, frameon=False)
        axes = _axes(figure, frame)
        for mark in drawing.marks:
            _draw(axes, mark)

        def place(mark: Ring | Label) -> tuple[float, float]:
            x, y = axes.transData.transform((mark.x, mark.y))
            return float(x), frame.height - float(y)

        placed = [_ring(each, *place(each)) for each in drawing.rings]
        placed += [_text(each, *place(each)) for each in drawing.labels]
        written = io.BytesIO()
        figure.savefig(written, format="svg", metadata={"Date": None, "Creator": None})
    root = _cleaned(ET.fromstring(written.getvalue()), name)  # noqa: S314  made just above
    root.extend(placed)
    ET.register_namespace("", SVG)
    return ET.tostring(root, encoding="unicode")


def _axes(figure: "Figure", frame: Frame) -> "Axes":
    width = frame.width - frame.left - frame.right
    height = frame.height - frame.bottom - frame.top
    axes = figure.add_axes((
        frame.left / frame.width, frame.bottom / frame.height,
        width / frame.width, height / frame.height,
    ))  # fmt: skip
    axes.patch.set_visible(False)
    axes.set_xlim(*frame.x)
    axes.set_ylim(*frame.y)
    axes.set_xticks(frame.ticks_x)
    axes.set_yticks(frame.ticks_y)
    axes.tick_params(
        labelbottom=False, labelleft=False, length=3, width=0.6, color=INK, direction="out"
    )
    for side, spine in axes.spines.items():
        shown = (side == "bottom" and frame.ticks_x) or (side == "left" and frame.ticks_y)
        spine.set_visible(bool(shown))
        spine.set_linewidth(0.6)
        spine.set_edgecolor(INK)
    return axes


def _draw(axes: "Axes", mark: Stroke | Area | Bar) -> None:
    match mark:
        case Stroke(x, y, ink, width, dashes, over):
            style = (0, dashes) if dashes else "solid"
            axes.plot(
                x, y, color=ink, linewidth=width, linestyle=style, clip_on=not over,
                solid_capstyle="butt", dash_capstyle="butt", zorder=3,
            )  # fmt: skip
        case Area(x, low, high, fill):
            axes.fill_between(x, low, high, facecolor=fill, linewidth=0, zorder=1)
        case Bar(left, right, bottom, top, fill, ink, hatch):
            axes.fill(
                (left, right, right, left), (bottom, bottom, top, top), facecolor=fill,
                edgecolor=ink, hatch=hatch or None, linewidth=0.5, joinstyle="miter", zorder=2,
            )  # fmt: skip


def _cleaned(root: ET.Element, name: str) -> ET.Element:
    """Without what a page has no use for; ids begin with the name, styles are attributes."""
    _spelled_out(root)
    for parent in root.iter():
        for child in list(parent):
            if child.tag in (f"{{{SVG}}}metadata", f"{{{SVG}}}style"):
                parent.remove(child)
    for each in root.iter():
        plain = each.tag in (f"{{{SVG}}}g", f"{{{SVG}}}svg")
        if "id" in each.attrib:
            own = each.attrib.pop("id")
            if not plain:
                each.set("id", f"{name}-{own}")
        for item in filter(None, each.attrib.pop("style", "").split(";")):
            key, _, value = item.partition(":")
            each.set(key.strip(), value.strip())
        for key, value in each.attrib.items():
            text = _REFERENCE.sub(rf"url(#{name}-\1)", value)
            if key in ("d", "x", "y", "points", "transform", "width", "height"):
                text = _DECIMALS.sub(lambda found: f"{float(found[0]):.2f}", " ".join(text.split()))
            each.set(key, text)
        each.text = each.tail = None
    root.attrib.pop("version", None)
    root.set("stroke-linejoin", "round")
    return root


def _spelled_out(root: ET.Element) -> None:
    """Marks that are used from a definition, as the ticks are, stand where they are drawn."""
    known = {each.get("id", ""): each for each in root.iter(f"{{{SVG}}}path")}
    for parent in root.iter():
        for child in list(parent):
            if child.tag == f"{{{SVG}}}use":
                defined = known[child.attrib.pop(LINK)[1:]]
                child.tag = defined.tag
                child.set("d", defined.get("d", ""))
                x, y = child.attrib.pop("x"), child.attrib.pop("y")
                child.set("transform", f"translate({x} {y})")
    for parent in root.iter():
        for child in list(parent):
            if child.tag == f"{{{SVG}}}defs" and all(
                each.tag == f"{{{SVG}}}path" for each in child
            ):
                parent.remove(child)


def _ring(ring: Ring, x: float, y: float) -> ET.Element:
    return ET.Element(f"{{{SVG}}}circle", {
        "cx": f"{x:.2f}", "cy": f"{y:.2f}", "r": f"{RING}", "fill": ring.fill,
        "stroke": ring.ink, "stroke-width": "0.9",
    })  # fmt: skip


def _text(label: Label, x: float, y: float) -> ET.Element:
    """A label as text; its runs follow each other."""
    x, y = x + label.right, y - label.up
    node = ET.Element(f"{{{SVG}}}text", {
        "x": f"{x:.2f}", "y": f"{y:.2f}", "font-size": f"{label.size:g}", "font-family": SANS,
        "fill": label.ink,
    })  # fmt: skip
    if label.anchor != "start":
        node.set("text-anchor", label.anchor)
    lowered = False
    for run in label.runs:
        node.append(_run(run, label.size, lowered=lowered))
        lowered = run.low
    return node


def _run(run: Run, size: float, *, lowered: bool) -> ET.Element:
    attributes = {"font-family": SERIF} if run.serif else {}
    if run.italic:
        attributes["font-style"] = "italic"
    if run.low:
        attributes["font-size"] = f"{size * LOWERED:.2f}"
    if run.low != lowered:
        attributes["dy"] = f"{size * DROP * (1 if run.low else -1):.2f}"
    node = ET.Element(f"{{{SVG}}}tspan", attributes)
    node.text = run.text
    return node
