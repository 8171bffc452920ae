"""Who sees what, who may do what: the same office through the eyes of its people."""

from __future__ import annotations

import csv
import re
from pathlib import Path

import pytest
from playwright.sync_api import expect

from tests.journeys.browser.office.rooms import CLOSES, price
from tests.journeys.browser.pages import heading

pytestmark = [pytest.mark.browser, pytest.mark.journey]

DEMO = Path("fixtures/demo")
PRICED = "OD-01"
REFUSED = 422  # how every page answers a refusal (RFC 9110, 15.5.21)
LISTS = ("/sites/", "/watersheds/", "/rates/", "/files/", "/runs/", "/entry/", "/help/")


@pytest.fixture
def totals(desk):
    """What the newest estimate of one site comes to, as its page prints it."""
    page = desk("engineer-1")
    page.goto(f"/sites/{PRICED}/estimates/")
    if not page.locator("main tbody tr").count():
        price(page, PRICED)
        page.goto(f"/sites/{PRICED}/estimates/")
    cells = page.locator("main tbody tr").first.locator("td.n").all_inner_texts()
    return [re.sub(r"[^\d.,]", "", words) for words in cells]


@pytest.mark.parametrize("login", ["district-1", "programme-1", "auditor-1"])
def test_who_only_reads_sees_sheet_estimate_and_rates_and_no_way_to_change_them(
    desk, totals, login
):
    page = desk(login)
    page.goto(f"/sites/{PRICED}/")
    heading(page, CLOSES).wait_for()
    panel = page.locator("section[aria-labelledby=h-panel]")
    for total in totals:
        expect(panel).to_contain_text(total)
    assert page.get_by_role("button", name="Price the newest survey").count() == 0
    for way in ("Hand in a survey", "Settle the rock line"):
        assert page.get_by_role("link", name=way).count() == 0

    panel.get_by_role("link", name=re.compile("^Estimate ")).click()
    expect(page.locator("tr.total").first).to_contain_text(totals[0])
    page.get_by_role("link", name="RS-2025-26").first.click()
    expect(page.locator("main")).to_contain_text("2,850.00")

    page.goto(f"/sites/{PRICED}/surveys/new/")
    assert page.get_by_label("Survey pack").count() == 0
    for path in (f"/sites/{PRICED}/estimates/", f"/sites/{PRICED}/surveys/1/"):
        assert sent(page, path).status == REFUSED


def sent(page, path):
    """Send an empty form past the page, as somebody who knows the address could."""
    token = page.locator("input[name=csrfmiddlewaretoken]").first.input_value()
    form = {"csrfmiddlewaretoken": token}
    return page.request.post(path, form=form, headers={"Referer": page.url}, max_redirects=0)


def test_the_auditor_changes_nothing(desk):
    page = desk("auditor-1")
    for path in ("/entry/", "/rates/new/", f"/sites/{PRICED}/rock/"):
        page.goto(path)
        assert page.locator("main").get_by_role("button").count() == 0, path
    page.goto(f"/sites/{PRICED}/")
    assert page.get_by_role("link", name="Change what is written here").count() == 0


def test_field_staff_see_no_money_anywhere(desk, totals):
    page = desk("field-1")
    for path in (*LISTS, f"/sites/{PRICED}/", f"/sites/{PRICED}/surveys/1/"):
        answer = page.request.get(path)
        words = answer.text()
        assert answer.status in {200, 404}, path
        assert not re.search(r"\bINR\b", words), path
        for total in totals:
            assert total not in words, path
    page.goto(f"/sites/{PRICED}/")
    heading(page, CLOSES).wait_for()
    assert page.get_by_role("link", name="Rates", exact=True).count() == 0
    assert page.request.get(f"/sites/{PRICED}/estimates/").status == 404


def test_the_second_district_sees_nothing_of_the_first(desk, totals):
    """Oracle: the names in the demo's own tables."""
    page = desk("av-engineer")
    names = {"Quenharra"}
    for table, columns in {
        "sites.csv": ("site_id", "name", "stream", "village_upstream", "village_downstream"),
        "people.csv": ("login",),
    }.items():
        with (DEMO / table).open(encoding="utf-8", newline="") as rows:
            names |= {row[column] for row in csv.DictReader(rows) for column in columns}
    strange = re.compile("|".join(rf"\b{re.escape(name)}\b" for name in sorted(names - {""})))
    for path in (*LISTS, "/settings/", f"/sites/{PRICED}/"):
        assert strange.findall(page.request.get(path).text().replace(path, "")) == [], path
    for path in ("", "estimates/", "surveys/1/", "rock/", "try/", "edit/"):
        assert page.request.get(f"/sites/{PRICED}/{path}").status == 404
    page.goto("/sites/?q=Nolkurava")
    expect(page.locator("main")).to_contain_text("no site to show")
