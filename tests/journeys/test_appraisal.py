"""A survey all the way to its price: the worked examples, the three forms, the laws of the whole."""

from __future__ import annotations

import json
from dataclasses import replace
from datetime import date
from decimal import Decimal
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from costing.appraisal import appraise
from costing.documents.result import as_json
from costing.documents.screen import screen_text
from costing.price.rates import read_rates
from costing.risk import percentile, total_cents
from structures.errors import Refused
from structures.intake.district import read_district
from structures.intake.pack import (
    GroundPoint,
    GroundWater,
    Probe,
    RockLinePoint,
    RockTest,
    Site,
    SurveyPack,
    Toes,
    Works,
)
from structures.intake.pack_writer import write_csv, write_json, write_xlsx
from structures.intake.survey_pack import read_pack, read_pack_bytes
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.sheet import measure
from structures.wall.cutoff import cut
from structures.wall.section import make_section

FIXTURES = Path("fixtures")
ORACLE = json.loads(Path("tests/oracles/examples.json").read_text())
DAY = date(2026, 4, 10)
WALL_KEYS = (
    "bed_level_m",
    "crest_level_m",
    "closing_level_m",
    "left_end_m",
    "right_end_m",
    "length_m",
    "greatest_height_m",
    "greatest_depth_m",
    "greatest_depth_to_key_m",
    "face_area_m2",
    "face_above_rock_m2",
)


def rates(name="examples.csv"):
    return read_rates(name, (FIXTURES / "rates" / name).read_bytes())


def result_of(pack, schedule=None):
    return as_json(appraise(pack, schedule=schedule, on=DAY))


def example(letter):
    return read_pack(FIXTURES / "packs" / f"example-{letter.lower()}.json")


@pytest.mark.parametrize("letter", ["A", "B", "C"])
def test_worked_examples_digit_for_digit(letter):
    """Oracle: handbook section 13, geometry, quantities and every priced line."""
    printed = ORACLE["examples"][letter]
    found = result_of(example(letter), rates())
    for key in WALL_KEYS:
        digits = printed["results"][key]
        decimals = len(digits.partition(".")[2])
        assert found["wall"][key] == pytest.approx(float(digits), abs=0.5 * 10**-decimals), key
    assert found["wall"]["closed"] == {
        "left": printed["results"]["closed_left"],
        "right": printed["results"]["closed_right"],
    }
    assert found["clay_to_dig"]["borrow_m3"] == pytest.approx(
        float(printed["results"]["clay_borrow_m3"]), abs=5e-5
    )
    priced = printed["priced"]
    keys = ("item", "from_m", "to_m", "unit", "quantity", "rate", "amount")
    assert [{k: line[k] for k in keys} for line in found["estimate"]["lines"]] == [
        {k: line[k] for k in keys} for line in priced["lines"]
    ]
    for key in ("subtotal", "contingency", "overhead", "total", "sanction"):
        assert found["estimate"][key] == f"{Decimal(priced[key]):.2f}", key
    assert found["estimate"]["total_p50"] is None
    assert found["estimate"]["spread_note"] == "the rock line is settled and nothing varies"


def test_an_open_flank_makes_the_estimate_incomplete_and_leaves_the_sums():
    found = result_of(example("C"), rates())
    assert (found["estimate"]["complete"], found["estimate"]["total"]) == (False, "337716.02")
    cautions = {one["code"]: one for one in found["cautions"]}
    assert cautions["flank-open-right"]["level"] == "block"
    assert "the right flank is open" in cautions["estimate-incomplete"]["text"]
    assert found["water"]["leakage_m3_per_day"] is None
    assert found["cautions"][0]["level"] == "block"


def test_whole_line_shifts_give_the_printed_percentiles():
    """Oracle: check value 8.h, exact at three shifts, and by 2000 draws within 3 standard errors."""
    pack, printed = example("B"), rates()
    # The examples' rule "15.00 more per band", on to the deep draws.
    deeper = tuple(
        replace(printed.rates_of("excavation")[0], rate=Decimal(210 + 15 * i), from_m=7.5 + 1.5 * i)
        for i in range(3)
    )
    schedule = replace(printed, rates=(*printed.rates, *deeper))
    x = np.array([point.offset_m for point in pack.rock_line])
    z = np.array([point.level_m for point in pack.rock_line])

    def totals(shifts):
        lines = z + np.asarray(shifts)[:, None]
        cutoff = cut(make_section(pack.ground, pack.toes, x, lines, pack.wall))
        takings = measure(cutoff, pack.wall)
        hours = plan_pumping(cutoff, pack.ground_water, pack.works).hours
        return total_cents(
            takings.by_item | {"dewatering": hours},
            takings.excavation_m3,
            takings.limits_m[:-1],
            schedule,
        )

    exact = totals([-0.640776, 0.0, 0.640776])
    assert exact.tolist() == [89760241, 69376260, 52417763]
    drawn = totals(np.random.default_rng(11).normal(0.0, 0.5, 2000))
    for percent, oracle, errors in (
        (90, exact[0], 0.022),
        (50, exact[1], 0.018),
        (10, exact[2], 0.026),
    ):
        assert percentile(drawn, percent) == pytest.approx(oracle, rel=errors)


