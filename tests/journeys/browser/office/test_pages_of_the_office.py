"""Every page of the office for everyone: WCAG 2.2 AA, and nothing over the edge of a phone."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tests.journeys.browser.conftest import WIDE
from tests.journeys.browser.office.rooms import CLOSES, as_file, keep, look_at, price, survey_of
from tests.journeys.browser.pages import WRONG, heading, overhang_px, violations

pytestmark = pytest.mark.browser

NARROW = {"width": 360, "height": 740}
SITE = "/sites/OD-05/"
TWICE = "/sites/BI-01/"  # a site that no other test hands a survey in for
# The demo's rates a year on: they are not in force yet, so they change no price.
NEXT_YEAR = (
    Path("fixtures/rates/RS-2025-26.csv")
    .read_text(encoding="utf-8")
    .replace("2026-09-30", "2027-09-30")
    .replace("2025-10-01", "2026-10-01")
    .replace("RS-2025-26", "RS-2026-27")
    .replace("62.00", "64.00")
)
ENGINEER, ADMIN = "engineer-1", "admin-1"


def at(login, path, link=None):
    """A page by its address, or by the first link of the page at that address."""

    def reach(desk):
        page = desk(login)
        page.goto(path)
        if link:
            page.locator(link).first.click()
            page.wait_for_load_state()
        return page

    return reach


def nobody(path):
    def reach(desk):
        page = desk(None)
        page.goto(path)
        return page

    return reach


def preview(desk):
    page = desk(ENGINEER)
    look_at(page, "OD-05", survey_of("OD-05", "looked at only"))
    heading(page, "Is this the survey you mean?").wait_for()
    return page


def refused(desk):
    page = desk(ENGINEER)
    look_at(page, "OD-05", WRONG)
    page.locator("#h-findings").wait_for()
    return page


def priced(desk):
    """An estimate; asked for a second time it is the same one."""
    page = desk(ENGINEER)
    page.goto(f"{SITE}estimates/")
    if page.locator("main tbody th a").count():
        page.locator("main tbody th a").first.click()
    else:
        price(page, "OD-05")
    return page


def surveys_side_by_side(desk):
    """Two versions of one survey; handed in a second time it is there already."""
    page = desk(ENGINEER)
    page.goto(TWICE)
    if not page.get_by_role("link", name="Survey 2", exact=True).count():
        look_at(page, "BI-01", survey_of("BI-01", "Gomdallu crossing"))
        keep(page)
    page.goto(f"{TWICE}surveys/2/against/1/")
    return page


def estimates_side_by_side(desk):
    """Two walls of one site; the same inputs are priced once, so the second has a deeper key."""
    page = desk(ENGINEER)
    for key_m in (0.15, 0.2):
        page.goto(f"{TWICE}estimates/")
        if page.locator("main tbody th a").count() < 2:
            look_at(page, "BI-01", survey_of("BI-01", "Gomdallu crossing", wall={"key_m": key_m}))
            keep(page)
            price(page, "BI-01")
    page.goto(f"{TWICE}estimates/")
    page.locator("main tbody th a").first.click()
    page.get_by_role("link", name=re.compile("^estimate 1, ")).click()
    return page


def schedules_side_by_side(desk):
    """The demo's schedule and one of the year after it, film dearer."""
    page = desk(ENGINEER)
    page.goto("/rates/")
    if page.locator("main tbody tr").count() == 1:
        page.goto("/rates/new/")
        page.get_by_label("Rate schedule").set_input_files(as_file(NEXT_YEAR, "RS-2026-27.csv"))
        page.get_by_role("button", name="Look at the differences").click()
        page.get_by_role("button", name="Keep this schedule").click()
        page.goto("/rates/")
    page.locator("main tbody th a").first.click()
    page.get_by_role("link", name=re.compile("^RS-")).first.click()
    return page


IN_A_ROW = "main tbody th a"
PAGES = {
    "sign in": nobody("/sign-in/"),
    "welcome": nobody("/welcome/"),
    "first": at(ENGINEER, "/"),
    "sites": at(ENGINEER, "/sites/"),
    "nothing found": at(ENGINEER, "/sites/?q=nowhere"),
    "watersheds": at(ENGINEER, "/watersheds/"),
    "watershed": at(ENGINEER, "/watersheds/OD/"),
    "rates": at(ENGINEER, "/rates/"),
    "schedule": at(ENGINEER, "/rates/", IN_A_ROW),
    "new schedule": at(ENGINEER, "/rates/new/"),
    "files": at(ENGINEER, "/files/"),
    "file": at(ENGINEER, "/files/", "main tbody a"),
    "runs": at(ENGINEER, "/runs/"),
    "run": at(ENGINEER, "/runs/", "main tbody a"),
    "entry": at(ENGINEER, "/entry/"),
    "site": at(ENGINEER, SITE),
    "site without a survey": at(ENGINEER, "/sites/BI-04/"),
    "edit": at(ENGINEER, f"{SITE}edit/"),
    "rock": at(ENGINEER, f"{SITE}rock/"),
    "what if": at(ENGINEER, f"{SITE}try/"),
    "what if, tried": at(ENGINEER, f"{SITE}try/?thickness_m=1.5"),
    "what if, wrong": at(ENGINEER, f"{SITE}try/?thickness_m=-1"),
    "hand in": at(ENGINEER, f"{SITE}surveys/new/"),
    "preview": preview,
    "refused survey": refused,
    "survey": at(ENGINEER, f"{SITE}surveys/1/"),
    "surveys side by side": surveys_side_by_side,
    "sounding": at(ENGINEER, f"{SITE}surveys/1/soundings/1/"),
    "estimate": priced,
    "estimates side by side": estimates_side_by_side,
    "schedules side by side": schedules_side_by_side,
    "estimates": at(ENGINEER, f"{SITE}estimates/"),
    "people": at(ADMIN, "/people/"),
    "new person": at(ADMIN, "/people/new/"),
    "person": at(ADMIN, "/people/", "main tbody a"),
    "settings": at(ADMIN, "/settings/"),
    "setting": at(ADMIN, "/settings/", "main tbody a"),
    "district": at(ADMIN, "/districts/QU/"),
    "new district": at(ADMIN, "/districts/new/"),
    "help": at(ENGINEER, "/help/"),
    "password": at(ENGINEER, "/password/"),
    "sign out everywhere": at(ENGINEER, "/sign-out-everywhere/"),
}


@pytest.mark.parametrize("name", PAGES)
def test_a_page_is_for_everyone_and_fits_a_phone(desk, name):
    """Oracle: axe-core's rules for WCAG 2.0 to 2.2, A and AA."""
    page = PAGES[name](desk)
    page.get_by_role("heading", level=1).wait_for()
    assert page.get_by_role("heading", level=1).count() == 1
    assert violations(page) == []
    page.set_viewport_size(NARROW)
    assert overhang_px(page) == 0
    for fold in page.locator("main summary").all():
        fold.click()
    assert overhang_px(page) == 0


@pytest.mark.parametrize(
    ("size", "scheme"),
    [(WIDE, "dark"), (NARROW, "light"), (NARROW, "dark")],
    ids=["dark", "phone", "dark phone"],
)
def test_the_site_sheet_is_for_everyone_in_the_dark_and_on_a_phone(desk, size, scheme):
    """Oracle: axe-core's rules for WCAG 2.0 to 2.2, A and AA."""
    page = desk(ENGINEER, viewport=size, color_scheme=scheme)
    page.goto(SITE)
    heading(page, CLOSES).wait_for()
    assert violations(page) == []
    assert overhang_px(page) == 0
