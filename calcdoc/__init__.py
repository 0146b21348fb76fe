"""calcdoc: a design of a mains-fed LED light engine as plain text becomes a calculation record.

>>> import calcdoc
>>> design = calcdoc.read("designs/quay-stair-light-230.md")  # doctest: +SKIP
>>> record = calcdoc.record(calcdoc.evaluate(design))  # doctest: +SKIP
>>> record.verdict.bottom_line  # doctest: +SKIP
'8 pass, 1 by test'
"""

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from calcdoc.pipeline import Design, Evaluated, evaluate, read, record, write

__version__ = "0.1.0"
__all__ = ["Design", "Evaluated", "evaluate", "read", "record", "write"]


def __getattr__(name: str) -> object:
    """Load the pipeline when it is first used, so that importing calcdoc costs nothing."""
    if name not in __all__:
        raise AttributeError(f"module 'calcdoc' has no attribute {name!r}")
    from calcdoc import pipeline  # noqa: PLC0415

    return getattr(pipeline, name)
