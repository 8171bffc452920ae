"""Wells in a real browser: a round without signal, and every page for everyone."""

from __future__ import annotations

import pytest
from playwright.sync_api import expect

from tests.journeys.browser.pages import overhang_px, violations

pytestmark = [pytest.mark.browser, pytest.mark.journey]
NARROW = {"width": 360, "height": 740}
PAGES = (
    "/wells/",
    "/wells/BI-W05/",
    "/wells/new/",
    "/wells/BI-W05/mark/",
    "/hydrograph/?well=BI-W05&well=BI-W07",
    "/sites/BI-01/effect/",
    "/repairs/",
    "/readings/",
    "/complaints/C-2026-01/",
)


def test_a_round_is_read_without_signal_and_goes_out_with_it(desk):
    phone = desk("field-3", viewport=NARROW)
    phone.goto("/today/wells/")
    expect(phone.locator("[data-ready]")).to_be_visible(timeout=60_000)
    phone.context.set_offline(True)
    phone.goto("/today/wells/BI-W01/")
    phone.get_by_label("Unit").select_option("cm")
    phone.get_by_label("Depth below the mark").fill("1500")
    expect(phone.locator("[data-depth]")).to_have_text("15.00 m below the mark")
    phone.get_by_role("button", name="Keep this reading").click()
    expect(phone.locator("[data-wrong]")).to_contain_text("far from what is expected")
    phone.get_by_label("Depth below the mark").fill("812")
    phone.get_by_role("button", name="Keep this reading").click()
    phone.wait_for_url("**/today/wells/")
    phone.goto("/today/parcel/")
    expect(phone.locator("[data-waiting]")).to_have_text("Waiting to be sent: 1")
    phone.context.set_offline(False)
    phone.get_by_role("button", name="Send").first.click()
    expect(phone.locator("[data-box]")).to_contain_text("the office has it")


@pytest.mark.parametrize("path", PAGES)
def test_a_page_of_wells_is_for_everyone(desk, path):
    page = desk("engineer-1", viewport=NARROW)
    page.goto(path)
    assert violations(page) == []
    assert overhang_px(page) <= 0
