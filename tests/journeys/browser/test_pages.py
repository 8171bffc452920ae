"""Every page for everyone: WCAG 2.2 AA, wide and narrow, light and dark, nothing over the edge."""

from __future__ import annotations

import pytest

from tests.faults.pausing import paused
from tests.journeys.browser.conftest import WIDE, Window
from tests.journeys.browser.pages import (
    QUESTION,
    WRONG,
    hand_in,
    heading,
    overhang_px,
    violations,
)

pytestmark = pytest.mark.browser

NARROW = {"width": 360, "height": 740}


@pytest.fixture(scope="module", autouse=True)
def _appraised_and_asleep(site, chromium, worker):
    """Two surveys are appraised; then the worker sleeps, so that a page that waits keeps waiting."""
    window = Window(chromium, site)
    for reach in (appraisal, open_flank):
        heading(window.page, reach(window.page)).wait_for()
    window.context.close()
    with paused(*worker):
        yield


def first(page):
    page.goto("/")
    return "Will a wall close here, and what does it cost?"


def refusal(page):
    hand_in(page, WRONG)
    return "This file cannot be used yet"


def waiting(page):
    hand_in(page, "example-a.json", "examples.csv")
    return "Waiting for a worker"


def cancelled(page):
    hand_in(page, "example-b.json")
    page.get_by_role("button", name="Cancel").click()
    return "Cancelled"


def appraisal(page):
    hand_in(page, "OD-01.json")
    return QUESTION


def open_flank(page):
    hand_in(page, "example-c.json", "examples.csv")
    return QUESTION


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("size", [WIDE, NARROW], ids=["1280", "360"])
@pytest.mark.parametrize(
    "reach",
    [first, refusal, waiting, cancelled, appraisal, open_flank],
    ids=lambda one: one.__name__,
)
def test_a_page_is_for_everyone_and_fits_its_window(window, reach, size, scheme):
    """Oracle: axe-core's rules for WCAG 2.0 to 2.2, A and AA."""
    page = window(viewport=size, color_scheme=scheme)
    heading(page, reach(page)).wait_for()
    assert violations(page) == []
    assert overhang_px(page) == 0
    for fold in page.get_by_text("As numbers", exact=True).all():
        fold.click()
    assert overhang_px(page) == 0
