"""The type faces both pages embed, as style rules; all under the SIL Open Font License.

The files are those of the packages of the same name on npm, unchanged, except the mathematics
face: it is cut down to the signs formulas need, with its tables for stretched brackets and
radicals. Which file covers what: ``latin`` has accents, µ ° × − ± · ′ … and ¹²³; ``greek`` has the
letters; the mathematics face has √ ≤ ≥ ≠ ≈ → ⁻ ⁴ to ⁹, ⌊ ⌋ and the thin no-break space.
"""

from base64 import b64encode
from dataclasses import dataclass
from functools import lru_cache
from importlib import resources
from typing import Final

ALWAYS: Final = "latin"


@dataclass(frozen=True, slots=True)
class Face:
    """One file of a family; a family is one name in the style sheets."""

    family: str
    file: str
    weight: int = 400
    style: str = "normal"
    covers: str = ALWAYS
    """``latin`` is always embedded, ``latin-ext`` and ``greek`` when the page has such letters."""


FACES: Final = (
    Face("calcdoc serif", "stix-two-text-latin-400-normal"),
    Face("calcdoc serif", "stix-two-text-latin-400-italic", style="italic"),
    Face("calcdoc serif", "stix-two-text-latin-700-normal", 700),
    Face("calcdoc serif greek", "stix-two-text-greek-400-normal", covers="greek"),
    Face("calcdoc serif greek", "stix-two-text-greek-400-italic", style="italic", covers="greek"),
    Face("calcdoc serif greek", "stix-two-text-greek-700-normal", 700, covers="greek"),
    Face("calcdoc serif more", "stix-two-text-latin-ext-400-normal", covers="latin-ext"),
    Face("calcdoc serif more", "stix-two-text-latin-ext-700-normal", 700, covers="latin-ext"),
    Face("calcdoc sans", "source-sans-3-latin-400-normal"),
    Face("calcdoc sans", "source-sans-3-latin-400-italic", style="italic"),
    Face("calcdoc sans", "source-sans-3-latin-600-normal", 600),
    Face("calcdoc sans greek", "source-sans-3-greek-400-normal", covers="greek"),
    Face("calcdoc sans greek", "source-sans-3-greek-400-italic", style="italic", covers="greek"),
    Face("calcdoc sans greek", "source-sans-3-greek-600-normal", 600, covers="greek"),
    Face("calcdoc sans more", "source-sans-3-latin-ext-400-normal", covers="latin-ext"),
    Face("calcdoc sans more", "source-sans-3-latin-ext-600-normal", 600, covers="latin-ext"),
    Face("calcdoc signs", "stix-two-math-subset"),
)


def faces(page: str) -> str:
    """Rules that embed the faces the letters of a page ask for."""
    letters = set(page)
    needed = {ALWAYS}
    if any("\u0370" <= char <= "\u03ff" for char in letters):
        needed.add("greek")
    if any("\u0100" <= char <= "\u024f" or "\u1e00" <= char <= "\u1eff" for char in letters):
        needed.add("latin-ext")
    return "".join(_rule(face) for face in FACES if face.covers in needed)


@lru_cache(maxsize=len(FACES))
def _rule(face: Face) -> str:
    data = resources.files("calcdoc.page").joinpath("fonts", f"{face.file}.woff2").read_bytes()
    return (
        f'@font-face{{font-family:"{face.family}";font-weight:{face.weight};'
        f"font-style:{face.style};"
        f'src:url("data:font/woff2;base64,{b64encode(data).decode()}") format("woff2")}}\n'
    )


@lru_cache(maxsize=4)
def style(name: str) -> str:
    """A file of the package's style sheets."""
    return resources.files("calcdoc.page").joinpath("styles", name).read_text("utf-8")
