"""A day in the stream bed without signal: nothing is lost, everything comes once."""

from __future__ import annotations

import re
import sqlite3
from contextlib import closing
from pathlib import Path

import pytest
from playwright.sync_api import expect

from tests.config.site_copy import wait_until
from tests.journeys.browser.field.conftest import PHONE
from tests.journeys.browser.pages import heading, overhang_px, violations

pytestmark = [pytest.mark.browser, pytest.mark.journey]

LOOK = "/today/at/OD-01/strips/1/look/"
SHEET = "/today/at/OD-01/day-sheet/"
SEEN = {
    "looked_at": "07:30",
    "depth_m": "3,2",
    "slope_as_cut": "2",
    "sides": "dry",
    "water": "none",
    "spoil_back_m": "2.5",
    "ladder_within_m": "5",
    "weather": "clear",
}
TICKED = {"result": "no stop found", "crack": "no", "rain_since_last": "no"}


def rows(site, query):
    database = Path(site.folder) / ".data" / "underbund.sqlite3"
    with closing(sqlite3.connect(f"file:{database}?mode=ro", uri=True)) as base:
        return base.execute(query).fetchall()


def ready(page):
    """Open the round while there is signal, until all of today's forms are on the phone."""
    page.goto("/today/")
    expect(page.locator("[data-ready]")).to_have_text(re.compile("work without signal"))
    page.wait_for_function("navigator.serviceWorker.controller !== null")


def answer(page, values, ticked=None, *, photo=None):
    """Answer one question a screen, as far as there are values, and keep the record."""
    while True:
        step = page.locator("[data-step]:not([hidden])")
        for name, value in values.items():
            box = step.locator(f"[name={name}]")
            if box.count():
                box.fill(value)
        for name, value in (ticked or {}).items():
            box = step.locator(f"[name={name}][value='{value}']")
            if box.count():
                box.check()
        if step.locator("input[type=file]").count() and photo is not None:
            step.locator("input[type=file]").set_input_files(photo)
        if page.locator("[data-next]").is_hidden():
            break
        page.locator("[data-next]").click()
    page.get_by_role("button", name="Keep this record").click()
    heading(page, "What has the office not received yet?").wait_for()


def picture(page, width=2400, height=1200):
    """A photo as a phone takes it: larger than what is sent."""
    data = page.evaluate(
        """async ([width, height]) => {
          const canvas = new OffscreenCanvas(width, height), pen = canvas.getContext("2d");
          pen.fillStyle = "#d8c69a"; pen.fillRect(0, 0, width, height);
          const blob = await canvas.convertToBlob({type: "image/jpeg"});
          return Array.from(new Uint8Array(await blob.arrayBuffer()));
        }""",
        [width, height],
    )
    return {"name": "strip.jpg", "mimeType": "image/jpeg", "buffer": bytes(data)}


def waiting(page):
    return page.locator("[data-waiting]").inner_text()