BORED = SurveyPack(
    Site("T-2", bed_slope=0.004),
    tuple(
        GroundPoint(x, z)
        for x, z in ((0, 104), (20, 100.5), (24, 100), (44, 100), (48, 101), (70, 104))
    ),
    Toes(24.0, 44.0),
    rock=(
        RockTest(0.0, 1.0, "pit", True),
        RockTest(30.0, 4.0, "bore", True),
        RockTest(40.0, 4.5, "bore", True),
        RockTest(70.0, 1.0, "pit", True),
    ),
    probes=(Probe(35.0, 4.4, True), Probe(15.0, 2.0, False)),
    ground_water=GroundWater(40.0, 0.004, 0.18, 98.9),
    works=Works(pump_hours=120.0),
)


def test_an_estimated_line_carries_its_doubt_to_the_price():
    found = result_of(BORED, rates())
    assert found["rock"]["source"] == "estimated"
    for point in found["rock"]["line"]:
        assert point["low_m"] <= point["level_m"] <= point["high_m"]
    estimate = found["estimate"]
    spread = [Decimal(estimate[key]) for key in ("total_p10", "total_p50", "total_p90")]
    assert spread == sorted(spread)
    assert spread[0] < Decimal(estimate["total"]) < spread[2]
    assert 0.0 <= estimate["open_flank_share"] <= 1.0
    assert estimate["draws"] == 2000
    assert result_of(BORED, rates()) == found


def test_without_levels_of_rock_nothing_is_invented():
    found = result_of(replace(BORED, rock=()), rates())
    assert found["rock"] | {"evidence": []} == {
        "source": "none",
        "line": [],
        "soundings": [],
        "refraction": [],
        "evidence": [],
        "seed": None,
    }
    assert [found[key] for key in ("wall", "quantities", "estimate")] == [None] * 3
    assert found["cautions"][0]["code"] == "rock-not-known"
    assert all(found["water"][key] is None for key in ("section_area_m2", "storage_m3"))


def test_without_rates_the_quantities_stand_alone():
    found = result_of(example("A"))
    assert found["estimate"] is None
    assert [one["item"] for one in found["quantities"]][:2] == ["excavation", "excavation"]


def test_an_unknown_line_keeps_its_place_and_is_named():
    """A line without a quantity is never a silent zero."""
    pack = replace(example("B"), works=Works())
    estimate = result_of(pack, rates())["estimate"]
    line = next(one for one in estimate["lines"] if one["item"] == "dewatering")
    assert (line["quantity"], line["rate"], line["amount"]) == (None, "36.00", None)
    known = sum(Decimal(one["amount"]) for one in estimate["lines"] if one["amount"])
    assert Decimal(estimate["subtotal"]) == known
    assert (estimate["complete"], estimate["sanction"], estimate["total_p50"]) == (
        False,
        None,
        None,
    )


def test_an_old_schedule_prices_with_a_caution():
    old = replace(rates("RS-2025-26.csv"), valid_to=date(2026, 4, 9))
    found = result_of(example("A"), old)
    assert "rates-out-of-date" in [one["code"] for one in found["cautions"]]
    assert found["estimate"]["total"] is not None
    on_the_last_day = replace(old, valid_to=DAY)
    codes = [one["code"] for one in result_of(example("A"), on_the_last_day)["cautions"]]
    assert "rates-out-of-date" not in codes


def test_water_of_the_first_step_by_hand():
    """Oracle: hand sums on a rectangle of rock: area 20 x 3, Q = K A i, V = Sy/I x integral."""
    box = SurveyPack(
        Site("T-3", bed_slope=0.01),
        (
            GroundPoint(0.0, 104.0),
            GroundPoint(10.0, 100.0),
            GroundPoint(30.0, 100.0),
            GroundPoint(40.0, 104.0),
        ),
        Toes(10.0, 30.0),
        rock_line=(
            RockLinePoint(0.0, 104.0),
            RockLinePoint(10.0, 96.0),
            RockLinePoint(30.0, 96.0),
            RockLinePoint(40.0, 104.0),
        ),
        ground_water=GroundWater(30.0, 0.004, 0.2, 99.0),
        works=Works(pump_hours=0.0),
    )
    water = result_of(box)["water"]
    # Sides rise 0.8 m a metre: at height h over the foot the width is 20 + 2 h / 0.8.
    area = 20 * 3 + 3 * 3 / 0.8
    assert water["section_area_m2"] == pytest.approx(area)
    assert water["underflow_m3_per_day"] == pytest.approx(30 * area * 0.004)

    def below(h):  # integral of 20 h + h^2 / 0.8
        return 10 * h**2 + h**3 / 2.4

    # Gained is what lies above the former water, which rises upstream with the bed.
    gained = below(3.7) - below(3.0) - 0.7 * area
    assert water["storage_m3"] == pytest.approx(0.2 / 0.01 * gained)


