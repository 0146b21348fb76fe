"""What the stages hand on."""

from importlib.metadata import version

from calcdoc.pipeline import evaluate, read, record


def test_record_names_the_installed_libraries() -> None:
    """A record names the version of each library its numbers depend on, as pip knows it."""
    named = record(evaluate(read("designs/quay-stair-light-230.md"))).tool.libraries
    assert named == {name: version(name) for name in ("markdown-it-py", "msgspec", "numpy", "pint")}
