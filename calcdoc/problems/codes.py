"""Every problem code: its title, why it matters, and an example that has it.

What a user reads about a code is made from this list, and a test runs each example.
"""

from dataclasses import dataclass
from typing import Final


@dataclass(frozen=True, slots=True)
class Code:
    """What a code means."""

    title: str
    why: str
    example: str
    """A text with a `document` block before it has this problem; in brackets: described only."""


DOCUMENT: Final = """```document
number = "X-1"
title = "Example"
revision = "A"
```

"""
"""What stands before an example, unless it brings a title block of its own."""

WITHOUT_DOCUMENT: Final = frozenset({"missing-document", "document-key", "document-toml"})

CODES: Final = {
    "argument-count": Code(
        "a function has too few or too many arguments",
        "Each function takes a fixed number of values, or at least one. A missing comma or a parenthesis in the wrong place is the usual cause.",
        "```derive\nx = sqrt(4, 9)\n```",
    ),
    "assumption-state": Code(
        "an assumption does not say whether it is open",
        "Whoever signs the record must see which assumptions still have to be settled. The last column therefore begins with `open:` or `closed:`.",
        "```assumptions\nA1: R_th = 60 K/W ± 15 % | lamp in free air | thermal test planned\n```",
    ),
    "block-too-deep": Code(
        "a block stands so far in that it would be read as plain code",
        "CommonMark takes text that is indented by four more blanks for code. A block of the calculation there would silently not count.",
        "- a list item\n\n      ```inputs\n      V_D = 0.95 V\n      ```",
    ),
    "circle": Code(
        "a quantity depends on itself",
        "A value that is needed for its own computation cannot be computed line by line.",
        "```derive\na = 2*b\nb = a + 1\n```",
    ),
    "columns": Code(
        "a statement has too many columns, or a reference too few",
        "Columns are separated by a bar. A bar that belongs to the text is written as \\|.",
        "```inputs\nV_D = 0.95 V | diode | data sheet | page 3\n```",
    ),
    "condition-as-value": Code(
        "a condition stands where a value is needed, or the other way round",
        "A comparison is true or false and has no value. It is used as the first argument of if(condition, a, b).",
        "```derive\nx = if(3, 1, 2)\n```",
    ),
    "criterion-form": Code(
        "a criterion or one of its clauses is not written as it should be",
        "A criterion compares a value with one limit, or with two that point the same way; each clause stands once.",
        "```inputs\nP = 4.5 W\n```\n\n```criteria\nR1: 4 W <= P >= 5 W\n```",
    ),
    "defined-twice": Code(
        "a name is defined twice",
        "Symbols, ids of criteria and ids of assumptions share one set of names, so that a name in the record means one thing.",
        "```inputs\nV_D = 0.95 V\nV_D = 0.7 V\n```",
    ),
    "display-unit": Code(
        "the unit in brackets is not one of the formula's result",
        "The unit behind a symbol says what the author expects; when the formula gives another dimension one of the two is wrong.",
        "```derive\nV_pk [A] = 2*230 V\n```",
    ),
    "division-by-zero": Code(
        "a divisor becomes zero, at nominal or somewhere within the band",
        "The result would be unbounded there, so no limit could be shown to hold.",
        "```inputs\na = 1 V ± 10 %\nb = 1 V\n```\n\n```derive\nx = b/(a - b)\n```",
    ),
    "document-key": Code(
        "a key of the title block is missing, unknown or of the wrong kind",
        "Number, title and revision identify a record; a misspelled key would be lost silently.",
        '```document\nnumber = "X-1"\ntitle = "Example"\nrevison = "A"\n```',
    ),
    "document-toml": Code(
        "the title block is not TOML",
        'The title block is read as TOML: one `key = "value"` on each line.',
        "```document\nnumber = X-1\n```",
    ),
    "empty-caution": Code(
        "a caution says nothing",
        "A caution that is printed must say what can happen and how to avoid it.",
        "```caution\nwarning\n```",
    ),
    "formula-size": Code(
        "a formula is too long or nested too deeply",
        "Nobody can check such a formula with a pencil. Parts of it with names of their own are easier to review and are computed once.",
        "```derive\nx = " + "(" * 70 + "1" + ")" * 70 + "\n```",
    ),
    "hazards-missing": Code(
        "a design above 50 V declares no hazards",
        "The cautions of the record follow from the declared hazards. Without them the mains caution is printed, but no discharge time can be computed.",
        "```inputs\nV_line = 230 V\n```",
    ),
    "link-refused": Code(
        "a link was replaced by its text",
        "A record is one file that loads nothing; links are kept only when they plainly lead to a page or an address.",
        "See [the note](../notes.md).",
    ),
    "missing-document": Code(
        "the text has no `document` block",
        "Without number, title and revision a record cannot be identified or filed.",
        "Only prose.",
    ),
    "not-available-yet": Code(
        "a word is reserved for a coming version",
        "The word already has its meaning in the language, but this version cannot compute it yet.",
        "```cases\nmode dim: I = 0 mA\n```",
    ),
    "not-utf8": Code(
        "the file is not UTF-8",
        "The text is read as UTF-8; other encodings would turn µ and Ω into something else.",
        "(a file saved in another encoding, such as Latin-1)",
    ),
    "nul-character": Code(
        "the text holds a NUL character",
        "A NUL is never part of a text; the file may be damaged or no text at all.",
        "(a file with a zero byte in it)",
    ),
    "number-form": Code(
        "a number is not written as one",
        "A number has a decimal point with digits on both sides, no blanks and no comma; one blank stands between it and its unit.",
        "```inputs\nV_D = 0,95 V\n```",
    ),
    "operating-point": Code(
        "an `at` clause sets what it cannot set",
        "An operating point fixes conditions and inputs. What is derived follows from them.",
        "```inputs\na = 1 V\n```\n\n```derive\nb = 2*a\n```\n\n```criteria\nR1: b <= 3 V at b = 1 V\n```",
    ),
    "out-of-domain": Code(
        "a function is taken where it has no value",
        "The square root of a negative, the logarithm of zero or less and the like have no real value, so the result would not be a number.",
        "```inputs\na = 1 ± 1.5\n```\n\n```derive\nx = sqrt(a)\n```",
    ),
    "picture": Code(
        "a picture cannot be shown",
        "Pictures lie beside the design, so that the record can be made again from what is filed; they are PNG or JPEG files.",
        "![wiring](../wiring.png)",
    ),
    "reserved-word": Code(
        "a name is a word of the language",
        "Functions, constants and the words of clauses cannot be symbols.",
        "```inputs\nmin = 3 V\n```",
    ),
    "second-document": Code(
        "the text has two `document` blocks",
        "A record has one title block.",
        '```document\nnumber = "X-2"\ntitle = "Second"\nrevision = "A"\n```',
    ),
    "syntax": Code(
        "something else was expected here",
        "The message says what could stand here and what was found.",
        "```derive\nx = 3 + * 4\n```",
    ),
    "tab-at-start": Code(
        "a line of a block begins with a tab",
        "A line that begins with a blank continues the one above; how wide a tab is nobody can see.",
        "```inputs\n\tV_D = 0.95 V\n```",
    ),
    "temperature": Code(
        "temperatures and differences of temperatures are mixed",
        "40 °C is a point on a scale, 10 K is a difference. Adding two points, or taking a share of one, means nothing.",
        "```inputs\nT_a = 40 °C\n```\n\n```derive\nT_b = T_a + 10 °C\n```",
    ),
    "text-size": Code(
        "the text is too long",
        "A design of this length could not be reviewed; the limit also keeps reading time bounded.",
        "(a text of more than two million characters)",
    ),
    "tolerance": Code(
        "a tolerance cannot be read in one way, or leaves out the value",
        "Least, nominal and greatest must stand in this order, and the tolerance must mean one thing.",
        "```inputs\nk = 90 % ± 2 %\n```",
    ),
    "too-large": Code(
        "a value is too large to compute",
        "The number exceeds what a computer's arithmetic can hold; usually an exponent or a unit is wrong.",
        "```derive\nx = 9^9^9^9\n```",
    ),
    "two-readings": Code(
        "a unit word is also a symbol of the design",
        "`1 s/m` is a second per metre, or a second divided by m. A record must not leave that open.",
        "```inputs\nm = 3 kg\n```\n\n```derive\nx = 1 s/m\n```",
    ),
    "unclosed-block": Code(
        "a block is not closed",
        "Everything behind it would silently belong to the block.",
        "```inputs\nV_D = 0.95 V",
    ),
    "unit-mismatch": Code(
        "quantities of different kinds are added, compared, or used where a plain number is needed",
        "Only quantities of one kind can be added or compared; exponents and arguments of functions are plain numbers.",
        "```inputs\nV = 3 V\nI = 2 A\n```\n\n```derive\nx = V + I\n```",
    ),
    "unknown-block": Code(
        "a fenced block has almost the name of a block of the calculation",
        "It is shown as code and takes no part in the calculation, which is probably not meant.",
        "```input\nV_D = 0.95 V\n```",
    ),
    "unknown-citation": Code(
        "a basis cites a reference that is not in the list",
        "Every source must be identified with title and edition in a `references` block.",
        "```inputs\nV_D = 0.95 V | diode | [DIO, p. 3]\n```",
    ),
    "unknown-function": Code(
        "there is no such function",
        "A name directly before a parenthesis is a function; to multiply, write *.",
        "```derive\nx = root(4)\n```",
    ),
    "unknown-name": Code(
        "prose names something that does not exist",
        "`{name}` in prose prints a value of this calculation, so the name must exist. A plain brace is written \\{.",
        "The voltage is {V_peak}.",
    ),
    "unknown-symbol": Code(
        "a formula names something that is nowhere defined",
        "Every symbol is given in conditions, inputs or assumptions, or derived.",
        "```derive\nx = 2*y\n```",
    ),
    "unknown-unit": Code(
        "a word after a number is not a unit",
        "After a number a word is a unit, never a symbol; there is no multiplication without a sign.",
        "```derive\nx = 2 turns\n```",
    ),
}