@pytest.mark.parametrize("code", ["OD-01", "TA-02", "BI-03"])
def test_one_meaning_in_every_form(code, tmp_path):
    """Law: JSON, CSV folder and XLSX of the same pack give the same result."""
    pack = read_district(FIXTURES / "demo")[code]
    folder = tmp_path / code
    folder.mkdir()
    for name, data in write_csv(pack).items():
        (folder / name).write_bytes(data)
    forms = [
        read_pack_bytes("pack.json", write_json(pack)),
        read_pack(folder),
        read_pack_bytes("pack.xlsx", write_xlsx(pack)),
    ]
    assert forms[0] == forms[1] == forms[2]
    # Equal packs have equal soundings; reading each of them three times over proves nothing more.
    schedule = rates("RS-2025-26.csv")
    plain = [replace(form, soundings=(), findings=()) for form in forms]
    found = [appraise(form, schedule=schedule, on=DAY) for form in plain]
    assert len({one.digest for one in found}) == 1
    results = [as_json(one) for one in found]
    assert results[0] == results[1] == results[2]


@st.composite
def sections(draw):
    """A settled section of any shape between two banks."""
    count = draw(st.integers(5, 9))
    x = sorted(draw(st.lists(st.integers(1, 79), min_size=count, max_size=count, unique=True)))
    ground = [100 + draw(st.integers(0, 300)) / 100 for _ in x]
    rock = [z - draw(st.integers(0, 700)) / 100 for z in ground]
    toes = draw(
        st.tuples(st.integers(0, count - 2), st.integers(1, count - 1)).filter(
            lambda t: t[0] < t[1]
        )
    )
    return SurveyPack(
        Site("H-1", bed_slope=0.01),
        tuple(GroundPoint(float(a), b) for a, b in zip(x, ground, strict=True)),
        Toes(float(x[toes[0]]), float(x[toes[1]])),
        rock_line=tuple(RockLinePoint(float(a), b) for a, b in zip(x, rock, strict=True)),
        ground_water=GroundWater(40.0, 0.004, 0.18, 99.0),
        works=Works(pump_hours=10.0),
    )


@settings(max_examples=40)
@given(sections())
def test_any_section_gets_a_result_whose_lines_add_up(pack):
    """Law: printed lines add up to the printed subtotal, and the sheet to the quantities."""
    found = appraise(pack, schedule=rates("RS-2025-26.csv"), on=DAY)
    result = as_json(found)
    estimate = result["estimate"]
    assert sum(Decimal(line["amount"]) for line in estimate["lines"]) == Decimal(
        estimate["subtotal"]
    )
    dug = sum(one["quantity"] for one in result["quantities"] if one["item"] == "excavation")
    rows = sum(sum(row.excavation_m3) for row in found.design.sheet)
    assert rows == pytest.approx(dug, abs=0.006 * 8)  # lifts under 0.005 m3 are not listed
    screen_text(result)
    json.dumps(result, allow_nan=False)


@settings(max_examples=40)
@given(sections())
def test_a_mirrored_survey_gives_the_mirrored_wall(pack):
    """Law: handbook 5.f."""
    width = pack.ground[-1].offset_m

    def turned(points, kind):
        return tuple(kind(width - p.offset_m, p.level_m) for p in reversed(points))

    mirrored = replace(
        pack,
        ground=turned(pack.ground, GroundPoint),
        rock_line=turned(pack.rock_line, RockLinePoint),
        toes=Toes(width - pack.toes.right_m, width - pack.toes.left_m),
    )
    there, back = result_of(pack), result_of(mirrored)
    assert back["wall"]["left_end_m"] == pytest.approx(width - there["wall"]["right_end_m"])
    assert back["wall"]["closed"] == {
        "left": there["wall"]["closed"]["right"],
        "right": there["wall"]["closed"]["left"],
    }
    for one, other in zip(there["quantities"], back["quantities"], strict=True):
        assert other["quantity"] == pytest.approx(one["quantity"], abs=1e-6)


@settings(max_examples=60)
@given(
    st.recursive(
        st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=8),
        lambda inner: (
            st.lists(inner, max_size=4)
            | st.dictionaries(
                st.sampled_from(
                    [
                        "pack",
                        "site",
                        "code",
                        "ground",
                        "offset_m",
                        "level_m",
                        "toes",
                        "left_m",
                        "right_m",
                        "rock",
                        "depth_m",
                        "wall",
                        "side_slope",
                    ]
                )
                | st.text(max_size=4),
                inner,
                max_size=5,
            )
        ),
        max_leaves=20,
    )
)
def test_any_json_document_gets_a_result_or_a_message(document):
    """Law: never anything but a pack or a refusal with findings."""
    text = json.dumps(document).encode()
    refusal = None
    try:
        pack = read_pack_bytes("any.json", text)
    except Refused as refused:
        refusal = refused
    if refusal is None:
        assert result_of(pack)["site"] == pack.site.code
    else:
        assert all(one.what and one.where for one in refusal.findings)
