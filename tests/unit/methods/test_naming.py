"""Names of a sheet in a design: in formulas, in clauses, in words, in citations."""

from pathlib import Path
from textwrap import indent

from calcdoc.methods.naming import Naming, renamed
from calcdoc.pipeline import evaluate, read, record
from calcdoc.text.criteria import criterion
from calcdoc.text.derivation import derivation
from calcdoc.text.passage import passage_of
from calcdoc.text.statements import Definition, Inequality
from calcdoc.text.unparse import unparse
from tests.helpers.checking import TITLE
from tests.helpers.design import worked, worked_with

NAMING = Naming("m", frozenset({"V", "V_1", "a", "τ", "n", "R1"}), {"K": "sheet:K"})


def test_formula() -> None:
    """Own names get the name of the application; constants, units and a running index do not."""
    line = derivation(
        passage_of("s.md", "X[n] [V] = V*n + 2 V*a*pi for n in 1..3 | V_1 and a | [K]")
    )
    found = renamed(line, NAMING)
    assert isinstance(found, Definition)
    assert unparse(found.formula) == "m.V*n + 2 V*m.a*pi"
    assert found.description == "m.V_1 and a"
    assert (found.basis.text, found.basis.citations[0].key) == ("[sheet:K]", "sheet:K")
    assert found.span == line.span


def test_spelled_letter() -> None:
    """A letter that is spelled is the same name."""
    assert NAMING.symbol("tau") == "m.tau"
    assert NAMING.symbol("t") == "t"


def test_clauses() -> None:
    """Clauses are shown in the names of the application."""
    found = renamed(criterion(passage_of("s.md", "R1: V <= 5 V when V_1 > 3 V and a < 2")), NAMING)
    assert isinstance(found, Inequality)
    assert found.id.name == "m.R1"
    assert found.clauses.text == "when m.V_1 > 3 V and m.a < 2"


def test_two_uses_keep_apart() -> None:
    """One method applied twice gives two of each line, and cites its source once."""
    use = "use residual-voltage as {}\nC = 1 µF\nR = {} MΩ\nV_0 = 100 V"
    found = worked(use.format("one", 1), use.format("two", 2))
    assert (found["one.tau"].nominal, found["two.tau"].nominal) == (1, 2)
    assert [each.key for each in found.record.references] == ["IEC 60335-1"]
    assert found.record.references[0].cited_by == (
        *(found[f"one.{each}"].line for each in ("V_safe", "t_wait")),
        *(found[f"two.{each}"].line for each in ("V_safe", "t_wait")),
    )
    assert [each.name for each in found.record.applied] == ["one", "two"]


def test_reference_that_says_something_else() -> None:
    """A key of the design that stands for another document stays; that of the sheet is marked."""
    use = "use residual-voltage as one\nC = 1 µF\nR = 1 MΩ\nV_0 = 100 V"
    found = worked(use, references="IEC 60335-1 | A copy of our own")
    assert [each.key for each in found.record.references] == [
        "IEC 60335-1",
        "residual-voltage:IEC 60335-1",
    ]
    assert found["one.t_wait"].basis.startswith("[residual-voltage:IEC 60335-1, 22.5]")


def test_caution_of_a_sheet_is_on_the_cover() -> None:
    """The caution of a method stands with those of the author."""
    found = worked("use residual-voltage as one\nC = 1 µF\nR = 1 MΩ\nV_0 = 40 V")
    (own,) = [each for each in found.record.cautions if each.origin == "author"]
    assert (own.signal, own.text[:23]) == ("warning", "Measure before touching")


def test_method_in_a_list(tmp_path: Path) -> None:
    """A method may be applied in an item of a list; its lines are numbered as anywhere."""
    own = tmp_path / "lamp.md"
    use = "```use residual-voltage as one\nC = 1 µF\nR = 1 MΩ\nV_0 = 40 V\n```\n"
    own.write_text(TITLE + "\n- An item\n\n" + indent(use, "  "), encoding="utf-8")
    made = record(evaluate(read(own)))
    assert [each.line for each in made.quantities] == [str(n) for n in range(1, 13) if n != 9]
    assert made.relations[0].line == "9"


def test_caution_of_two_uses_is_said_once() -> None:
    """A method that is applied twice warns once on the cover."""
    use = "use residual-voltage as {}\nC = 1 µF\nR = 1 MΩ\nV_0 = 40 V"
    found = worked(use.format("one"), use.format("two"))
    assert len([each for each in found.record.cautions if each.origin == "author"]) == 1


def test_readme() -> None:
    """The README's use and sheet are what they are said to be."""
    text = (Path(__file__).parents[3] / "README.md").read_text("utf-8")
    _, use, sheet, *_ = text[text.index("## Methods") :].split("````markdown\n")
    use, sheet = use.partition("````")[0], sheet.partition("````")[0]
    inputs = "C_x = 100 nF ± 20 %\nR_bleed = 1 MΩ\nV_line = 230 V"
    lines = use.removeprefix("```").removesuffix("```\n")
    assert worked(lines, inputs=inputs)["discharge.V_res"].kind == "method"
    own = lines.replace("residual-voltage as discharge", "./sheets/bleed.md as bleed")
    found = worked_with({"sheets/bleed.md": sheet}, own, inputs=inputs)
    assert found["bleed.t_safe"].greatest_text == "0.2028 s"  # 1 MΩ × 100 nF × 1.2 × ln(325.27/60)