def test_three_records_and_a_photo_wait_without_signal_and_arrive_once(phone, site):
    page = phone("field")
    ready(page)
    photo = picture(page)
    page.context.set_offline(True)

    page.goto(LOOK)
    answer(page, SEEN, TICKED, photo=photo)
    assert waiting(page) == "Waiting to be sent: 1"
    expect(page.locator("[data-state]")).to_contain_text("No signal.")
    page.goto(SHEET)
    answer(page, {"people": "7", "done": "Strip 1 dug to rock."})
    page.goto("/today/at/OD-01/strips/1/found-level/")
    answer(page, {"offset_m": "11,9", "level_m": "422.65"})
    assert waiting(page) == "Waiting to be sent: 3"

    # The battery is empty: the tab is gone, and comes back without signal.
    context = page.context
    page.close()
    page = context.new_page()
    page.goto("/today/parcel/")
    expect(page.locator("[data-waiting]")).to_have_text("Waiting to be sent: 3")
    assert page.locator(".box [data-title]").count() == 3
    page.goto("/today/")
    expect(page.locator("[data-count-waiting]")).to_have_text("Waiting to be sent: 3")
    assert rows(site, "SELECT count(*) FROM structures_phonerecord") == [(0,)]

    page.goto("/today/parcel/")
    context.set_offline(False)
    expect(page.locator("[data-waiting]")).to_have_text("Nothing waits on this phone.")
    assert page.locator("[data-word]:visible").all_inner_texts() == ["the office has it"] * 3
    kinds = rows(site, "SELECT kind, outcome FROM structures_phonerecord ORDER BY kind")
    assert kinds == [("day-sheet", "kept"), ("found-level", "kept"), ("look", "kept")]
    assert rows(
        site, "SELECT spoil_back_m, depth_m FROM structures_trenchlook WHERE looked_at = '07:30:00'"
    ) == [(2.5, 3.2)]
    ((what, lat, accuracy),) = rows(
        site, "SELECT what, lat, accuracy_m FROM structures_photo WHERE what LIKE 'Look%'"
    )
    assert (what, round(lat, 2), accuracy) == ("Look into the trench, OD-01 strip 1", 15.72, 6.0)

    # Sent again, as when the answer was lost on the way: nothing more is kept.
    page.evaluate(
        """async () => {
          const {store, send} = window.underbund;
          for (const one of await store.all("records")) await store.put("records", {...one, waits: true});
          await send.now();
        }"""
    )
    expect(page.locator("[data-word]:visible").first).to_have_text("the office had it already")
    assert rows(site, "SELECT count(*) FROM structures_phonerecord") == [(3,)]
    assert rows(site, "SELECT count(*) FROM structures_daysheet") == [(1,)]


def test_a_photo_is_made_smaller_on_the_phone(phone):
    page = phone("field")
    page.goto(LOOK)
    box = page.locator("input[type=file]")
    box.set_input_files(picture(page))
    made = page.evaluate(
        """async () => {
          const file = document.querySelector("input[type=file]").files[0];
          const one = await underbund.photo.take(file, {site: "OD-01", what: "x", withPlace: false});
          const drawn = await createImageBitmap(new Blob([one.bytes]));
          return [drawn.width, drawn.height, "lat" in one, [...new Uint8Array(one.bytes).slice(0, 3)]];
        }"""
    )
    assert made[:3] == [1600, 800, False]
    assert made[3] == [0xFF, 0xD8, 0xFF]


def test_what_was_half_typed_is_there_again(phone):
    page = phone("field")
    ready(page)
    page.context.set_offline(True)
    page.goto(SHEET)
    page.locator("[data-next]").click()
    page.get_by_label("How many people were there?").fill("9")
    page.wait_for_function(
        "async () => ((await underbund.store.get('drafts', location.pathname)) || {}).at === 1"
    )
    page.reload()
    expect(page.get_by_label("How many people were there?")).to_have_value("9")
    expect(page.locator("[data-count]")).to_have_text(re.compile("^Question 2 of"))


def test_two_phones_ask_for_one_hold_point_and_both_are_told(phone, site, people):
    first, second = phone("field"), phone("other")
    for page in (first, second):
        ready(page)
        page.context.set_offline(True)
        page.goto("/today/at/OD-01/strips/2/hold-asked/?hold=H5")
        answer(page, {"pump_hours": "6" if page is first else "8"})
    first.context.set_offline(False)
    expect(first.locator("[data-word]:visible").first).to_have_text("the office has it")
    second.context.set_offline(False)
    expect(second.locator("[data-word]:visible").first).to_have_text(
        "the office has it and holds it for an engineer"
    )
    expect(second.locator("[data-findings]").first).to_contain_text(people["field"])
    engineer = phone("engineer", viewport={"width": 1280, "height": 800})
    engineer.goto("/holds/")
    engineer.get_by_role("link", name=re.compile("^hold-asked")).click()
    row = engineer.get_by_role("row", name=re.compile("How many hours"))
    assert row.get_by_role("cell").all_inner_texts() == ["6", "8"]
    engineer.get_by_label("the second").check()
    engineer.get_by_label("Why?").fill("The pump ran until noon.")
    engineer.get_by_role("button", name="Decide").click()
    expect(engineer.get_by_text("It is decided; both stay where they are.")).to_be_visible()
    found = rows(site, "SELECT readings FROM structures_holdpoint WHERE hold = 'H5'")
    assert [one for (one,) in found] == ['{"pump_hours": 8.0}']


