"""From the tape to the payment: measured, checked by another, billed, one line held, decided, closed."""

from __future__ import annotations

import pytest
from playwright.sync_api import expect

from tests.journeys.browser.pages import overhang_px, violations

pytestmark = [pytest.mark.browser, pytest.mark.journey]

CODE = "TA-02"  # rising: strips stand open, and nothing was measured up
PHONE = {"viewport": {"width": 360, "height": 780}}
DAY = "2026-04-10"
RATES = {"clay": "763.00", "marker": "650.00", "observation pipe": "3900.00"}


def looked_over(page):
    """Nothing hangs over the edge and axe finds nothing."""
    assert overhang_px(page) == 0, page.url
    assert violations(page) == [], page.url


def told(page, words):
    expect(page.locator("ul.told")).to_contain_text(words)


def agree(page):
    """Enter a contract that states rates and safety, and nothing else."""
    page.goto(f"/sites/{CODE}/contract/new/")
    looked_over(page)
    page.get_by_label("Number", exact=True).fill("C-TA-02")
    page.get_by_label("Contractor, as a code").fill("CON-2")
    page.get_by_label("Signed on").fill("2026-01-05")
    page.get_by_label("Work begins").fill("2026-01-10")
    page.get_by_label("Safety terms").fill("Slopes as drawn; nobody goes in without the look.")
    for item, rate in RATES.items():
        page.get_by_label(f"Rate of {item}").fill(rate)
    page.get_by_role("button", name="Enter it as signed").click()
    told(page, "Contract C-TA-02, version 1, is entered.")
    expect(page.locator("main")).to_contain_text("not stated")
    looked_over(page)


def measure(page, item, quantity, strip=""):
    page.goto(f"/sites/{CODE}/measurements/new/")
    if strip:
        choice = page.locator("select[name=strip] option", has_text=f"{strip}:")
        page.locator("select[name=strip]").select_option(choice.first.get_attribute("value"))
    page.locator("select[name=item]").select_option(item)
    page.get_by_label("Quantity").fill(quantity)
    page.get_by_label("How it came about").fill("By tape, from peg to peg.")
    looked_over(page)
    page.get_by_role("button", name="Enter it").click()
    told(page, "waits to be checked by another person")


def test_a_piece_of_work_is_measured_checked_billed_held_decided_and_closed(desk):
    """Oracle: 2 x 3900.00 + 7 x 650.00 = 12,350.00 payable; 1.50 x 763.00 = 1,144.50 held."""
    maker, checker = desk("engineer-2", **PHONE), desk("engineer-3", **PHONE)
    officer, field = desk("district-1", **PHONE), desk("field-5", **PHONE)
    agree(officer)

    for item, quantity, strip in (
        ("observation_pipe", "2.00", ""),
        ("marker", "7,00", ""),  # a decimal comma
        ("clay", "1.50", "5"),
    ):
        measure(maker, item, quantity, strip)
    maker.goto(f"/sites/{CODE}/measurements/")
    expect(maker.locator("main")).to_contain_text("3 entries wait to be checked")
    looked_over(maker)
    # Whoever measured does not check.
    maker.locator("main tbody th a").first.click()
    expect(maker.locator("main")).to_contain_text("another engineer must check it")

    for _ in range(3):
        checker.goto(f"/sites/{CODE}/measurements/")
        checker.get_by_role("link", name="Check the next entry").click()
        looked_over(checker)
        checker.get_by_role("button", name="Accept it").click()
        told(checker, "is accepted")

    maker.goto(f"/sites/{CODE}/bills/new/")
    maker.get_by_label("Number of the bill").fill("TA-02-FB")
    maker.get_by_label("Kind").select_option("final")
    looked_over(maker)
    maker.get_by_role("button", name="Write the draft").click()
    maker.get_by_role("button", name="Hand it in").click()
    told(maker, "Bill TA-02-FB is handed in.")

    officer.goto(f"/sites/{CODE}/bills/")
    looked_over(officer)
    officer.get_by_role("link", name="TA-02-FB").click()
    held = officer.locator("section[aria-labelledby=h-held]")
    expect(held).to_contain_text("1,144.50")
    expect(held).to_contain_text("not seen")
    expect(officer.locator("main dl.lines")).to_contain_text("12,350.00 INR")
    looked_over(officer)
    officer.get_by_role("button", name="Decide this bill").click()
    told(officer, "Bill TA-02-FB is decided.")
    expect(held).to_contain_text("Held and not decided: 1 line, 1144.50.")
    looked_over(officer)

    officer.get_by_label("Number of the payment order").fill("T-118")
    officer.get_by_label("Paid on").fill(DAY)
    officer.get_by_role("button", name="Note that it was paid").click()
    told(officer, "is noted as paid out")
    officer.get_by_label("Reason", exact=True).fill("Both engineers stood at the edge that day.")
    officer.get_by_role("button", name="Release it").click()
    told(officer, "is decided")

    # Nothing was billed twice: what is left is the released line alone.
    maker.goto(f"/sites/{CODE}/bills/new/")
    maker.get_by_label("Number of the bill").fill("TA-02-R1")
    maker.get_by_role("button", name="Write the draft").click()
    maker.get_by_role("button", name="Hand it in").click()
    expect(maker.locator("main dl.lines")).to_contain_text("1,144.50 INR")

    # Field staff see the book and no money.
    assert field.request.get(f"/sites/{CODE}/bills/").status == 404
    field.goto(f"/sites/{CODE}/measurements/")
    expect(field.locator("main")).to_contain_text("marker")
    assert "INR" not in field.content()
