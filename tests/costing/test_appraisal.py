"""What the spine says beside the figures: reasons for what is not known, and a digest of it all."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from math import sqrt

import pytest

from costing.appraisal import appraise
from costing.price.rates import Rate
from structures.intake.pack import GroundWater, WallSettings, Works
from structures.intake.practice import Decision, Practice
from tests.costing.documents.appraisals import ON, estimated, example, pack, rates, unpriced


def said(found):
    return {one.code: one for one in found.cautions}


def test_a_settled_line_says_why_it_has_no_range():
    assert said(unpriced())["rock-line-settled"].level == "note"
    assert "rock-line-settled" not in said(estimated())


def test_without_rates_a_note_says_so_and_with_them_none():
    assert said(unpriced())["rates-not-given"].level == "note"
    assert "rates-not-given" not in said(example("B"))


def test_hours_that_nobody_can_tell_are_named_with_what_is_lacking():
    found = appraise(replace(pack("B"), works=Works()), on=ON)
    told = said(found)["dewatering-not-known"]
    assert told.level == "warn"
    assert "works.pump_hours or works.days_below_water" in told.text


def test_neighbours_are_looked_for_within_the_reach_of_the_pumping():
    """Oracle: handbook 6.8 and 11, R = 3000 (H - 0.30) sqrt(K); 6.c has H 5.45 and K 2e-4 m/s."""
    wet = replace(pack("B"), ground_water=GroundWater(2e-4 * 86400, 0.004, 0.15, 249.35))
    reach = 3000 * (5.45 - 0.30) * sqrt(2e-4)
    assert f"as far as {reach:.0f} m from" in said(appraise(wet, on=ON))["neighbours"].text
    dry = replace(wet, works=Works(pump_hours=0.0))
    assert "neighbours" not in said(appraise(dry, on=ON))
    assert "neighbours" not in said(unpriced())


def test_rates_of_other_lifts_than_those_of_the_trench_are_doubted():
    """Example A's lifts begin at 0, 1.5 and 3 m; a rate from 1 m serves none of them."""
    rest = tuple(one for one in rates().rates if one.item != "excavation")
    price = rates().rates_of("excavation")[0].rate
    digs = [Rate("excavation", "m3", price, from_m) for from_m in (None, 0.0, 1.0, 3.0, 9.0)]
    found = appraise(pack("A"), schedule=replace(rates(), rates=(*digs, *rest)), on=ON)
    told = said(found)["rates-lift-unused"]
    assert told.level == "warn"
    assert "from 1 m serve no lift" in told.text
    assert "rates-lift-unused" not in said(example("A"))


def test_draws_tell_of_open_flanks_even_where_no_total_is_known():
    """Oracle: handbook 5.5 and 8.10, the draws that reach the bed nowhere beyond a toe."""
    survey = replace(estimated().pack, rock=estimated().pack.rock[:-1], works=Works())
    found = appraise(survey, schedule=rates(), on=ON)
    x, lines, bed_m = found.rock.offset_m, found.rock.draws_m, found.design.wall.bed_level_m
    beyond = (x <= survey.toes.left_m, x >= survey.toes.right_m)
    closed = [(lines[:, side] >= bed_m).any(axis=1) for side in beyond]
    share = 1.0 - float((closed[0] & closed[1]).mean())
    assert 0.9 < share < 1.0
    assert found.spread.open_flank_share == pytest.approx(share)
    assert (found.spread.p10, found.spread.p50, found.spread.p90) == (None, None, None)
    assert found.spread_note == "the estimate is incomplete"


SIGNED = Decision("sichardt_c", 3000.0, "A. Rao", "L-1", date(2026, 3, 1), "pumped\nhere.")


def changed(**values):
    plain = replace(pack("B"), wall=WallSettings())
    found = appraise(plain, on=ON, practice=Practice(**values, decisions=(SIGNED,)))
    return [one.text for one in found.cautions if one.code == "default-changed"]


def test_a_changed_default_of_the_engineer_is_said_with_who_decided_it():
    """Oracle: handbook 12, last sentence; a default of the district is nobody's signature."""
    assert changed(pump_m3_per_hour=10.0) == []
    assert changed(sichardt_c=3000.0, specific_yield=0.2) == [
        (
            "Specific yield: 0.2 instead of 0.15 (accepted 0.05 to 0.3). A licensed engineer's "
            "name, licence number, date and reason are asked for."
        ),
        (
            "Sichardt's factor: 3000 s^0.5 m^-0.5 instead of 2000 (accepted 1500 to 3000). Decided "
            "by A. Rao, licence L-1, on 2026-03-01: pumped here."
        ),
    ]
    (other,) = changed(sichardt_c=2500.0)
    assert "A. Rao" not in other


def test_the_depth_that_nobody_enters_is_the_one_that_is_set():
    found = appraise(pack("B"), on=ON, practice=Practice(depth_without_entry_m=0.9))
    assert "From 0.9 m on nobody enters" in said(found)["trench-collapse"].text
    assert "A ladder within 7.6 m from 0.9 m depth" in said(found)["edge"].text
    assert "From 1.2 m on nobody enters" in said(unpriced())["trench-collapse"].text


@pytest.mark.parametrize(
    "other",
    [
        {"seed": 7},
        {"draws": 2001},
        {"schedule": None},
        {"practice": Practice(rock_range_m=25.0)},
    ],
)
def test_other_inputs_or_other_chance_have_another_digest(other):
    whole = estimated()
    plain = {"schedule": rates(), "on": ON}
    assert appraise(whole.pack, **plain).digest == whole.digest
    assert appraise(whole.pack, **plain | other).digest != whole.digest
