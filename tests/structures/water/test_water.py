"""The water of one site: values, or the reason why there is none."""

from dataclasses import replace

import pytest

from structures.ground.rock_line import RockLine
from structures.intake.pack import GroundWater, Site, SurveyPack
from structures.intake.practice import Practice
from structures.life.cautions import caution
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from structures.water.leakage import clay_leakage_m3_per_day, face_of
from structures.water.section_area import surveyed_section
from structures.water.storage import storage_m3
from structures.water.water import NO_ROCK, judge_water
from tests.structures.wall.examples import example

MEASURED = GroundWater(17.28, 0.004, 0.18, 249.35)  # 2e-4 m/s and the level of 6.c; rest invented
SITE = Site("EX-B", bed_slope=0.005)


def judged(name, water=MEASURED, site=SITE, **options):
    case = example(name)
    pack = SurveyPack(site, case.ground, case.toes, ground_water=water, wall=case.wall)
    rock = RockLine("given", case.rock_x, case.rock_z)
    cutoff = cut(make_section(*case.parts))
    return judge_water(pack, rock, cutoff, **options)


def section_b():
    case = example("B")
    return surveyed_section(case.ground, case.rock_x, case.rock_z)


def test_water_of_example_b():
    """Oracle: each formula of handbook 9.1, 9.3 and 9.9 called by hand; crest 249.40."""
    found = judged("B")
    area = section_b().area_below_m2(249.35)
    assert found.section_area_m2 == area
    assert found.underflow_m3_per_day == pytest.approx(17.28 * area * 0.004)
    assert found.storage_m3 == pytest.approx(
        storage_m3(section_b(), from_m=249.35, to_m=249.40, bed_slope=0.005, specific_yield=0.18)
    )
    face = face_of(cut(make_section(*example("B").parts)))
    assert found.leakage_m3_per_day == pytest.approx(
        clay_leakage_m3_per_day(
            face,
            upstream_m=249.40,
            downstream_m=249.35,
            thickness_m=0.9,
            clay_k_m_per_day=1e-8 * 86400.0,
        )
    )
    assert found.reasons == {}
    assert found.cautions == ()


def test_better_clay_leaks_less():
    """Oracle: handbook 9.3 is proportional to the clay's conductivity."""
    tested = judged("B", practice=Practice(clay_k_m_per_s=1e-9))
    assert tested.leakage_m3_per_day == pytest.approx(0.1 * judged("B").leakage_m3_per_day)


def test_specific_yield_by_default_is_told():
    """Oracle: default 0.15 of handbook 12 against 0.18, storage is proportional."""
    found = judged("B", GroundWater(17.28, 0.004, None, 249.35))
    assert found.storage_m3 == pytest.approx(judged("B").storage_m3 * 0.15 / 0.18)
    assert [one.code for one in found.cautions] == ["default-used"]
    assert "0.15 of the volume is taken" in found.cautions[0].text


def test_nothing_measured_is_nothing_known():
    """Oracle: the interface: null with a caution that says why, never zero."""
    found = judged("B", GroundWater(), Site("EX-B"))
    values = (
        found.section_area_m2,
        found.underflow_m3_per_day,
        found.storage_m3,
        found.leakage_m3_per_day,
    )
    assert values == (None,) * 4
    level = "ground_water.water_level_m"
    assert found.reasons == {
        "section_area_m2": f"{level} not given",
        "underflow_m3_per_day": (
            "ground_water.hydraulic_conductivity_m_per_day, ground_water.gradient, "
            f"{level} not given"
        ),
        "storage_m3": f"{level}, site.bed_slope not given",
        "leakage_m3_per_day": f"{level} not given",
    }
    assert [one.code for one in found.cautions] == ["water-not-known"] * 3
    assert found.cautions[0] == caution(
        "water-not-known",
        what="Saturated section, leakage through the clay",
        why=f"{level} not given",
    )


def test_what_is_missing_is_named_alone():
    """Oracle: the interface: underflow needs conductivity, gradient and water level."""
    found = judged("B", GroundWater(17.28, None, 0.18, 249.35))
    assert found.reasons == {"underflow_m3_per_day": "ground_water.gradient not given"}


def test_an_open_flank_has_no_leakage():
    """Oracle: the interface; example C is open on the right."""
    found = judged("C", GroundWater(17.28, 0.004, 0.18, 74.0))
    assert found.leakage_m3_per_day is None
    assert "flank is open" in found.reasons["leakage_m3_per_day"]
    assert found.storage_m3 > 0.0


def test_water_over_the_crest_stores_nothing_more():
    """Oracle: handbook 9.9 over an empty interval, said in words."""
    found = judged("B", GroundWater(17.28, 0.004, 0.18, 249.55))
    assert (found.storage_m3, found.leakage_m3_per_day) == (0.0, 0.0)
    assert [one.code for one in found.cautions] == ["storage-none"]
    assert "249.55 m already, at or above the crest at 249.40 m" in found.cautions[0].text


def test_water_under_all_rock_wets_nothing():
    """Oracle: an empty section; a value of 0, since it is known."""
    found = judged("B", GroundWater(17.28, 0.004, 0.18, 240.0))
    assert (found.section_area_m2, found.underflow_m3_per_day) == (0.0, 0.0)


def test_without_a_rock_line_nothing_is_known():
    """Oracle: the interface."""
    case = example("B")
    pack = SurveyPack(SITE, case.ground, case.toes, ground_water=MEASURED)
    found = judge_water(pack, RockLine("none", [], []), None)
    assert set(found.reasons.values()) == {NO_ROCK}
    assert len(found.reasons) == 4
    assert [one.code for one in found.cautions] == ["water-not-known"]


def test_a_set_specific_yield_counts_where_none_was_measured():
    """Oracle: handbook 9.9, in proportion to Sy; what was measured goes before it."""
    water = replace(MEASURED, specific_yield=None)
    plain, set_ = judged("B", water), judged("B", water, practice=Practice(specific_yield=0.30))
    assert set_.storage_m3 == pytest.approx(2.0 * plain.storage_m3)
    assert [one.text for one in set_.cautions] == [
        "Specific yield was not measured: 0.3 of the volume is taken (setting)."
    ]
    assert judged("B", practice=Practice(specific_yield=0.30)).storage_m3 == judged("B").storage_m3
