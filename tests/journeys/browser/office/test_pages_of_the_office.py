"""Every page of the office for everyone: WCAG 2.2 AA, and nothing over the edge of a phone."""

from __future__ import annotations

import pytest

from tests.journeys.browser.conftest import WIDE
from tests.journeys.browser.office.rooms import CLOSES, look_at, price, survey_of
from tests.journeys.browser.pages import WRONG, heading, overhang_px, violations

pytestmark = pytest.mark.browser

NARROW = {"width": 360, "height": 740}
SITE = "/sites/OD-05/"
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
    "sounding": at(ENGINEER, f"{SITE}surveys/1/soundings/1/"),
    "estimate": priced,
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
