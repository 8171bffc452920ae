"""The engineer's way: from a survey to a frozen estimate, by mouse and by keys alone."""

from __future__ import annotations

import json
import re
import time
from decimal import Decimal

import pytest
from playwright.sync_api import expect

from tests.config.site_copy import command
from tests.journeys.browser.office.rooms import (
    CLOSES,
    COSTS,
    PASSWORD,
    as_file,
    keep,
    look_at,
    price,
    sign_in,
    survey_of,
)
from tests.journeys.browser.pages import focus, go_to, heading

pytestmark = [pytest.mark.browser, pytest.mark.journey]

MOST_S = 180.0  # from sign-in to a frozen estimate, what the office promises


def printed(site, document):
    """What the command prints of the same survey at the same rates."""
    survey = site.folder / "survey.json"
    survey.write_text(json.dumps(document), encoding="utf-8")
    rates = "fixtures/rates/RS-2025-26.csv"
    done = command(site.folder, "appraise", str(survey), "--rates", rates, "--json")
    assert done.returncode == 0, done.stderr
    return json.loads(done.stdout)


def shown_total(page):
    row = page.get_by_role("row").filter(has=page.get_by_text("Total", exact=True))
    return Decimal(row.get_by_role("cell").last.inner_text().replace(",", ""))


def shown_amounts(page):
    cells = page.locator("table.priced tbody tr:not([class]) td.amount").all_inner_texts()
    return [Decimal(words.replace(",", "")) for words in cells]


def test_from_sign_in_to_a_frozen_estimate_in_under_three_minutes(site, window):
    """Oracle: the command, which knows neither page nor database."""
    code, survey = "OD-04", survey_of("OD-04", "Upper Odre")
    page = window()
    began = time.monotonic()
    sign_in(page, "engineer-1")
    page.get_by_role("link", name="Upper Odre").first.click()
    page.get_by_role("link", name="Hand in a survey").first.click()
    page.get_by_label("Survey pack").set_input_files(as_file(survey))
    page.get_by_role("button", name="Read this file").click()
    heading(page, "Is this the survey you mean?").wait_for()
    assert page.get_by_text("Nothing is kept yet.").is_visible()
    keep(page)
    expect(page.get_by_text("The rock line is estimated, nobody has settled it.")).to_be_visible()
    price(page, code)
    assert time.monotonic() - began < MOST_S

    told = printed(site, survey)["estimate"]
    assert shown_total(page) == Decimal(told["total"])
    assert shown_amounts(page) == [Decimal(line["amount"]) for line in told["lines"]]

    # Settle the line, a point of it moved: the frozen estimate is stale and stays what it was.
    frozen = page.url
    page.goto(f"/sites/{code}/rock/")
    page.get_by_label("Why the rock is so").fill("Pit at 30 m met the sheet lower than the probe.")
    page.get_by_label("probe@30", exact=True).check()
    page.get_by_label("Level of point 6", exact=True).fill("418.20")
    points = [
        {"offset_m": float(offset), "level_m": float(level)}
        for offset, level in (
            [box.input_value() for box in row.get_by_role("textbox").all()]
            for row in page.locator("table.points tbody tr").all()
        )
        if offset
    ]
    page.get_by_role("button", name="Settle these points").click()
    heading(page, CLOSES).wait_for()
    page.goto(frozen)
    heading(page, "Stale: something newer is there").wait_for()
    assert shown_total(page) == Decimal(told["total"])

    page.get_by_role("button", name="Price it again").click()
    page.get_by_role("link", name="Estimates of this site").click()
    page.get_by_role("link", name=re.compile("^2, ")).click()
    heading(page, COSTS).wait_for()
    settled = printed(site, {**survey, "rock_line": points})["estimate"]
    assert shown_total(page) == Decimal(settled["total"]) != Decimal(told["total"])

    page.get_by_role("link", name=re.compile("^estimate 1, ")).click()
    heading(page, "What changed between the two?").wait_for()
    total = page.locator("tr.total td")
    sides = [Decimal(total.nth(place).inner_text().replace(",", "")) for place in range(3)]
    assert sides == [
        Decimal(told["total"]),
        Decimal(settled["total"]),
        Decimal(settled["total"]) - Decimal(told["total"]),
    ]


