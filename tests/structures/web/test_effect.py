"""What the wells say of a wall and of a complaint, from the invented district's own readings."""

from __future__ import annotations

from datetime import date

import pytest

from structures.actions.complaints import answer_complaint, take_complaint
from structures.documents.effect_result import effect_json
from structures.errors import Refused
from structures.intake.rain import read_rain
from structures.intake.readings import read_readings
from structures.life.verdict import from_readings
from structures.models import Complaint, Entry, Role
from structures.queries.complaints import look_into
from structures.queries.wells_of_wall import rain_of, wall_wells
from structures.water.effect import measure_effect
from tests import factories as make
from tests.structures.demo_wells import DEMO, a_demo_site, rows

pytestmark = pytest.mark.django_db
FIXTURES = DEMO.parent / "readings"
SAID = "Since the wall was built our common well has gone down by two arm lengths."


def words(answer):
    return " ".join(answer.content.decode().split())


def test_the_page_says_what_the_command_says_of_the_same_readings(client):
    """Oracle: `assess_effect` on the same readings and rain written as files, by another road."""
    site = a_demo_site("OD-01", date(2023, 5, 12))
    found = wall_wells(site)
    zone = found.readings[0].read_at.tzinfo
    data = (FIXTURES / "OD-01.csv").read_bytes()
    read = read_readings("OD-01.csv", data, zone)
    fallen = read_rain("rain.csv", (FIXTURES / "OD-01-rain.csv").read_bytes())
    other = measure_effect(read.readings, date(2023, 5, 12), rain=fallen)
    mine, theirs = (
        effect_json(one, from_readings(one.measured, one.limits), date(2023, 5, 12))
        for one in (found.effect, other)
    )
    for key in ("effect_m", "low_m", "high_m", "smallest_seen_m"):
        assert mine[key] == pytest.approx(theirs[key]), key
    assert mine["suggested_verdict"] == theirs["suggested_verdict"]
    client.force_login(make.a_user(Role.AUDITOR, site.watershed.district))
    page = words(client.get("/sites/OD-01/effect/"))
    assert "Did the water rise because of this wall?" in page
    heading = page.index('id="h-verdict"')
    assert heading < page.index("What was measured") < page.index("What else could explain it")
    if theirs["suggested_verdict"] == "not known":
        assert "Not known" in page[heading : heading + 120]


def test_months_of_rain_are_the_sums_of_days_and_none_where_one_is_blank():
    """Oracle: the days of June 2022 of the gauge, added here by hand."""
    site = a_demo_site("OD-01", date(2023, 5, 12))
    months = rain_of(site.watershed).months
    june = [
        row for row in rows("rain") if row["gauge_id"] == "OD-R1" and row["day"][:7] == "2022-06"
    ]
    assert months[2022, 6] == pytest.approx(sum(float(row["rain_mm"]) for row in june))
    blank = {
        row["day"][:7] for row in rows("rain") if row["gauge_id"] == "OD-R1" and not row["rain_mm"]
    }
    assert blank
    for month in blank:
        year, number = map(int, month.split("-"))
        assert months[year, number] is None


def a_complaint(site, **changes):
    values = {
        "site_id": site.pk,
        "received_on": date(2026, 3, 2),
        "from_whom": "village committee",
        "well": "BI-W05",
        "text": SAID,
        "by": make.a_user(Role.DISTRICT, site.watershed.district),
        **changes,
    }
    return take_complaint(**values)


def test_a_well_gone_down_comes_out_as_drought_and_a_raised_parapet(client):
    """Oracle: the district's files: the ring was raised by 0.60 m on 18 October 2025 (mark M2)."""
    site = a_demo_site(but_marks=[("BI-W05", "M2")])
    complaint = a_complaint(site)
    looked = look_into(complaint)
    found = looked.explained
    assert looked.since == date(2025, 6, 1)
    assert found.change_m < 0.0
    assert found.rain.change_m < 0.0
    assert found.mark.size.low_m <= -0.60 <= found.mark.size.high_m
    assert found.rest.low_m <= 0.0 <= found.rest.high_m
    client.force_login(complaint.by)
    page = words(client.get(f"/complaints/{complaint.code}/"))
    assert "a parapet raised or a tape cut?" in page
    assert "nothing that these readings can lay to the wall." in page
    assert "The wall was completed on 20 May 2024." in page
    answer = client.post(f"/complaints/{complaint.code}/", {"text": looked.draft, "closes": "on"})
    assert answer.status_code == 302
    kept = complaint.answers.get()
    assert kept.evidence["change_m"] == pytest.approx(found.change_m)
    assert Entry.objects.filter(act="complaint answered").count() == 1
    with pytest.raises(Refused, match="closed"):
        answer_complaint(complaint_id=complaint.pk, text="More.", by=complaint.by)


def test_a_raised_parapet_that_was_entered_is_told_as_well():
    """Oracle: the district's files: mark M2 lies 400.05 - 399.45 = 0.60 m above M1."""
    looked = look_into(a_complaint(a_demo_site()))
    assert any("raised by 0.60 m" in one for one in looked.sentences)
    assert "raised by 0.60 m" in looked.draft
    assert looked.explained.rest.low_m <= 0.0 <= looked.explained.rest.high_m


def test_a_complaint_without_a_well_gets_no_series_made_up():
    site = a_demo_site()
    looked = look_into(a_complaint(site, well=""))
    assert looked.explained is None
    assert "names no well that is read" in looked.draft


def test_complaints_are_taken_in_by_the_office_only(client):
    site = a_demo_site()
    client.force_login(make.an_engineer(site.watershed.district))
    said = {"received_on": "2026-03-02", "from_whom": "farmer", "text": "Less water."}
    assert client.post("/sites/BI-01/complaints/new/", said).status_code == 422
    client.force_login(make.a_user(Role.DISTRICT, site.watershed.district))
    assert client.post("/sites/BI-01/complaints/new/", said | {"well": "XX"}).status_code == 422
    assert client.post("/sites/BI-01/complaints/new/", said).url == "/complaints/C-BI-01-2026-1/"
    assert Complaint.objects.get().well is None
    page = words(client.get("/sites/BI-01/effect/"))
    assert "C-BI-01-2026-1" in page
    assert "not answered" in page


def test_a_wall_that_is_not_completed_is_not_known(client):
    site = make.a_site()
    client.force_login(make.an_engineer(site.watershed.district))
    page = words(client.get(f"/sites/{site.code}/effect/"))
    assert "No wall is completed here yet." in page


def test_hydrograph_as_page_drawing_paper_and_numbers(client):
    site = a_demo_site()
    client.force_login(make.a_user(Role.AUDITOR, site.watershed.district))
    query = {"well": ["BI-W05", "BI-W01"]}
    page = client.get("/hydrograph/", query)
    assert page.status_code == 200
    assert "mark +0.60 m" in words(page)
    assert "wall completed 20 May 2024" in words(page) or "20 May 2024" in words(page)
    drawing = client.get("/hydrograph/drawing.svg", query)
    assert drawing.content.startswith(b"<?xml")
    assert client.get("/hydrograph/drawing.pdf", query).content.startswith(b"%PDF")
    lines = client.get("/hydrograph/levels.csv", query).content.decode().splitlines()
    mine = [row for row in rows("levels") if row["well_id"] in ("BI-W05", "BI-W01")]
    assert len(lines) == len(mine) + 1
    assert client.get("/hydrograph/drawing.svg", {"well": "NO-W1"}).status_code == 404
