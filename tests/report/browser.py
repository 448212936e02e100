"""Headless Chromium for the tests of the page, or the reason why there is none."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import pytest

OPTIONS = (
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
    "--disable-background-networking", "--disable-component-update", "--disable-sync",
)  # fmt: skip

PATIENCE = 180_000
"""Milliseconds; beside other tests on few processors a browser may take its time."""


def settled(page: Any) -> None:
    """Wait until what was asked of the page is drawn: it draws in the next animation frame."""
    page.evaluate("new Promise(done => requestAnimationFrame(() => requestAnimationFrame(done)))")


def chromium() -> str:
    """The path of Chromium; skips the test where it or playwright is missing."""
    pytest.importorskip("playwright.sync_api", reason="playwright is not installed")
    for name in ("chromium", "chromium-browser", "google-chrome"):
        found = shutil.which(name)
        if found:
            return found
    pytest.skip("no Chromium on this machine (apt install chromium)")


@contextmanager
def opened(path: Path, **options: Any) -> Iterator[Any]:
    """The page in a browser of its own; fails on any console error or request but its own file."""
    executable = chromium()
    from playwright.sync_api import sync_playwright

    complaints: list[str] = []
    with sync_playwright() as player:
        browser = player.chromium.launch(
            executable_path=executable, args=list(OPTIONS), timeout=PATIENCE
        )
        page = browser.new_page(viewport={"width": 1400, "height": 900}, **options)
        page.set_default_timeout(PATIENCE)
        page.on("console", lambda m: complaints.append(f"{m.type}: {m.text}"))
        page.on("pageerror", lambda error: complaints.append(f"error: {error}"))
        page.on(
            "request",
            lambda r: (
                complaints.append(f"request: {r.url}")
                if r.url.split("#")[0] != path.as_uri() and not r.url.startswith("data:")
                else None
            ),
        )
        page.goto(path.as_uri())
        yield page
        browser.close()
    assert not complaints
