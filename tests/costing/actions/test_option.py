"""Rock found deeper: forecast at once, an option paper where it must be, and what is decided on it."""

from __future__ import annotations

from datetime import date
from decimal import Decimal

import pytest

from costing.actions.estimate import request_estimate
from costing.actions.option import Asked, decide_option, request_forecast, resume_strips
from costing.actions.schedule import import_schedule
from costing.forecast import Books, Drawn, forecast
from costing.models import Estimate, Forecast, OptionPaper, Sanction
from costing.price.sanctioned import Sums
from costing.queries.forecasts import visible_forecasts, visible_papers
from costing.queries.standing import standing_of
from structures.actions.found import Found, keep_found_levels
from structures.errors import Refused
from structures.ground.found import FoundLevel
from structures.models import Entry, FirstRun, Stream
from structures.queries.drawn_wall import drawn_wall
from tests.costing.demo_works import DEMO, demo_rates
from tests.costing.works_office import SIGNED_IN, a_works_office
from tests.papers import read_all
from tests.trench import DAY, TODAY, dig

pytestmark = pytest.mark.django_db
DEEP_M = 1.6


@pytest.fixture
def office():
    """Sanctioned and approved at exactly what the drawing costs; the stream ran in mid-July."""
    office = a_works_office()
    site, district = office.structure.site, office.structure.site.watershed.district
    import_schedule(
        district_id=district.pk,
        name="rates.csv",
        data=(DEMO / "rates.csv").read_bytes(),
        by=office.engineer,
    )
    request_estimate(site_id=site.pk, by=office.other)
    read_all()
    stream = Stream.objects.create(watershed=site.watershed, name="Odremma")
    for year in range(2014, 2026):
        FirstRun.objects.create(stream=stream, year=year, first_run_on=date(year, 7, 15))
    site.stream = stream
    site.save()
    estimate = Estimate.objects.get()
    for kind in ("technical", "administrative"):
        sanctioned(office, kind, estimate.total, estimate=estimate)
    return office


def sanctioned(office, kind, amount, **more):
    newest = office.structure.sanctions.filter(kind=kind).count()
    return Sanction.objects.create(
        structure=office.structure,
        kind=kind,
        revision=newest,
        number=f"{kind}-{newest}",
        day=TODAY,
        amount=amount,
        currency="INR",
        by=office.officer,
        **({"valid_to": date(2027, 3, 31)} | more),
    )


def find(office, strip, below_m):
    """Rock all along a strip, so far below the line as drawn."""
    drawn = drawn_wall(office.structure)
    inside = [x for x in drawn.offset_m.tolist() if strip.from_m < x < strip.to_m]
    levels = [
        Found(x, round(drawn.line_at(x) - below_m, 3)) for x in (strip.from_m, *inside, strip.to_m)
    ]
    keep_found_levels(strip_id=strip.pk, on=DAY, levels=levels, by=office.trench.field)
    strip.refresh_from_db()
    return [FoundLevel(one.offset_m, one.level_m, strip.number) for one in levels]


def deeper(office, below_m=DEEP_M):
    strip = dig(office.trench, 4)
    found = find(office, strip, below_m)
    read_all()
    return strip, found


def decide(office, paper, way, **more):
    said = {"why": "The rock is sound there.", "seen": paper.digest, "by": office.officer}
    return decide_option(paper_id=paper.pk, way=way, **{**said, "signed_in_at": SIGNED_IN, **more})


