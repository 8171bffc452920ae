"""A wall from its drawing to its money, by the people who answer for each step, on a phone at the end."""

from __future__ import annotations

import re

import pytest
from playwright.sync_api import expect

from tests.journeys.browser.office.rooms import price, wait_for_the_worker
from tests.journeys.browser.pages import heading, overhang_px, violations
from tests.papers import GIVEN
from tests.pictures import jpeg

pytestmark = [pytest.mark.browser, pytest.mark.journey]

CODE = "TA-04"  # priced long ago; nobody heard, sanctioned or approved it
PHONE = {"viewport": {"width": 360, "height": 780}}
SCAN = {"name": "signed.jpg", "mimeType": "image/jpeg", "buffer": jpeg()}
VILLAGES = ("Illupadre", "Illupadre hamlet")
HEARING = {
    **GIVEN["hearing"],
    "settlements": [
        {**GIVEN["hearing"]["settlements"][0], "settlement": name, "side": side}
        for name, side in zip(VILLAGES, ("upstream", "downstream"), strict=True)
    ],
}


def file_paper(page, kind, given, *, photo=None):
    """Fill a paper in as somebody at a desk would, and file it."""
    page.goto(f"/sites/{CODE}/papers/{kind}/")
    for name, value in given.items():
        if isinstance(value, list):
            for at, row in enumerate(value):
                fold = page.locator(f"details:has([name='{name}-{at}-{next(iter(row))}'])")
                if fold.get_attribute("open") is None:
                    fold.locator("summary").click()
                for key, one in row.items():
                    write(page, f"{name}-{at}-{key}", one)
        else:
            write(page, name, value)
    if photo is not None:
        page.locator("input[name=photo]").set_input_files(photo)
    page.get_by_role("button", name="File this paper").click()
    expect(page.locator("ul.told")).to_contain_text("Filed:")


def write(page, name, value):
    box = page.locator(f"main form [name='{name}']")
    if box.evaluate("box => box.localName") == "select":
        box.select_option(str(value))
    else:
        box.fill(str(value))


def move_on(page, to):
    page.goto(f"/sites/{CODE}/structure/")
    page.get_by_role("link", name=f"Move to {to}").click()
    page.get_by_role("button", name="Move", exact=True).click()
    expect(page.locator("main .where").first).to_contain_text(f"is {to} since")


def looked_over(page):
    """Nothing hangs over the edge and axe finds nothing."""
    assert overhang_px(page) == 0, page.url
    assert violations(page) == [], page.url


def test_a_wall_is_drawn_checked_priced_heard_sanctioned_and_approved(desk, site):
    maker, checker = desk("engineer-2"), desk("engineer-3")
    maker.goto(f"/sites/{CODE}/moves/flow-judged/")
    maker.get_by_label("Reason").fill("The line is to be settled with the pits of this week.")
    maker.get_by_role("button", name="Send back").click()
    expect(maker.locator("main .where").first).to_contain_text("is flow-judged since")

    maker.goto(f"/sites/{CODE}/rock/")
    maker.get_by_label("Why the rock is so").fill("As drawn, seen in both pits of this week.")
    maker.locator(".tests input").first.check()
    maker.get_by_role("button", name="Settle these points").click()
    expect(maker.locator("ul.told")).to_contain_text("is settled")
    wait_for_the_worker(site)

    file_paper(maker, "underflow", GIVEN["underflow"])
    maker.get_by_role("button", name="Draw the wall").click()
    expect(maker.locator("ul.told")).to_contain_text("is drawn")
    file_paper(maker, "drawing-sheet", GIVEN["drawing-sheet"])
    move_on(maker, "drawn")
    # Whoever drew it does not check it.
    maker.goto(f"/sites/{CODE}/structure/")
    assert maker.get_by_role("link", name="Move to checked").count() == 0

    file_paper(checker, "check", GIVEN["check"])
    looked_over(checker)
    move_on(checker, "checked")
    price(maker, CODE)
    total = maker.locator("dl.lines dd").nth(1).inner_text().split()[0]
    move_on(maker, "priced")

    officer = desk("district-1", **PHONE)
    file_paper(officer, "hearing", HEARING, photo=SCAN)
    looked_over(officer)
    move_on(officer, "heard")
    officer.goto("/decisions/")
    looked_over(officer)
    expect(officer.locator("main")).to_contain_text("for the programme manager")

    manager = desk("programme-1", **PHONE)
    manager.goto("/money-lines/")
    for label, value in (
        ("Code", "ML-26"),
        ("Funder, as a code", "F-7"),
        ("Amount", "2000000.00"),
        ("From", "2026-01-01"),
    ):
        manager.get_by_label(label, exact=True).fill(value)
    manager.get_by_role("button", name="Enter this line").click()
    expect(manager.locator("ul.told")).to_contain_text("Line ML-26 is entered.")
    looked_over(manager)

    manager.get_by_role("link", name="Decisions").first.click()
    looked_over(manager)
    manager.get_by_role("link", name=re.compile(f"{CODE}.*technical sanction")).click()
    heading(manager, "Is it sound at this cost?").wait_for()
    expect(manager.locator("main")).to_contain_text(f"You sanction exactly this: {total}")
    looked_over(manager)
    sanction = manager.locator("form[action$='/acts/sanction/']")
    sanction.get_by_label("Number").fill("TS-26-4")
    sanction.get_by_label("Valid to").fill("2026-04-01")
    sanction.get_by_role("button", name="Give technical sanction").click()
    expect(manager.locator("main")).to_contain_text("It would be over already, on 2026-04-01.")
    looked_over(manager)
    sanction.get_by_label("Valid to").fill("2027-03-31")
    sanction.get_by_role("button", name="Give technical sanction").click()
    expect(manager.locator("ul.told")).to_contain_text("Technical sanction TS-26-4 is given.")

    manager.get_by_role("link", name="To the decision").click()
    heading(manager, "Is it wanted, and who pays?").wait_for()
    approval = manager.locator("form[action$='/acts/approve/']")
    approval.get_by_label("Number").fill("AA-26-4")
    approval.get_by_label("Valid to").fill("2027-03-31")
    approval.get_by_label("Money line").select_option(label="ML-26, F-7")
    approval.get_by_label("Sheet signed by the funder").set_input_files(SCAN)
    looked_over(manager)
    approval.get_by_role("button", name="Give administrative approval").click()
    expect(manager.locator("ul.told")).to_contain_text("AA-26-4 is given.")
    looked_over(manager)


def test_an_outside_eye_finds_every_step_by_its_code(desk):
    page = desk("auditor-1", **PHONE)
    page.goto(f"/sites/{CODE}/thread/")
    looked_over(page)
    for words in ("rock line settled", "estimate frozen", "technical sanction", "moved"):
        expect(page.locator("main")).to_contain_text(words)
    page.get_by_role("link", name=re.compile("^administrative approval: ")).first.click()
    looked_over(page)
    code = page.locator("h1").inner_text().split()[3]
    page.goto("/register/")
    looked_over(page)
    page.get_by_label("Code on a document").fill(code.lower().replace("-", " "))
    page.get_by_role("button", name="Find").click()
    heading(page, f"What does entry {code} say?").wait_for()
    expect(page.locator("main")).to_contain_text("AA-26-4")
