"""Every problem code: its title, why it matters, and an example that has it.

They stand in ``codes.toml`` beside this file; what a user reads about a code comes from there, and
a test runs each example.
"""

import tomllib
from collections.abc import Mapping
from functools import cache
from importlib import resources
from typing import Final

from calcdoc.frozen import Frozen

DOCUMENT: Final = """\
```document
number = "X-1"
title = "Example"
revision = "A"
```

"""
"""What stands before an example, unless it is whole."""


class Code(Frozen, frozen=True):
    """What a code means."""

    title: str
    why: str
    example: str
    whole: bool = False
    """The example is a whole text; others stand behind a `document` block."""
    described: bool = False
    """The example is said in words, because it cannot be printed."""

    @property
    def text(self) -> str:
        """The example as a text that can be checked."""
        return self.example if self.whole else DOCUMENT + self.example


@cache
def codes() -> Mapping[str, Code]:
    """Every code by its name, in alphabetical order."""
    file = resources.files("calcdoc.problems") / "codes.toml"
    table = tomllib.loads(file.read_text(encoding="utf-8"))
    return {name: Code(**table[name]) for name in sorted(table)}
