"""Quantities in item order and the measurement sheet that adds up to them."""

from dataclasses import replace
from decimal import ROUND_HALF_UP, Decimal

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.intake.pack import GroundWater, Works
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.quantity import ITEMS
from structures.takeoff.sheet import measure, measurement_sheet, quantities
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from tests.structures.wall.examples import ORACLE, cases, example, expected, printed, rock_bar

WORKS = (
    "rock_key_m3",
    "clay_m3",
    "clay_borrow_m3",
    "clay_loose_m3",
    "film_net_m2",
    "film_m2",
    "centering_m2",
    "surplus_m3",
    "face_area_m2",
    "length_m",
)


def measured(case):
    cutoff = cut(make_section(*case.parts))
    return cutoff, measure(cutoff, case.wall)


def through_the_gate(quantity):
    """Handbook 8.4: to six decimals, then to two, half away from zero."""
    sixth = Decimal(repr(quantity)).quantize(Decimal("0.000001"), ROUND_HALF_UP)
    return sixth.quantize(Decimal("0.01"), ROUND_HALF_UP)


def listed(case, works=None):
    cutoff, takings = measured(case)
    return quantities(takings, plan_pumping(cutoff, GroundWater(), works or Works()))


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_takings_of_the_worked_examples(name):
    """Oracle: handbook 13, check value 6.a."""
    _, takings = measured(example(name))
    wanted = expected(name)
    for key in WORKS:
        assert getattr(takings.works, key)[0] == printed(wanted[key]), key
    assert takings.backfill_m3[0] == printed(wanted["backfill_m3"])
    assert takings.markers[0] == float(wanted["markers"])
    assert takings.observation_pipes[0] == float(wanted["observation_pipes"])


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_quantities_of_the_worked_examples(name):
    """Oracle: the priced lists of handbook 13: same lines, same order, to 0.01 exactly."""
    given_ = ORACLE["examples"][name]
    lines = listed(example(name), Works(pump_hours=float(given_["pump_hours"])))
    wanted = given_["priced"]["lines"]
    assert [(q.item, q.unit, q.from_m, q.to_m) for q in lines] == [
        (line["item"], line["unit"], line["from_m"], line["to_m"]) for line in wanted
    ]
    assert [through_the_gate(q.quantity) for q in lines] == [
        Decimal(line["quantity"]) for line in wanted
    ]
    assert all(q.working for q in lines)
    assert {q.item for q in lines} == set(ITEMS)


def test_quantities_with_a_rock_bar():
    """Oracle: check value 5.g; the markers run over the bar, 53.333 m from end to end."""
    _, takings = measured(rock_bar())
    wanted = expected("5.g")
    assert takings.works.rock_key_m3[0] == printed(wanted["rock_key_m3"])
    assert takings.works.film_m2[0] == printed(wanted["film_m2"])
    assert takings.backfill_m3[0] == printed(wanted["backfill_m3"])
    assert takings.markers[0] == 7.0


def test_pump_hours_that_are_not_known_keep_their_line():
    (line,) = [q for q in listed(example("B")) if q.item == "dewatering"]
    assert line.quantity is None
    assert line.working.startswith("not given: works.pump_hours or works.days_below_water")


def test_a_lift_is_listed_when_it_rounds_above_nothing():
    """Oracle: handbook 8.4, by hand; the last lift of B is a wedge of 0.05 m and 0.03 m3.

    Rock 0.03 m higher leaves 0.02 m and a quarter of the length squared: under 0.005 m3.
    """
    case = example("B")
    assert [q.from_m for q in listed(case) if q.item == "excavation"][-1] == 6.0
    higher = case.with_rock(z + 0.03 for z in case.rock_z)
    _, takings = measured(higher)
    assert 0.0 < takings.excavation_m3[0, -1] < 0.005
    assert [q.from_m for q in listed(higher) if q.item == "excavation"][-1] == 4.5


def test_no_wall_means_no_quantities():
    """Oracle: rock over the bed everywhere; every quantity 0, no lift listed, no crash."""
    case = example("A").with_rock([104.0] * 6)
    lines = listed(case, Works(pump_hours=0.0))
    assert [q.item for q in lines] == [item for item in ITEMS if item != "excavation"]
    assert {q.quantity for q in lines} == {0.0}
    assert measurement_sheet(*measured(case)) == ()


