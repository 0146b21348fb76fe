"""The bar over draws: nothing for two seconds, nothing where standard error is no terminal."""

import io
import sys

import pytest

from calcdoc.commands.bars import PATIENCE, draw_bar


class _Screen(io.StringIO):
    """Standard error that says it is a terminal."""

    def isatty(self) -> bool:
        return True


def _drawn(monkeypatch: pytest.MonkeyPatch, screen: io.StringIO, seconds: list[float]) -> list[int]:
    """Characters on the screen after each call, made at these seconds."""
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.setattr(sys, "stderr", screen)
    now = [0.0]
    lengths = []
    with draw_bar(lambda: now[0]) as told:
        for number, now[0] in enumerate(seconds, 1):
            if told is not None:
                told(number, len(seconds))
            lengths.append(len(screen.getvalue()))
    return lengths


def test_quick_draws_show_no_bar(monkeypatch: pytest.MonkeyPatch) -> None:
    """What is done within two seconds writes nothing."""
    assert _drawn(monkeypatch, _Screen(), [0.1, 1.0, PATIENCE - 0.01]) == [0, 0, 0]


def test_slow_draws_show_a_bar_that_is_gone_at_the_end(monkeypatch: pytest.MonkeyPatch) -> None:
    """After two seconds the bar is drawn, not more often than one can see, and wiped at the end."""
    screen = _Screen()
    first, second, third = _drawn(monkeypatch, screen, [PATIENCE, PATIENCE + 0.01, PATIENCE + 1.0])
    assert 0 < first == second < third
    assert "drawing parts" in screen.getvalue()
    assert screen.getvalue().rstrip().endswith("\x1b[2K")


def test_no_terminal_no_bar(monkeypatch: pytest.MonkeyPatch) -> None:
    """Where standard error goes to a file nothing is drawn."""
    assert _drawn(monkeypatch, io.StringIO(), [PATIENCE + 1.0]) == [0]