def test_rock_found_deeper_is_forecast_the_same_day(office):
    """Oracle: the same walk without a database, on the pack of the drawing and the levels found."""
    strip, found = deeper(office)
    kept = Forecast.objects.get()
    estimate = Estimate.objects.get()
    drawn = drawn_wall(office.structure)
    sums = Sums(estimate.total, estimate.total)
    whole = forecast(Drawn(drawn.pack), found, Books(demo_rates(), sums), on=TODAY, draws=2000)
    assert kept.total == whole.total > estimate.total
    excess = (kept.total - estimate.total) * 100 / estimate.total
    assert kept.technical_excess_percent == pytest.approx(float(excess))
    assert kept.administrative_excess_percent == pytest.approx(float(excess))
    paper = OptionPaper.objects.get()
    assert [one["way"] for one in paper.ways["ways"]] == ["go on", "step", "shift", "close"]
    assert (strip.halted, list(paper.strips.all())) == (True, [strip])
    assert (paper.way, paper.forecast) == ("", kept)
    assert paper.ways["ways"][0]["total"] == f"{kept.total:f}"
    acts = list(Entry.objects.values_list("act", flat=True))
    assert acts[-2:] == ["strip halted", "option paper opened"]


def test_rock_as_drawn_opens_no_paper(office):
    strip = dig(office.trench, 4)
    find(office, strip, 0.0)
    request_forecast(structure_id=office.structure.pk, by=office.engineer)
    read_all()
    kept = Forecast.objects.get()
    assert kept.technical_excess_percent == pytest.approx(0.0, abs=0.01)
    assert not OptionPaper.objects.exists()


def test_the_same_levels_are_forecast_once(office):
    dig(office.trench, 4)
    asked = [
        request_forecast(structure_id=office.structure.pk, by=office.engineer) for _ in range(2)
    ]
    assert asked[0] == asked[1]
    with pytest.raises(Refused, match="You may not ask for an estimate"):
        request_forecast(structure_id=office.structure.pk, by=office.officer)


def test_a_way_that_a_rule_blocks_cannot_be_chosen(office):
    """Oracle: "step" and "shift" need a shelf and another survey, and none was given."""
    deeper(office)
    paper = OptionPaper.objects.get()
    blocked = [one["way"] for one in paper.ways["ways"] if not one["may_be_chosen"]]
    assert {"step", "shift"} <= set(blocked)
    for way in blocked:
        with pytest.raises(Refused, match="cannot be chosen"):
            decide(office, paper, way)
    assert OptionPaper.objects.get().way == ""


def test_the_engineer_gives_a_shelf_and_a_design_and_it_is_weighed_again(office):
    deeper(office)
    before = OptionPaper.objects.get()
    drawn = drawn_wall(office.structure)
    shelf = float(drawn.level_m.min())
    asked = Asked(shelf_m=shelf, reach_m=300.0, licensed_design="SD-14, licence 2231")
    request_forecast(structure_id=office.structure.pk, by=office.engineer, asked=asked)
    read_all()
    paper = OptionPaper.objects.get()
    assert paper.pk == before.pk
    assert paper.digest != before.digest
    ways = {one["way"]: one for one in paper.ways["ways"]}
    assert ways["step"]["may_be_chosen"]
    assert Decimal(ways["step"]["total"]) < Decimal(ways["go on"]["total"])
    assert ways["step"]["leak"]["words"]
    with pytest.raises(Refused, match="The figures changed since"):
        decide(office, paper, "step", seen=before.digest)
    # What was given for the paper stays given when more rock is found.
    strip = dig(office.trench, 5)
    find(office, strip, DEEP_M)
    read_all()
    paper.refresh_from_db()
    assert paper.ways["asked"]["shelf_m"] == shelf
    assert list(paper.strips.values_list("number", flat=True)) == [4, 5]


