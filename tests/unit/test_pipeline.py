"""What the stages hand on."""

from importlib.metadata import version

import pytest

from calcdoc.pipeline import evaluate, read, record

ALWAYS = ("markdown-it-py", "msgspec", "numpy", "pint")


@pytest.mark.parametrize(
    ("design", "names"),
    [("quay-stair-light-120.md", ALWAYS), ("quay-stair-light-230.md", (*ALWAYS, "scipy"))],
)
def test_record_names_the_installed_libraries(design: str, names: tuple[str, ...]) -> None:
    """A record names the version of each library its numbers depend on: SciPy where it samples."""
    named = record(evaluate(read(f"designs/{design}"))).tool.libraries
    assert named == {name: version(name) for name in names}
