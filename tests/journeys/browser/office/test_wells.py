"""Wells in a real browser: every page for everyone."""

from __future__ import annotations

import pytest

from tests.journeys.browser.pages import overhang_px, violations

pytestmark = pytest.mark.browser
NARROW = {"width": 360, "height": 740}
PAGES = (
    "/wells/",
    "/wells/BI-W05/",
    "/wells/new/",
    "/wells/BI-W05/mark/",
    "/hydrograph/?well=BI-W05&well=BI-W07",
    "/sites/BI-01/effect/",
    "/repairs/",
    "/readings/",
    "/complaints/C-2026-01/",
)


@pytest.mark.parametrize("path", PAGES)
def test_a_page_of_wells_is_for_everyone(desk, path):
    page = desk("engineer-1", viewport=NARROW)
    page.goto(path)
    assert violations(page) == []
    assert overhang_px(page) <= 0
