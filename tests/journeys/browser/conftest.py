"""A real site and a real browser; no window asks another host or complains unnoticed."""

from __future__ import annotations

from pathlib import Path
from urllib.parse import urlsplit

import pytest
from playwright.sync_api import expect, sync_playwright

from tests.config.site_copy import wait_until, whole_copy
from tests.config.test_site import started

CHROMIUM = "/usr/bin/chromium"
FLAGS = [
    *("--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run"),
    *("--disable-background-networking", "--disable-component-update", "--disable-sync"),
]
WIDE = {"width": 1280, "height": 800}
PATIENCE_S = 300.0  # the first start compresses every script and style sheet
PAGE_PATIENCE_MS = 60_000  # an appraisal takes a few seconds, more on a machine with other work


@pytest.fixture(scope="session")
def site(tmp_path_factory):
    folder = whole_copy(tmp_path_factory.mktemp("site"))
    with started(folder) as site:
        wait_until(site.is_ready, PATIENCE_S)
        yield site


@pytest.fixture(scope="module")
def chromium(tmp_path_factory):
    expect.set_options(timeout=PAGE_PATIENCE_MS)
    # Of a module only: while it lives, Django's tests in the same process would see its event loop.
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(
            executable_path=CHROMIUM,
            args=FLAGS,
            downloads_path=tmp_path_factory.mktemp("downloads"),
        )
        yield browser
        browser.close()


@pytest.fixture
def window(chromium, site):
    """Open windows; at the end none of them has asked another host or complained."""
    opened = []

    def open_window(**options):
        opened.append(Window(chromium, site, **options))
        return opened[-1].page

    yield open_window
    for one in opened:
        one.context.close()
        assert one.strangers() == []
        assert one.complaints == []


class Window:
    """One window, with what it asked for and what its console said."""

    def __init__(self, browser, site, **options):
        self.host = f"127.0.0.1:{site.port}"
        self.asked, self.complaints = [], []
        self.context = browser.new_context(
            base_url=f"http://{self.host}", **{"viewport": WIDE, **options}
        )
        self.context.set_default_timeout(PAGE_PATIENCE_MS)
        self.page = self.context.new_page()
        self.page.on("request", lambda request: self.asked.append(request.url))
        self.page.on("console", self.hear)
        self.page.on("pageerror", lambda error: self.complaints.append(str(error)))

    def hear(self, message):
        # A refusal is an answer; the browser remarks on its status all the same.
        if message.type in ("error", "warning") and "status of 422" not in message.text:
            self.complaints.append(message.text)

    def strangers(self):
        addresses = map(urlsplit, self.asked)
        return [
            one.geturl() for one in addresses if one.scheme != "data" and one.netloc != self.host
        ]


@pytest.fixture(scope="session")
def worker(site):
    """Number of the site's worker, and the file of the database it writes to."""
    return site.child("worker"), Path(site.folder) / ".data" / "underbund.sqlite3"
