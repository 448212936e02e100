"""The bar of a long import, on a terminal."""

import io
import time

import pytest

from motorfolio.catalog.commands import import_


class _Terminal(io.StringIO):
    def isatty(self) -> bool:
        return True


def test_a_file_that_is_read_for_long_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    terminal = _Terminal()
    monkeypatch.setattr("sys.stderr", terminal)
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.setattr(import_, "SHOW_PROGRESS_AFTER", 0.01)
    with import_._progress() as progress:
        assert progress is not None
        progress("long.csv", 0)
        time.sleep(0.5)
        progress("long.csv", 5000)
        time.sleep(0.5)
    assert "long.csv: reading" in terminal.getvalue()
    assert "long.csv: 5000 motors" in terminal.getvalue()


def test_a_short_import_shows_none(monkeypatch: pytest.MonkeyPatch) -> None:
    terminal = _Terminal()
    monkeypatch.setattr("sys.stderr", terminal)
    with import_._progress() as progress:
        assert progress is not None
        progress("short.csv", 0)
    assert "short.csv" not in terminal.getvalue()
