"""How the people of the demo reach what they work on."""

from __future__ import annotations

import json
import sqlite3
from contextlib import closing
from pathlib import Path

from playwright.sync_api import expect

from tests.config.site_copy import wait_until
from tests.journeys.browser.pages import heading

PASSWORD = "Puddle-clay-7-spades"  # of an invented district in a folder of its own
CLOSES = "Will this wall close?"
COSTS = "What does this wall cost, and how far may it be off?"
QUEUE_PATIENCE_S = 300.0  # the first readings of a district of fourteen sites, one worker
PACK = json.loads(Path("fixtures/packs/OD-01.json").read_text(encoding="utf-8"))


def sign_in(page, login):
    page.goto("/sign-in/")
    page.get_by_label("Name", exact=True).fill(login)
    page.get_by_label("Password").fill(PASSWORD)
    page.get_by_role("button", name="Sign in").click()
    expect(page.get_by_role("button", name="sign out")).to_be_visible()


def survey_of(code, name, **other):
    """The survey of OD-01 as if taken elsewhere, with its rock line left to the tests."""
    open_line = {key: value for key, value in PACK.items() if key != "rock_line"}
    return {**open_line, "site": {"code": code, "name": name, "bed_slope": 0.0042}, **other}


def as_file(document, name="survey.json"):
    content = document if isinstance(document, str) else json.dumps(document)
    return {"name": name, "mimeType": "application/json", "buffer": content.encode()}


def look_at(page, code, document):
    """Choose a survey for a site and have it read; nothing is kept by that."""
    page.goto(f"/sites/{code}/surveys/new/")
    page.get_by_label("Survey pack").set_input_files(as_file(document))
    page.get_by_role("button", name="Read this file").click()


def keep(page):
    """Keep what was looked at, and wait until a worker has read it."""
    page.get_by_role("button", name="Keep this survey").click()
    heading(page, CLOSES).wait_for()


def price(page, code):
    """Price the newest survey of a site and open the frozen estimate."""
    page.goto(f"/sites/{code}/")
    page.get_by_role("button", name="Price the newest survey").click()
    page.get_by_role("link", name="Estimates of this site").click()
    page.locator("main tbody th a").first.click()
    heading(page, COSTS).wait_for()


def wait_for_the_worker(site):
    """Wait until no run is open, so that what a person waits for is the person's own."""
    database = Path(site.folder) / ".data" / "underbund.sqlite3"

    def idle():
        with closing(sqlite3.connect(f"file:{database}?mode=ro", uri=True)) as rows:
            going = "SELECT count(*) FROM structures_run WHERE state IN ('queued', 'running')"
            return rows.execute(going).fetchone() == (0,)

    wait_until(idle, QUEUE_PATIENCE_S)


def counted(page, path):
    """How many rows a list shows."""
    page.goto(path)
    return page.locator("main tbody tr").count()