def test_keys_alone_lead_from_sign_in_to_a_frozen_estimate(window):
    # Without smooth scrolling what has the focus is in the window at once.
    page = window(reduced_motion="reduce")
    page.on("filechooser", lambda asked: asked.set_files(as_file(survey_of("TA-03", "walked"))))
    page.goto("/sign-in/")
    for name, words in (("input#id_username", "engineer-4"), ("input#id_password", PASSWORD)):
        go_to(page, lambda at, name=name: at["name"] == name)
        page.keyboard.type(words)
    with page.expect_navigation():
        page.keyboard.press("Enter")

    press(page, "TA-03")
    press(page, "Hand in a survey")
    go_to(page, lambda at: at["name"] == "input#id_pack")
    page.keyboard.press("Enter")
    expect(page.locator("input#id_pack")).to_have_value(re.compile(r"survey\.json"))
    press(page, "Read this file")
    heading(page, "Is this the survey you mean?").wait_for()
    press(page, "Keep this survey")
    heading(page, CLOSES).wait_for()

    press(page, "Settle the rock line")
    go_to(page, lambda at: at["name"] == "textarea#id_reason")
    page.keyboard.type("Probes and soundings agree.")
    go_to(page, lambda at: at["name"] == "input#id_rests_on_0")
    page.keyboard.press("Space")
    press(page, "Settle as estimated")
    expect(page.get_by_text("Rock line 1 is settled")).to_be_visible()
    press(page, "Price the newest survey")
    page.get_by_role("link", name="Estimates of this site").wait_for()
    press(page, "Estimates of this site")
    heading(page, "What has this wall been priced at?").wait_for()
    press(page, "1, ")
    heading(page, COSTS).wait_for()


def press(page, words):
    """Go by the Tab key to what begins with these words, and press Enter."""
    go_to(page, lambda at: at["text"].startswith(words))
    assert focus(page)["seen"]
    with page.expect_navigation():
        page.keyboard.press("Enter")


def test_another_wall_is_drawn_while_its_settings_are_typed(desk):
    page = desk("engineer-1")
    page.goto("/sites/OD-01/try/")
    kept = page.evaluate("() => { window.sameDocument = true; return location.href; }")
    tried = page.locator("#tried")
    thickness = page.get_by_label("Wall thickness, m")
    thickness.fill("1.2")
    row = tried.locator("tr", has=page.locator("th", has_text=re.compile(r"^\s*clay, ")))
    expect(tried.locator("figure svg")).to_have_count(2)
    expect(row.locator("td.new")).to_have_text(re.compile(r"\d"))
    old, new, change = (
        Decimal(row.locator("td").nth(place).inner_text().replace(",", "").replace("\u2212", "-"))
        for place in range(3)
    )
    # Both figures are rounded to a hundredth, and so is their difference.
    assert new > old
    assert abs(new - old - change) <= Decimal("0.01")
    assert "thickness_m=1.2" in page.url != kept
    assert page.evaluate("() => window.sameDocument")

    thickness.fill("-1")
    expect(tried.get_by_role("heading", name="Put this right", exact=False)).to_be_visible()


def test_a_survey_that_is_not_kept_leaves_the_site_as_it_was(desk):
    page = desk("engineer-1")
    page.goto("/sites/OD-02/")
    before = page.get_by_role("link", name=re.compile(r"^Survey \d+$")).count()
    look_at(page, "OD-02", survey_of("OD-02", "Hesgodi ford"))
    heading(page, "Is this the survey you mean?").wait_for()
    page.goto("/sites/OD-02/")
    assert page.get_by_role("link", name=re.compile(r"^Survey \d+$")).count() == before
