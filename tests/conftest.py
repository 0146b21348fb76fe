"""Options and profiles all tests share."""

import pytest
from hypothesis import settings

settings.register_profile("small", max_examples=80, deadline=None, derandomize=True)
settings.register_profile("large", max_examples=3000, deadline=None)
settings.load_profile("small")


def pytest_addoption(parser: pytest.Parser) -> None:
    """Add ``--rewrite-cases``: write what is found into the case files, for review."""
    parser.addoption(
        "--rewrite-cases",
        action="store_true",
        help="replace the expected blocks of tests/cases by what is found now (without -n)",
    )
