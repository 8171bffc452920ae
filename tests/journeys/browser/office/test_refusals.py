"""A bad file and a stale form: each gets its sentence, and nothing of it is kept."""

from __future__ import annotations

import pytest
from playwright.sync_api import expect

from tests.journeys.browser.office.rooms import as_file, counted, look_at, survey_of
from tests.journeys.browser.pages import WRONG, heading

pytestmark = [pytest.mark.browser, pytest.mark.journey]

BAD_RATES = """item,unit,rate,currency,schedule_id,valid_from,valid_to
excavation,m3,dear,INR,RS-BAD,2025-10-01,2026-09-30
lunch,m3,12.00,INR,RS-BAD,2025-10-01,2026-09-30
"""


def test_a_wrong_survey_shows_every_finding_and_keeps_nothing(desk):
    page = desk("engineer-1")
    before = counted(page, "/files/")
    look_at(page, "OD-03", WRONG)
    told = page.locator("section[aria-labelledby=h-findings]")
    for field in ("toes.left_m", "ground", "wall.thicknes_m"):
        expect(told).to_contain_text(field)
    expect(page.locator("#h-findings")).to_be_focused()
    assert page.get_by_role("button", name="Keep this survey").count() == 0

    look_at(page, "OD-03", survey_of("OD-01", "another place"))
    expect(page.locator("main")).to_contain_text("This survey is of OD-01, the site is OD-03.")
    look_at(page, "OD-03", "not a survey at all {")
    expect(page.locator("main")).to_contain_text("Nothing was kept")
    assert counted(page, "/files/") == before


def test_wrong_rates_show_every_finding_and_keep_nothing(desk):
    page = desk("district-1")
    before = counted(page, "/rates/")
    page.goto("/rates/new/")
    page.get_by_label("Rate schedule").set_input_files(as_file(BAD_RATES, "bad.csv"))
    page.get_by_role("button", name="Look at the differences").click()
    heading(page, "This file cannot be used yet").wait_for()
    told = page.locator("section[aria-labelledby=h-findings]")
    for words in ("dear", "lunch"):
        expect(told).to_contain_text(words)
    assert page.get_by_role("button", name="Keep this schedule").count() == 0
    assert counted(page, "/rates/") == before


def test_of_two_who_change_a_site_the_second_is_told_and_keeps_nothing(desk):
    first, second = desk("engineer-1"), desk("district-1")
    for page in (first, second):
        page.goto("/sites/OD-02/edit/")
    change(first, "Where the bench mark is", "Cut in the step of the school")
    expect(first.locator("main")).to_contain_text("Cut in the step of the school")
    change(second, "Where the bench mark is", "Nail in the mango tree")
    told = second.locator("section[aria-labelledby=h-summary]")
    expect(told).to_contain_text("OD-02 was changed by engineer-1")
    expect(told).to_contain_text("Open it again")
    expect(second.locator("#h-summary")).to_be_focused()
    second.goto("/sites/OD-02/")
    expect(second.locator("main")).to_contain_text("Cut in the step of the school")
    expect(second.locator("main")).not_to_contain_text("mango")


def change(page, label, words):
    page.get_by_label(label).fill(words)
    page.get_by_role("button", name="Keep the change").click()
