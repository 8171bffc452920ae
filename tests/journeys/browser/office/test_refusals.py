"""A bad file and a stale form: each gets its sentence, and nothing of it is kept."""

from __future__ import annotations

import socket

import pytest
from playwright.sync_api import expect

from tests.journeys.browser.office.rooms import as_file, counted, look_at, sign_in, survey_of
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


def test_a_file_over_the_limit_gets_its_sentence_at_the_field(desk):
    """Oracle: FI-02, 20 MB."""
    page = desk("engineer-1")
    before = counted(page, "/files/")
    page.goto("/sites/OD-03/surveys/new/")
    page.get_by_label("Survey pack").set_input_files(
        {"name": "large.json", "mimeType": "application/json", "buffer": b" " * 21_000_000}
    )
    page.get_by_role("button", name="Read this file").click()
    told = page.locator("section[aria-labelledby=h-summary]")
    expect(told).to_contain_text("The file has 21 MB, limit 20. Nothing was read. Split it.")
    expect(page.locator("#h-summary")).to_be_focused()
    assert counted(page, "/files/") == before


def test_a_list_that_breaks_off_is_refused_whole_with_its_line(desk):
    page = desk("engineer-1")
    before = counted(page, "/sites/")
    page.goto("/entry/")
    whole = "code,watershed,lat,lon,downstream_users\nOD-91,OD,15.70,67.45,none\nOD-92,OD,15.7"
    page.get_by_label("File", exact=True).set_input_files(as_file(whole, "sites.csv"))
    page.get_by_role("button", name="Read this file").click()
    told = page.locator("main")
    expect(told).to_contain_text("sites.csv line 3")
    expect(told).to_contain_text("This row has 3 cells, the heading 5.")
    assert page.get_by_role("button", name="Keep these rows").count() == 0
    assert counted(page, "/sites/") == before


def test_an_upload_that_breaks_off_keeps_nothing_and_stops_nobody(desk, site):
    page = desk("engineer-1")
    before = counted(page, "/files/")
    with socket.create_connection(("127.0.0.1", site.port), timeout=10) as line:
        head = (
            "POST /entry/ HTTP/1.1\r\nHost: 127.0.0.1\r\nContent-Length: 1000000\r\n"
            "Content-Type: multipart/form-data; boundary=x\r\n\r\n--x\r\n"
        )
        line.sendall(head.encode() + b"a" * 1000)
    assert counted(page, "/files/") == before


def test_a_form_sent_after_signing_out_elsewhere_is_told_to_be_lost(desk, window):
    page = window()
    sign_in(page, "district-2")
    page.goto("/sites/OD-03/edit/")
    elsewhere = page.context.new_page()
    elsewhere.goto("/sites/")
    elsewhere.get_by_role("button", name="sign out").click()
    change(page, "Where the bench mark is", "Nail in the gate")
    expect(page.locator("main")).to_contain_text("Your session had ended before this was sent.")
    reader = desk("engineer-1")
    reader.goto("/sites/OD-03/")
    expect(reader.locator("main")).not_to_contain_text("Nail in the gate")


def test_of_two_who_settle_a_line_the_second_is_told_of_the_first(desk):
    first, second = desk("engineer-1"), desk("engineer-4")
    for page in (first, second):
        page.goto("/sites/BI-02/rock/")
        page.get_by_label("Why the rock is so").fill("Outcrop on both banks.")
        page.get_by_role("checkbox").first.check()
    for page in (first, second):
        page.get_by_role("button", name="Settle as estimated").click()
    expect(first.get_by_text("Rock line 1 is settled")).to_be_visible()
    told = second.locator("section[aria-labelledby=h-summary]")
    expect(told).to_contain_text("Line 1 was settled by engineer-1 since you opened this.")


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
