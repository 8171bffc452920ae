"""A visitor's way from a survey to its verdict: by mouse, by keys alone, and without scripts."""

from __future__ import annotations

import json
import re
from decimal import Decimal

import pytest
from playwright.sync_api import expect

from tests.config.site_copy import command
from tests.faults.pausing import go_on, pause, paused
from tests.journeys.browser.pages import (
    MOST_KEYS,
    QUESTION,
    WRONG,
    focus,
    go_to,
    hand_in,
    heading,
    step,
)

pytestmark = [pytest.mark.browser, pytest.mark.journey]

PACK, SCHEDULE = "OD-01.json", "RS-2025-26.csv"
WALL = (
    *("bed_level_m", "crest_level_m", "left_end_m", "right_end_m", "length_m"),
    *("face_area_m2", "greatest_height_m", "greatest_depth_to_key_m"),
)
A4_PT = (595.276, 841.890)  # 210 mm x 297 mm (ISO 216) at 72 points to 25.4 mm


@pytest.fixture
def appraised(window):
    page = window()
    hand_in(page, PACK)
    heading(page, QUESTION).wait_for()
    return page


@pytest.fixture(scope="module")
def printed(site):
    """What the command prints of the same files."""
    done = command(
        *(site.folder, "appraise", f"fixtures/packs/{PACK}"),
        *("--rates", f"fixtures/rates/{SCHEDULE}", "--json"),
    )
    assert done.returncode == 0, done.stderr
    return json.loads(done.stdout)


def test_the_page_shows_the_figures_that_the_command_prints(appraised, printed):
    """Oracle: the command, which knows neither page nor database."""
    total = f"{Decimal(printed['estimate']['total']):,}"
    row = appraised.get_by_role("row").filter(has=appraised.get_by_text("Total", exact=True))
    assert row.get_by_role("cell").last.inner_text() == total
    shown = appraised.locator("section[aria-labelledby=h-wall] dd").all_inner_texts()
    wall = printed["wall"]
    assert [words.split()[0] for words in shown] == [f"{wall[key]:.2f}" for key in WALL]


def test_the_drawing_is_seen_and_is_also_there_as_numbers(appraised, printed):
    drawing = appraised.locator("figure svg:visible").first
    assert drawing.bounding_box()["width"] > 600
    table = appraised.locator("details table")
    assert not table.is_visible()
    appraised.get_by_text("As numbers", exact=True).click()
    assert table.is_visible()
    assert table.locator("tbody tr").count() >= len(printed["rock"]["line"])


def test_a_narrow_window_gets_the_narrow_drawing(appraised):
    def widths():
        return [
            round(float(one.get_attribute("viewBox").split()[2]))
            for one in appraised.locator("[aria-labelledby=h-section] svg:visible").all()
        ]

    (wide,) = widths()
    appraised.set_viewport_size({"width": 360, "height": 740})
    (narrow,) = widths()
    assert narrow < wide


@pytest.mark.parametrize(("ending", "begins"), [("pdf", b"%PDF-"), ("xlsx", b"PK"), ("svg", b"<")])
def test_the_documents_are_fetched(appraised, ending, begins):
    link = appraised.get_by_role("link", name=re.compile(rf"\.{ending}$")).first
    name = link.inner_text()
    with appraised.expect_download() as fetched:
        link.click()
    assert fetched.value.suggested_filename == name
    assert fetched.value.path().read_bytes().startswith(begins)


def test_a_bad_file_is_told_whole_with_the_focus_on_it_and_a_good_one_follows(window):
    page = window()
    hand_in(page, WRONG)
    title = heading(page, "This file cannot be used yet")
    title.wait_for()
    expect(title).to_be_focused()
    told = page.locator("section[aria-labelledby=h-findings]").inner_text()
    for field in ("toes.left_m", "ground", "wall.thicknes_m"):
        assert field in told
    hand_in(page, PACK)
    heading(page, QUESTION).wait_for()


def test_keys_alone_lead_from_the_first_page_to_the_verdict(window):
    # Without smooth scrolling what has the focus is in the window at once.
    page = window(reduced_motion="reduce")
    files = iter([f"fixtures/packs/{PACK}", f"fixtures/rates/{SCHEDULE}"])
    page.on("filechooser", lambda asked: asked.set_files(next(files)))
    page.goto("/")
    page.keyboard.press("Tab")
    assert (focus(page)["text"], focus(page)["seen"]) == ("Go to the sheet", True)
    page.keyboard.press("Enter")
    step(page)
    assert focus(page)["inMain"]

    for name, file in (("input#id_pack", PACK), ("input#id_rates", SCHEDULE)):
        go_to(page, lambda at, name=name: at["name"] == name)
        page.keyboard.press("Enter")
        expect(page.locator(name)).to_have_value(re.compile(re.escape(file)))
    go_to(page, lambda at: at["text"] == "Appraise this survey")
    page.keyboard.press("Enter")

    heading(page, QUESTION).wait_for()
    go_to(page, lambda at: at["text"] == "As numbers")
    page.keyboard.press("Enter")
    step(page)
    assert page.locator("details table").is_visible()
    assert focus(page)["name"] == "div"  # the table can be moved sideways by keys


def test_without_scripts_a_link_looks_again(window, worker):
    page = window(java_script_enabled=False)
    pause(*worker)
    try:
        # Files that no other test hands in together: the same inputs would show the old result.
        hand_in(page, "example-c.json", "RS-2025-26.csv")
        assert heading(page, "Waiting for a worker").is_visible()
        page.get_by_role("link", name="Look again").click()
        assert heading(page, "Waiting for a worker").is_visible()
    finally:
        go_on(worker[0])
    for _ in range(MOST_KEYS):
        again = page.get_by_role("link", name="Look again")
        if not again.count():
            break
        again.click()
        page.wait_for_timeout(500)
    assert heading(page, QUESTION).is_visible()
    assert page.get_by_text("No: a flank is open.").is_visible()


def test_with_scripts_the_page_looks_by_itself_and_leaves_the_focus_where_it_is(window, worker):
    page = window()
    with paused(*worker):
        hand_in(page, "example-b.json", "examples.csv")
        heading(page, "Waiting for a worker").wait_for()
        page.get_by_role("button", name="Cancel").focus()
        for _ in range(2):
            with page.expect_response(page.url):
                pass
        page.wait_for_timeout(200)
        assert focus(page)["text"] == "Cancel"
    heading(page, QUESTION).wait_for()
    assert page.title().startswith("EX-B ")


def test_a_run_that_waits_is_called_off(window, worker):
    page = window()
    with paused(*worker):
        hand_in(page, "example-a.json", "RS-2025-26.csv")
        page.get_by_role("button", name="Cancel").click()
        heading(page, "Cancelled").wait_for()
    assert page.get_by_text("Cancelled before it began.").is_visible()
    page.get_by_role("link", name="Hand in a survey").click()
    assert page.get_by_label("Survey pack").is_visible()


def test_the_page_prints_on_a4(appraised):
    """Oracle: ISO 216."""
    printed = appraised.pdf(prefer_css_page_size=True, print_background=True)
    boxes = re.findall(rb"/MediaBox \[0 0 ([\d.]+) ([\d.]+)\]", printed)
    assert boxes
    for box in boxes:
        assert tuple(map(float, box)) == pytest.approx(A4_PT, abs=1.0)  # whole pixels of the screen
