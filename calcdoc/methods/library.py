"""The library: sheets that come with the tool, one text each in ``sheets``."""

from functools import cache
from importlib import resources

from calcdoc.methods.sheet import Sheet, read_sheet
from calcdoc.text.decode import decoded

_FOLDER = "calcdoc/methods/sheets"


@cache
def method_names() -> tuple[str, ...]:
    """The methods of the library, in alphabetical order."""
    names = (each.name for each in (resources.files("calcdoc.methods") / "sheets").iterdir())
    return tuple(sorted(each.removesuffix(".md") for each in names if each.endswith(".md")))


@cache
def method(name: str) -> Sheet:
    """A method of the library by its name, which must be one of :func:`method_names`."""
    file = resources.files("calcdoc.methods") / "sheets" / f"{name}.md"
    source, trouble = decoded(f"{_FOLDER}/{name}.md", file.read_bytes())
    sheet, findings = read_sheet(source)
    assert sheet is not None, (trouble, findings)
    return sheet
