"""Options and profiles all tests share."""

import pytest
from hypothesis import settings

settings.register_profile("small", max_examples=80, deadline=None, derandomize=True)
settings.register_profile("large", max_examples=3000, deadline=None)
settings.load_profile("small")


def pytest_addoption(parser: pytest.Parser) -> None:
    """Add ``--rewrite-cases`` and ``--rewrite-records``: write what is found, for review."""
    parser.addoption(
        "--rewrite-cases",
        action="store_true",
        help="replace the expected blocks of tests/cases by what is found now (without -n)",
    )
    parser.addoption(
        "--rewrite-records",
        action="store_true",
        help="replace the golden records of tests/records by what is found now",
    )