@settings(max_examples=50)
@given(cases())
def test_rows_of_the_sheet_add_up_to_the_takings(case):
    """Law: an auditor who adds the rows finds the quantities."""
    cutoff, takings = measured(case)
    rows = measurement_sheet(cutoff, takings)
    for key in ("length_m", "face_area_m2", "rock_key_m3", "clay_m3", "film_m2", "centering_m2"):
        total = sum(getattr(row, key) for row in rows)
        assert total == pytest.approx(getattr(takings.works, key)[0], rel=1e-9, abs=1e-9), key
    assert sum(row.backfill_m3 for row in rows) == pytest.approx(
        takings.backfill_m3[0], rel=1e-9, abs=1e-9
    )
    by_lift = np.array([row.excavation_m3 for row in rows]).reshape(-1, takings.limits_m.size - 1)
    assert by_lift.sum(axis=0) == pytest.approx(takings.excavation_m3[0], rel=1e-9, abs=1e-7)


@settings(max_examples=50)
@given(cases())
def test_each_row_can_be_measured_again(case):
    """Oracle: the trapezium of each row's face and the order of its levels."""
    cutoff, takings = measured(case)
    last_m = cutoff.section.reach[0]
    for row in measurement_sheet(cutoff, takings):
        start, stop = row.start, row.stop
        assert start.offset_m >= last_m
        assert stop.offset_m - start.offset_m == pytest.approx(row.length_m)
        heights = (start.top_m - start.bottom_m) + (stop.top_m - stop.bottom_m)
        assert row.face_area_m2 == pytest.approx(row.length_m * heights / 2, rel=1e-9, abs=1e-9)
        for side in (start, stop):
            assert side.ground_m >= side.top_m - 1e-9
            assert side.top_m >= side.rock_m - 1e-9
            assert side.depth_m == pytest.approx(side.ground_m - side.rock_m)
        last_m = stop.offset_m


@settings(max_examples=50)
@given(cases(), st.lists(st.integers(0, 300), min_size=9, max_size=9))
def test_lower_rock_never_means_less_clay_or_film(case, drops):
    """Law: clay, film, key and centering grow or stay when the rock line is lowered."""
    lower = case.with_rock(z - drop / 100 for z, drop in zip(case.rock_z, drops, strict=False))
    before, after = measured(case)[1].works, measured(lower)[1].works
    for key in ("clay_m3", "film_m2", "rock_key_m3", "centering_m2"):
        assert getattr(after, key)[0] >= getattr(before, key)[0] - 1e-6, key


@settings(max_examples=50)
@given(cases())
def test_the_wall_is_smaller_than_what_is_dug(case):
    """Law: handbook 5.11; the wall stands in the trench and the chase, both wider or as wide."""
    _, takings = measured(case)
    dug_m3 = takings.excavation_m3[0].sum() + takings.works.rock_key_m3[0]
    assert takings.works.clay_m3[0] <= dug_m3 + 1e-9
    assert takings.backfill_m3[0] >= -1e-9


@pytest.mark.parametrize("name", ["A", "B", "C"])
def test_the_wall_of_the_examples_is_smaller_than_the_trench_alone(name):
    """Law: handbook 5.11."""
    _, takings = measured(example(name))
    assert takings.works.clay_m3[0] < takings.excavation_m3[0].sum()


@settings(max_examples=50)
@given(cases(), st.integers(0, 2**32 - 1))
def test_takings_of_draws_equal_those_of_single_lines(case, seed):
    """Law: one path, so each row of many draws is that line alone."""
    rng = np.random.default_rng(seed)
    lines = np.array(case.rock_z) + rng.normal(0.0, 2.0, size=(4, len(case.rock_z)))
    cutoff = cut(make_section(case.ground, case.toes, case.rock_x, lines, case.wall))
    together = measure(cutoff, case.wall)
    assert together.draws == 4
    for i, line in enumerate(lines):
        _, alone = measured(case.with_rock(line))
        for item, values in together.by_item.items():
            assert values[i] == pytest.approx(alone.by_item[item][0], rel=1e-12, abs=1e-12), item
        lifts = alone.excavation_m3.shape[1]
        assert together.excavation_m3[i, :lifts] == pytest.approx(
            alone.excavation_m3[0], rel=1e-9, abs=1e-9
        )
        assert together.excavation_m3[i, lifts:] == pytest.approx(0.0, abs=1e-9)


def test_many_draws_have_no_single_list():
    case = example("A")
    cutoff, takings = measured(replace(case, rock_z=(case.rock_z, case.rock_z)))
    pumping = plan_pumping(cutoff, GroundWater(), Works(pump_hours=0.0))
    with pytest.raises(ValueError, match="2 draws"):
        quantities(takings, pumping)
    with pytest.raises(ValueError, match="one rock line"):
        measurement_sheet(cutoff, takings)


def test_takings_cannot_be_changed():
    _, takings = measured(example("A"))
    with pytest.raises(ValueError, match="read-only"):
        takings.works.clay_m3[0] = 0.0
    with pytest.raises(ValueError, match="read-only"):
        takings.excavation_m3[0, 0] = 0.0
