"""The line that tells progress on a screen goes before anything else is printed."""

import io
import os
import sys

import pytest

from modalview.cli import main, printing
from modalview.places import demo_models

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"


class _Screen(io.StringIO):
    def isatty(self):
        return True


def screen_of(monkeypatch):
    """Return one screen that both streams write on; called within a test, whose streams are others."""
    made = _Screen()
    monkeypatch.setattr(sys, "stderr", made)
    monkeypatch.setattr(sys, "stdout", made)
    monkeypatch.setattr(printing.shutil, "get_terminal_size", lambda: os.terminal_size((20, 24)))
    return made


def seen(text):
    """Return the lines a person sees: what follows a carriage return writes over the line."""
    lines = []
    for line in text.split("\n"):
        shown = ""
        for part in line.split("\r"):
            shown = part + shown[len(part) :]
        lines.append(shown.rstrip())
    return lines


@pytest.mark.parametrize("words", [["check"], ["modes"]])
def test_nothing_of_progress_is_left_on_the_screen(monkeypatch, words):
    screen = screen_of(monkeypatch)
    main([*words, str(PUMP)])
    with_progress = seen(screen.getvalue())
    assert "%  nominal" in screen.getvalue()
    screen.seek(0)
    screen.truncate()
    monkeypatch.setattr(screen, "isatty", lambda: False)
    main([*words, str(PUMP)])
    assert seen(screen.getvalue()) == with_progress


def test_a_failure_after_progress_stands_alone(monkeypatch):
    screen = screen_of(monkeypatch)
    printing.progress("a step", 0.5)
    printing.complain("it went wrong")
    assert seen(screen.getvalue()) == ["keepclear: it went wrong", ""]


def test_progress_never_fills_a_line_of_a_narrow_screen(monkeypatch):
    screen = screen_of(monkeypatch)
    printing.progress("a step with many words in its name", 0.5)
    printing.progress("short", 0.6)
    printing.clear_progress()
    assert max(map(len, screen.getvalue().split("\r"))) == 19
    assert seen(screen.getvalue()) == [""]


def test_nothing_is_told_where_nobody_looks(capsys):
    printing.progress("a step", 0.5)
    printing.clear_progress()
    assert capsys.readouterr() == ("", "")