def test_what_is_refused_stays_on_the_phone_and_can_be_thrown_away(phone):
    page = phone("field")
    page.goto("/today/at/OD-01/strips/1/found-level/")
    answer(page, {"offset_m": "60", "level_m": "422"})
    word = page.locator("[data-word]:visible").first
    expect(word).to_have_text("refused: it is still on this phone")
    expect(page.locator("[data-findings]").first).to_contain_text("lies outside strip 1")
    page.on("dialog", lambda asked: asked.accept())
    page.get_by_role("button", name="Throw away").click()
    expect(page.locator(".box [data-title]")).to_have_count(0)


def test_what_waits_for_more_than_three_days_is_warned_of(phone):
    page = phone("field")
    ready(page)
    page.context.set_offline(True)
    page.goto(SHEET)
    answer(page, {"done": "Key cut."})
    page.evaluate(
        """async () => {
          const [one] = await underbund.store.all("records");
          const made = new Date(Date.now() - 73 * 3600 * 1000).toISOString();
          await underbund.store.put("records", {...one, made});
        }"""
    )
    page.reload()
    expect(page.locator("[data-word]:visible").first).to_contain_text("more than three days")
    page.goto("/today/")
    expect(page.locator("[data-count-waiting]")).to_contain_text("Find signal today.")


def test_what_one_person_wrote_down_is_not_sent_by_another(phone, site, people):
    page = phone("field")
    ready(page)
    page.context.set_offline(True)
    page.goto(SHEET)
    answer(page, {"done": "Film laid."})
    page.context.clear_cookies()
    page.context.set_offline(False)
    expect(page.locator("[data-state]")).to_contain_text("You are not signed in any more.")
    assert waiting(page) == "Waiting to be sent: 1"


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize(
    "place",
    [
        "/today/",
        "/today/parcel/",
        LOOK,
        "/today/at/OD-01/strips/2/hold-asked/?hold=H3",
        "/today/at/OD-01/alarm/",
        "/sites/OD-01/works/",
        "/sites/OD-01/works/strips/1/",
        "/sites/OD-01/works/clay/",
        "/holds/",
    ],
)
def test_the_pages_of_the_trench_are_for_everyone(phone, place, scheme):
    """Oracle: axe-core's rules for WCAG 2.0 to 2.2, A and AA; 44 px for what a thumb touches."""
    page = phone("field", color_scheme=scheme, viewport=PHONE)
    page.goto(place)
    assert violations(page) == []
    assert overhang_px(page) == 0
    if place.startswith("/today/"):
        small = page.evaluate(
            """() => [...document.querySelectorAll(
                 "main a, main button, main input:not([type=hidden]), main summary, main .pick")]
               .filter((one) => one.offsetParent && !one.closest(".pick input"))
               .map((one) => [one.tagName, (one.closest(".pick") || one).getBoundingClientRect().height])
               .filter(([, height]) => height < 43.5)"""
        )
        assert small == []


def test_without_a_script_the_same_form_goes_straight_to_the_office(phone, site):
    before = rows(site, "SELECT count(*) FROM structures_daysheet")
    page = phone("field", java_script_enabled=False)
    page.goto(SHEET)
    page.get_by_label("What was done?").fill("Backfill begun.")
    page.get_by_role("button", name="Keep this record").click()
    expect(page.get_by_text("Day sheet: Kept.")).to_be_visible()
    wait_until(lambda: rows(site, "SELECT count(*) FROM structures_daysheet") != before)
