"""Symbols: how they are written, when two are the same, and which words are taken."""

import re
import unicodedata
from collections.abc import Iterable
from functools import lru_cache
from itertools import islice
from typing import Final

LETTER: Final = (
    r"A-Za-z\u00aa\u00b5\u00ba\u00c0-\u00d6\u00d8-\u00f6\u00f8-\u024f"
    r"\u0370-\u03ff\u1f00-\u1fff\u2126\u2206"
)
MARK: Final = r"\u0300-\u036f"
"""Combining marks: an accent that a keyboard or file system wrote apart from its letter."""
SYMBOL: Final = re.compile(
    rf"[{LETTER}][{LETTER}{MARK}0-9]*(?:_[{LETTER}0-9][{LETTER}{MARK}0-9]*)*"
)
"""A letter, then letters and digits, then ``_`` and a subscript (which may hold ``_`` again)."""
OF_METHOD: Final = re.compile(rf"(?:{SYMBOL.pattern}\.)?{SYMBOL.pattern}")
"""A symbol, or one of a method with the method's name before it: ``bridge.V_min``."""

GREEK: Final = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "zeta": "ζ",
    "eta": "η", "theta": "θ", "iota": "ι", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν",
    "xi": "ξ", "omicron": "ο", "pi": "π", "rho": "ρ", "sigma": "σ", "tau": "τ",
    "upsilon": "υ", "phi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω",
    "Gamma": "Γ", "Delta": "Δ", "Theta": "Θ", "Lambda": "Λ", "Xi": "Ξ", "Pi": "Π",
    "Sigma": "Σ", "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω",
}  # fmt: skip
"""Spelled letters, when they are the whole base of a symbol."""

_LOOK_ALIKES: Final = str.maketrans({"\u00b5": "\u03bc", "\u2206": "Δ", "\u2126": "Ω"})

FUNCTIONS: Final = {
    "sqrt": (1, 1), "exp": (1, 1), "ln": (1, 1), "log10": (1, 1), "sin": (1, 1), "cos": (1, 1),
    "tan": (1, 1), "asin": (1, 1), "acos": (1, 1), "atan": (1, 1), "abs": (1, 1),
    "min": (1, 99), "max": (1, 99), "floor": (1, 1), "ceil": (1, 1), "sum": (1, 99),
    "rss": (1, 99), "if": (3, 3), "lookup": (1, 9),
}  # fmt: skip
"""Functions with the least and greatest number of arguments."""

CONSTANTS: Final = ("pi", "k_B", "q_e", "h_P", "c_0", "epsilon_0", "mu_0")
CLAUSE_WORDS: Final = frozenset({
    "by", "in", "at", "with", "for", "when", "and", "or", "not", "as", "from", "to", "of",
    "within", "where", "over", "against", "each", "bias", "odd", "even",
})  # fmt: skip


@lru_cache(maxsize=4096)
def fold(name: str) -> str:
    """The one spelling that all spellings of a symbol share.

    >>> fold("theta_JA") == fold("θ_JA"), fold("\u2206V") == fold("ΔV")
    (True, True)

    The name of a method before a symbol is a symbol of its own: ``tau.tau`` is ``τ.τ``.
    """
    return ".".join(map(_folded, name.split(".")))


def owner(key: str) -> str:
    """The key of the method that a symbol belongs to; empty for one of the design."""
    method, dot, _ = key.partition(".")
    return method if dot else ""


def _folded(name: str) -> str:
    composed = unicodedata.normalize("NFC", name).translate(_LOOK_ALIKES)
    base, joint, subscript = composed.partition("_")
    return GREEK.get(base, base).translate(_LOOK_ALIKES) + joint + subscript


_TAKEN: Final = {
    **{fold(word): "a function" for word in FUNCTIONS},
    **{fold(word): "a constant" for word in CONSTANTS},
    **{fold(word): "a word of the language" for word in CLAUSE_WORDS},
}


def taken_as(name: str) -> str | None:
    """What a reserved word stands for (``a function``), or None for a free name."""
    return _TAKEN.get(fold(name))


_COMPARED_MOST: Final = 200


def nearest(name: str, known: Iterable[str]) -> str | None:
    """The known name most like an unknown one, or None when nothing is like it."""
    candidates = list(known)
    folded = fold(name).lower()
    for candidate in candidates:
        if fold(candidate).lower() == folded:
            return candidate
    if len(candidates) > _COMPARED_MOST:
        alike = (each for each in candidates if each[:1] == name[:1] and len(each) == len(name))
        candidates = list(islice(alike, _COMPARED_MOST))
    import difflib  # noqa: PLC0415  (needed only for a mistake)

    close = difflib.get_close_matches(name, candidates, n=3, cutoff=0.6)
    return next(
        (each for each in close if each.startswith(name) or _changes(name, each) < len(name)), None
    )


def _changes(name: str, other: str) -> int:
    """Letters to change, add or leave out; as many as there are make another name of it."""
    import difflib  # noqa: PLC0415  (needed only for a mistake)

    steps = difflib.SequenceMatcher(None, name, other).get_opcodes()
    return sum(max(b - a, d - c) for kind, a, b, c, d in steps if kind != "equal")
