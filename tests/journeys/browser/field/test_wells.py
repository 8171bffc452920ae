"""A well read without signal: read twice where it surprises, kept, and sent once there is some."""

from __future__ import annotations

import re

import pytest
from playwright.sync_api import expect

from tests.journeys.browser.pages import overhang_px, violations

pytestmark = [pytest.mark.browser, pytest.mark.journey]
WELL = "/today/wells/OD-W01/"


def test_a_well_is_read_without_signal_and_goes_out_with_it(phone):
    """Oracle: 812 cm is 8.12 m; the well of the tests stands at 8.00 to 8.04 m."""
    page = phone("field")
    page.goto("/today/wells/")
    expect(page.locator("[data-ready]")).to_have_text(re.compile("work without signal"))
    page.wait_for_function("navigator.serviceWorker.controller !== null")
    page.context.set_offline(True)
    page.goto(WELL)
    assert violations(page) == []
    assert overhang_px(page) <= 0
    page.get_by_label("Unit").select_option("cm")
    page.get_by_label("Depth below the mark").fill("50000")
    expect(page.locator("[data-depth]")).to_have_text("500.00 m below the mark")
    page.get_by_role("button", name="Keep this reading").click()
    expect(page.locator("[data-wrong]")).to_contain_text("far from what is expected")
    page.get_by_label("Depth below the mark").fill("812")
    page.get_by_role("button", name="Keep this reading").click()
    page.wait_for_url("**/today/wells/")
    page.goto("/today/parcel/")
    expect(page.locator("[data-waiting]")).to_have_text("Waiting to be sent: 1")
    page.context.set_offline(False)
    page.locator("[data-send]").click()
    expect(page.locator("[data-box]")).to_contain_text("the office has it")
    expect(page.locator("[data-waiting]")).to_have_text("Nothing waits on this phone.")
