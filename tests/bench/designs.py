"""Designs of any size, generated from the derive lines of the demo."""

import re
from pathlib import Path
from typing import Final

from calcdoc.source import SourceFile
from calcdoc.text.document import read_document
from calcdoc.text.statements import Definition

ROOT: Final = Path(__file__).parents[2]
DEMO: Final = ROOT / "designs" / "quay-stair-light-230.md"
CLOSED: Final = ROOT / "tests" / "helpers" / "designs" / "closed-form.md"
"""The same with every line a formula: nothing is solved for."""
TITLE: Final = '```document\nnumber = "B-1"\ntitle = "Benchmark"\nrevision = "A"\n```\n'


def demo_blocks() -> dict[str, list[str]]:
    """The statements of the demo by block word, as written."""
    found: dict[str, list[str]] = {}
    text = CLOSED.read_text(encoding="utf-8")
    for word, inner in re.findall(r"^```([a-z]+)\n(.*?)^```", text, re.DOTALL | re.MULTILINE):
        found.setdefault(word, []).extend(inner.splitlines())
    return found


def demo_symbols() -> list[str]:
    """The symbols the demo derives."""
    document, _ = read_document(SourceFile("closed-form.md", CLOSED.read_text(encoding="utf-8")))
    assert document is not None
    return [each.symbol.name for each in document.statements if isinstance(each, Definition)]


DROP: Final = "V_pk_{0} - R_in*I_reg_{0}"
"""A chain in which most slopes keep their sign."""
MEAN: Final = "0.7*V_pk_{0} + 0.3*V_mean_{0}"
"""A chain in which the extremes of ever more lines must be searched."""


def repeated(copies: int, chain: str = "") -> str:
    """The demo's derive lines again and again under new names.

    Args:
        copies: How many times the derive lines stand there.
        chain: The reservoir voltage of a copy from quantities of the one before, so that the last
            line depends on all others; empty where every copy begins with the inputs.
    """
    blocks, symbols = demo_blocks(), demo_symbols()
    mine = re.compile(rf"(?<!\w)({'|'.join(map(re.escape, symbols))})(?!\w)")
    lines = []
    for copy in range(copies):
        for line in blocks["derive"]:
            statement, bar, rest = line.partition("|")
            renamed = mine.sub(rf"\g<1>_{copy}", statement)
            if chain and copy and renamed.startswith("V_pk_"):
                renamed = f"V_pk_{copy} [V] = {chain.format(copy - 1)} "
            lines.append(renamed + bar + rest)
    return TITLE + "".join(
        f"\n```{word}\n" + "\n".join(each) + "\n```\n"
        for word, each in (
            ("conditions", blocks["conditions"]),
            ("inputs", blocks["inputs"]),
            ("assumptions", blocks["assumptions"]),
            ("derive", lines),
            ("references", blocks["references"]),
        )
    )


def toleranced(count: int) -> str:
    """Half inputs with bands, half lines that use several of them, some where no corner rules."""
    n = count // 2
    inputs = [f"x_{at} = {1 + at % 7}.{at % 10} V ± {1 + at % 9} %" for at in range(n)]
    forms = (
        "x_{0}*x_{1}/(x_{0} + x_{1})", "x_{0}*(5 V - x_{1})/x_{2}", "sqrt(x_{0}^2 + x_{1}^2)",
        "x_{0}*sin(x_{1}/x_{2})", "max(x_{0}, x_{1}) - min(x_{1}, x_{2})",
    )  # fmt: skip
    lines = [
        f"y_{at} = {forms[at % len(forms)].format(at, (at + 1) % n, (at * 3 + 2) % n)}"
        for at in range(count - n)
    ]
    blocks = {"inputs": inputs, "derive": lines}
    return TITLE + "".join(
        f"\n```{word}\n" + "\n".join(each) + "\n```\n" for word, each in blocks.items()
    )
