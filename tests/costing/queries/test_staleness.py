"""What makes an estimate stale; the estimate itself never changes."""

from __future__ import annotations

from datetime import date, timedelta

import pytest
from django.utils import timezone

from costing.actions.estimate import request_estimate
from costing.appraisal import METHOD
from costing.models import Estimate
from costing.queries import estimates
from costing.queries.estimates import priced_sheet, stale_reasons, visible_estimates
from structures.actions.rock import settle_rock_line
from structures.actions.settings import change_setting, edit_district
from structures.intake.defaults import EVERY
from structures.models import Role, Site
from structures.queries.settings import counted_in
from structures.runs.queue import execute
from tests.factories import (
    a_district,
    a_schedule,
    a_site,
    a_survey,
    a_user,
    a_watershed,
    an_engineer,
)

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    return a_site(a_watershed(a_district(invented=True, as_of=date(2026, 4, 10))))


@pytest.fixture
def engineer(site):
    return an_engineer(site.watershed.district)


@pytest.fixture
def priced(site, engineer):
    a_schedule(site.watershed.district, engineer, days="2026-01-01,2026-06-30")
    survey = a_survey(site, engineer)
    price(site, engineer)
    return survey


def price(site, by):
    run = request_estimate(site_id=site.pk, by=by)
    execute(str(run.pk))


def reasons(by):
    return stale_reasons(visible_estimates(by).first())


@pytest.mark.usefixtures("priced")
def test_an_estimate_of_the_newest_inputs_is_not_stale(engineer):
    assert reasons(engineer) == ()


@pytest.mark.usefixtures("priced")
def test_a_newer_survey(site, engineer):
    a_survey(site, engineer, works={"pump_hours": 480})
    assert reasons(engineer) == ("Survey 2 came in; this is priced on survey 1.",)
    price(site, engineer)
    assert reasons(engineer) == ()


def test_a_newer_rock_line(priced, site, engineer):
    settle_rock_line(
        survey_id=priced.pk,
        points=priced.pack["rock_line"],
        reason="as drawn",
        rests_on=[],
        by=engineer,
    )
    assert reasons(engineer) == ("Rock line 1 was settled on this survey since.",)
    price(site, engineer)
    assert reasons(engineer) == ()


@pytest.mark.usefixtures("priced")
def test_other_rates_that_hold_today(site, engineer):
    district = site.watershed.district
    later = {"days": "2026-05-01,2026-12-31", "clay": "830.00"}
    a_schedule(district, engineer, name="RS-2.csv", **later)
    assert reasons(engineer) == ()
    a_schedule(district, engineer, name="RS-3.csv", clay="840.00")
    assert reasons(engineer) == ("Other rates hold today: RS-3.",)


@pytest.mark.usefixtures("priced")
def test_rates_that_ended(site, engineer):
    admin = a_user(Role.ADMIN, site.watershed.district)
    edit_district(district_id=site.watershed.district_id, by=admin, as_of=date(2026, 7, 1))
    assert reasons(engineer) == ("Its rates RS-1 ended on 2026-06-30 and no others hold today.",)


SIGNED = ("A. Rao", "L-1", date(2026, 3, 1))


def change(site, key, value):
    admin = a_user(Role.ADMIN, site.watershed.district)
    where = {"district": site.watershed.district, "by": admin}
    change_setting(key=key, value=value, reason="measured here", decided=SIGNED, **where)


@pytest.mark.usefixtures("priced")
@pytest.mark.parametrize(
    ("key", "value", "told"),
    [
        ("film_lap_m", 0.4, "film lap 0.4 m, was 0.3 m"),
        ("risk_draws", 4000, "draws of the rock line 4000, was 2000"),
        ("clay_k_m_per_s", 1e-9, "clay in place, at most 1e-09 m/s, was 1e-08 m/s"),
    ],
)
def test_a_changed_setting_makes_it_stale_until_it_is_priced_again(
    site, engineer, key, value, told
):
    change(site, key, value)
    assert reasons(engineer) == (f"Settings were changed since: {told}.",)
    price(site, engineer)
    assert reasons(engineer) == ()
    assert Estimate.objects.count() == 2
    change(site, key, EVERY[key].value)
    (reason,) = reasons(engineer)
    assert told.partition(", was ")[2] in reason


@pytest.mark.usefixtures("priced")
def test_what_goes_before_a_setting_is_not_touched_by_it(site, engineer):
    """The survey says a side slope of 1.5 itself, the estimate was asked for with its own key."""
    run = request_estimate(site_id=site.pk, by=engineer, wall={"key_m": 0.2})
    execute(str(run.pk))
    change(site, "side_slope", 2.5)
    change(site, "key_m", 0.3)
    change(site, "strip_m", 8.0)  # no part of an appraisal
    assert stale_reasons(visible_estimates(engineer).get(run=run)) == ()


@pytest.mark.usefixtures("priced")
def test_another_method(engineer, monkeypatch):
    monkeypatch.setattr(estimates, "METHOD", "2027.1-1")
    assert reasons(engineer) == (f"The method is 2027.1-1 now; this was computed by {METHOD}.",)


@pytest.mark.usefixtures("priced")
def test_every_reason_is_told_and_the_row_stays_as_it_was(site, engineer, monkeypatch):
    before = Estimate.objects.values().get()
    monkeypatch.setattr(estimates, "METHOD", "2027.1-1")
    a_survey(site, engineer, works={"pump_hours": 480})
    a_schedule(site.watershed.district, engineer, name="RS-3.csv", clay="840.00")
    assert len(reasons(engineer)) == 3
    assert Estimate.objects.values().get() == before


def test_a_real_district_is_judged_by_the_day_itself():
    district = a_district("RE")
    engineer = an_engineer(district)
    site = a_site(a_watershed(district, "RW"))
    today = timezone.localdate()
    a_schedule(district, engineer, days=f"{today - timedelta(days=1)},{today + timedelta(days=1)}")
    a_survey(site, engineer)
    price(site, engineer)
    assert reasons(engineer) == ()


@pytest.mark.usefixtures("priced")
def test_the_sheet_of_a_site_holds_what_is_newest(site, engineer):
    sheet = priced_sheet(engineer, "EX-A")
    assert (sheet.sheet.survey.version, sheet.sheet.rock_line) == (1, None)
    assert (sheet.estimate.version, sheet.stale) == (1, ())
    assert sheet.sheet.design == sheet.estimate.design
    a_survey(site, engineer, works={"pump_hours": 480})
    assert priced_sheet(engineer, "EX-A").sheet.survey.version == 2
    with pytest.raises(Site.DoesNotExist):
        priced_sheet(an_engineer(a_district("ZZ")), "EX-A")


def test_a_bare_site_has_a_sheet_too(site, engineer):
    sheet = priced_sheet(engineer, "EX-A")
    assert (sheet.sheet.survey, sheet.sheet.design, sheet.estimate) == (None, None, None)


@pytest.mark.usefixtures("priced")
def test_a_list_with_reasons_costs_one_query_and_one_a_district(
    site, engineer, django_assert_num_queries
):
    for code in ("EX-B", "EX-C"):
        place = a_site(site.watershed, code, lat=15.72)
        a_survey(place, engineer)
        price(place, engineer)
    with django_assert_num_queries(2):
        counted = counted_in(site.watershed.district)
        shown = [
            (one.site.code, one.survey.version, one.schedule.code, stale_reasons(one, counted))
            for one in visible_estimates(engineer)
        ]
    assert len(shown) == 3
