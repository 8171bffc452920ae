"""How a visitor reaches each page, and what is asked of every page."""

from __future__ import annotations

import json
from pathlib import Path

PACKS, RATES = Path("fixtures/packs"), Path("fixtures/rates")
WRONG = {"pack": 1, "site": {"code": "K"}, "ground": [], "wall": {"thicknes_m": 1}}
AXE = Path(__file__).with_name("vendor").joinpath("axe-4.14.1.min.js")
LEVELS = ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22a", "wcag22aa"]
QUESTION = "Will this wall close?"
MOST_KEYS = 60  # of one page; a page that needs more has lost the focus


def hand_in(page, pack, rates="RS-2025-26.csv"):
    """Send files from the first page; `pack` is a file's name or the content of a wrong one."""
    page.goto("/")
    page.get_by_label("Survey pack").set_input_files(
        PACKS / pack
        if isinstance(pack, str)
        else {
            "name": "wrong.json",
            "mimeType": "application/json",
            "buffer": json.dumps(pack).encode(),
        }
    )
    page.get_by_label("Rate schedule").set_input_files(RATES / rates)
    page.get_by_role("button", name="Appraise this survey").click()


def heading(page, words):
    return page.get_by_role("heading", name=words, exact=True)


def violations(page):
    """What axe-core finds against WCAG 2.0 to 2.2, A and AA: rule and place of each."""
    page.evaluate(AXE.read_text(encoding="utf-8"))
    found = page.evaluate(
        "levels => axe.run({runOnly: levels, rules: {'target-size': {enabled: true}}})", LEVELS
    )
    assert found["passes"]
    return [
        (rule["id"], node["target"], node["failureSummary"])
        for rule in found["violations"]
        for node in rule["nodes"]
    ]


def overhang_px(page):
    """How far the page reaches beyond the window's right edge."""
    return page.evaluate(
        "() => document.documentElement.scrollWidth - document.documentElement.clientWidth"
    )


FOCUS = """() => {
  const one = document.activeElement, box = one.getBoundingClientRect();
  const style = getComputedStyle(one);
  return {
    name: one.localName + (one.id && "#" + one.id),
    text: (one.textContent || "").trim().replace(/\\s+/g, " "),
    inMain: Boolean(one.closest("main")),
    seen: style.outlineStyle !== "none" && parseFloat(style.outlineWidth) >= 2
      && box.width > 0 && box.bottom > 0 && box.top < innerHeight
      && box.right > 0 && box.left < innerWidth,
  };
}"""


def focus(page):
    """What has the focus, and whether a person can see that it has."""
    return page.evaluate(FOCUS)


def step(page):
    """Press the Tab key; what it leads to must be seen."""
    page.keyboard.press("Tab")
    at = focus(page)
    assert at["name"] == "body" or at["seen"], f"the focus cannot be seen on {at}"
    return at


def go_to(page, there):
    """Go by the Tab key to the first place that is the one."""
    at = focus(page)
    for _ in range(MOST_KEYS):
        if there(at):
            return
        at = step(page)
    raise AssertionError(f"{MOST_KEYS} keys did not lead there; the last was {at}")
