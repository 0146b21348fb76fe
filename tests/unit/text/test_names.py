"""Symbols: how they are written and when two are the same."""

import unicodedata

import pytest

from calcdoc.text.names import CLAUSE_WORDS, CONSTANTS, FUNCTIONS, SYMBOL, fold, nearest, taken_as

SYMBOLS = ["V", "V_reg_max", "η", "ΔV", "R_th_JA", "theta_JA", "I2", "k_1", "e\u0301_x", "x\u0302"]
NO_SYMBOLS = ["_a", "2V", "V_", "V__a", "\u0301e", "a-b", "V reg", "", "一", "a.b"]


@pytest.mark.parametrize("text", SYMBOLS)
def test_symbol(text: str) -> None:
    """A letter, letters and digits, then subscripts; accents may stand apart."""
    assert SYMBOL.fullmatch(text)


@pytest.mark.parametrize("text", NO_SYMBOLS)
def test_no_symbol(text: str) -> None:
    """What does not begin with a letter, or has an empty subscript, is no symbol."""
    assert SYMBOL.fullmatch(text) is None


SAME = [
    ("\u00b5_r", "\u03bc_r"),
    ("\u2206V", "\u0394V"),
    ("\u2126", "\u03a9"),
    ("theta_JA", "θ_JA"),
    ("Delta", "Δ"),
    ("mu_0", "µ_0"),
    ("e\u0301", "\u00e9"),
    (unicodedata.normalize("NFD", "ά_x"), "ά_x"),
]


@pytest.mark.parametrize(("one", "other"), SAME)
def test_look_alikes_are_one_symbol(one: str, other: str) -> None:
    """Spellings that print alike are one symbol."""
    assert one != other
    assert fold(one) == fold(other)


@pytest.mark.parametrize(
    ("one", "other"), [("V", "v"), ("V_a", "V_A"), ("etaX", "ηX"), ("V_eta", "V_η"), ("Ω", "O")]
)
def test_others_are_two_symbols(one: str, other: str) -> None:
    """Case counts, and a spelled letter is one only as the whole base."""
    assert fold(one) != fold(other)


def test_taken_words() -> None:
    """Functions, constants and clause words are reserved, in every spelling; others are free."""
    assert {taken_as(word) for word in FUNCTIONS} == {"a function"}
    assert {taken_as(word) for word in CONSTANTS} == {"a constant"}
    assert {taken_as(word) for word in CLAUSE_WORDS} == {"a word of the language"}
    assert taken_as("π") == "a constant"
    assert taken_as("ε_0") == "a constant"
    assert taken_as("sqrt_2") is None
    assert taken_as("V") is None


def test_nearest() -> None:
    """Case is forgiven first, then a letter or two; what is far away is no advice."""
    known = ["V_line", "V_pk", "I_reg"]
    assert nearest("v_line", known) == "V_line"
    assert nearest("V_lin", known) == "V_line"
    assert nearest("zzz", known) is None
    assert nearest("x", []) is None


def test_nearest_among_many() -> None:
    """Among thousands of names only those of the same length and first letter are compared."""
    known = [f"x_{k}" for k in range(5000)]
    assert nearest("X_77", known) == "x_77"
    assert nearest("x_7q", known) is not None
    assert nearest("y_7q", known) is None