def test_work_goes_on_once_the_sanction_is_revised(office):
    """Oracle: ES-03 and ES-04: over 5 and 10 % both are revised first; the strip waits so long."""
    strip, _ = deeper(office)
    request_forecast(
        structure_id=office.structure.pk, by=office.engineer, asked=Asked(licensed_design="SD-14")
    )
    read_all()
    estimate, paper = Estimate.objects.get(), OptionPaper.objects.get()
    paper = decide(office, paper, "go on")
    strip.refresh_from_db()
    over = paper.forecast.technical_excess_percent
    missing = standing_of(office.structure).facts["revisions_missing"]
    assert missing == tuple(
        word
        for limit, word in (
            (5, "revised technical sanction"),
            (10, "revised administrative approval"),
        )
        if over > limit
    )
    assert strip.halted is bool(missing)
    if missing:
        with pytest.raises(Refused, match="revised technical sanction"):
            resume_strips(paper_id=paper.pk, by=office.officer)
    for kind in ("technical", "administrative"):
        sanctioned(office, kind, paper.forecast.total, estimate=estimate)
    resume_strips(paper_id=paper.pk, by=office.officer)
    strip.refresh_from_db()
    assert not strip.halted
    assert "strips go on" in Entry.objects.values_list("act", flat=True)


def test_a_step_is_revised_by_its_own_cost(office):
    """Oracle: ES-03 on the total of the step as the paper states it, not on that of the forecast."""
    strip, _ = deeper(office)
    shelf = float(drawn_wall(office.structure).level_m.min())
    asked = Asked(shelf_m=shelf, reach_m=300.0, licensed_design="SD-14")
    request_forecast(structure_id=office.structure.pk, by=office.engineer, asked=asked)
    read_all()
    paper = decide(office, OptionPaper.objects.get(), "step")
    step = next(one for one in paper.ways["ways"] if one["way"] == "step")
    sanction = Estimate.objects.get().total
    over = (Decimal(step["total"]) - sanction) * 100 / sanction
    missing = standing_of(office.structure).facts["revisions_missing"]
    assert ("revised technical sanction" in missing) is (over > 5)
    assert over < paper.forecast.technical_excess_percent
    strip.refresh_from_db()
    assert strip.halted is bool(missing)


def test_closing_leaves_the_strips_on_hold(office):
    strip, _ = deeper(office)
    paper = decide(office, OptionPaper.objects.get(), "close")
    strip.refresh_from_db()
    assert (paper.way, strip.halted) == ("close", True)
    assert standing_of(office.structure).facts["option_way"] == "close"
    with pytest.raises(Refused, match="The option paper says: close"):
        resume_strips(paper_id=paper.pk, by=office.officer)
    with pytest.raises(Refused, match="It was decided: close"):
        decide(office, paper, "close")


def test_a_paper_is_decided_by_another_in_a_session_with_a_reason(office):
    deeper(office)
    paper = OptionPaper.objects.get()
    with pytest.raises(Refused, match="A device's token decides nothing"):
        decide(office, paper, "close", signed_in_at=None)
    with pytest.raises(Refused, match="reason is missing"):
        decide(office, paper, "close", why=" ")
    with pytest.raises(Refused, match="You may not decide an option paper"):
        decide(office, paper, "close", by=office.engineer)


def test_a_way_that_takes_longer_than_is_left_by_now_is_refused(office):
    """Oracle: SG-01; a paper weighed with n days left, looked at when fewer are left."""
    deeper(office)
    request_forecast(
        structure_id=office.structure.pk, by=office.engineer, asked=Asked(licensed_design="SD-14")
    )
    read_all()
    paper = OptionPaper.objects.get()
    way = paper.ways["ways"][0]
    assert way["may_be_chosen"], way["findings"]
    district = office.structure.site.watershed.district
    district.as_of = date.fromordinal(TODAY.toordinal() + paper.ways["days_left"] - way["days"] + 1)
    district.save()
    with pytest.raises(
        Refused, match=f"It needs {way['days']} days and {way['days'] - 1} are left"
    ):
        decide(office, paper, "go on")


def test_field_staff_see_neither_forecast_nor_paper(office):
    deeper(office)
    assert visible_forecasts(office.officer).count() == visible_papers(office.officer).count() == 1
    assert not visible_forecasts(office.trench.field).exists()
    assert not visible_papers(office.trench.field).exists()
