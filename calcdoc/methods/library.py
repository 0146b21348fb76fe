"""The library: sheets that come with the tool, one text each in ``sheets``."""

from functools import cache
from pathlib import Path
from typing import Final

from calcdoc.methods.sheet import Sheet, read_sheet
from calcdoc.text.decode import decoded

_SHEETS: Final = Path(__file__).parent / "sheets"
_SHOWN: Final = "calcdoc/methods/sheets"
"""How places in these sheets are named, wherever the tool is installed."""


@cache
def method_names() -> tuple[str, ...]:
    """The methods of the library, in alphabetical order."""
    return tuple(sorted(each.stem for each in _SHEETS.glob("*.md")))


@cache
def method(name: str) -> Sheet:
    """A method of the library by its name, which must be one of :func:`method_names`."""
    source, trouble = decoded(f"{_SHOWN}/{name}.md", (_SHEETS / f"{name}.md").read_bytes())
    sheet, findings = read_sheet(source)
    assert sheet is not None, (trouble, findings)
    return sheet
