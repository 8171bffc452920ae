"""Inflow to the trench and pump hours."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad

from structures.intake.pack import GroundWater, Works
from structures.intake.practice import Practice
from structures.takeoff.dewatering import (
    count_pumps,
    plan_pumping,
    pump_power_kw,
    sichardt_reach_m,
    slot_inflow_m2_per_s,
    slot_storage_m3_per_m,
    trench_inflow,
)
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from tests.structures.wall.examples import example, printed

K = 2e-4  # m/s, check value 6.c
HEAD_M, FOOT_M = 5.45, 0.30  # check value 6.c
MEASURED = GroundWater(
    hydraulic_conductivity_m_per_day=K * 86400, specific_yield=0.15, water_level_m=249.35
)


def cutoff_b(*shifts):
    case = example("B")
    lines = [[z + shift for z in case.rock_z] for shift in shifts or (0.0,)]
    return cut(make_section(case.ground, case.toes, case.rock_x, lines, case.wall))


def test_reach_and_inflow_of_a_slot():
    """Oracle: check value 6.c."""
    reach = sichardt_reach_m(HEAD_M, FOOT_M, K, 2000.0)
    assert reach == printed("145.6640")
    flow = slot_inflow_m2_per_s(HEAD_M, FOOT_M, K, reach)
    assert flow == pytest.approx(4.065864e-05, abs=0.5e-11)


@pytest.mark.parametrize(
    ("c", "flow"), [(1500.0, "10.53872"), (2000.0, "7.90404"), (3000.0, "5.26936")]
)
def test_inflow_of_the_whole_trench(c, flow):
    """Oracle: check values 6.d and 6.f."""
    reach = sichardt_reach_m(HEAD_M, FOOT_M, K, c)
    assert slot_inflow_m2_per_s(HEAD_M, FOOT_M, K, reach) * 54.0 * 3600.0 == printed(flow)


def test_first_stage_by_the_factor():
    """Oracle: check value 6.d, 1.30 x the middle figure."""
    inflow = trench_inflow(HEAD_M, 54.0, k_m_per_s=K, specific_yield=0.15)
    assert 1.30 * inflow.steady_m3_per_h == printed("10.27525")
    assert inflow.steady_most_m3_per_h == printed("10.53872")
    assert inflow.steady_least_m3_per_h == printed("5.26936")


def test_water_stored_above_the_parabola():
    """Oracle: check value 6.h, and the Dupuit parabola integrated by quadrature."""
    reach = float(sichardt_reach_m(HEAD_M, FOOT_M, K, 2000.0))
    stored = slot_storage_m3_per_m(HEAD_M, FOOT_M, reach, 0.15)
    assert stored == printed("78.93089")

    def above_m(x):
        return HEAD_M - np.sqrt(FOOT_M**2 + (HEAD_M**2 - FOOT_M**2) * x / reach)

    one_side, _ = quad(above_m, 0.0, reach)
    assert stored == pytest.approx(2 * 0.15 * one_side, rel=1e-9)


def test_first_stage_with_the_stored_water():
    """Oracle: check value 6.i; 2 pumps of 20 m3/h run."""
    inflow = trench_inflow(HEAD_M, 54.0, k_m_per_s=K, specific_yield=0.15)
    assert inflow.first_stage_m3_per_h == printed("31.90853")
    assert count_pumps(inflow.first_stage_m3_per_h, 20.0) == 2


def test_the_factor_rules_where_little_is_stored():
    """Oracle: 1.30 x check value 6.f at C = 1500, with no water in the pores."""
    inflow = trench_inflow(HEAD_M, 54.0, k_m_per_s=K, specific_yield=0.0)
    assert inflow.first_stage_m3_per_h == pytest.approx(1.30 * 10.53872, rel=1e-6)


def test_power_and_energy():
    """Oracle: check value 6.e."""
    power = pump_power_kw(7.90404 / 3600.0, 8.0, 0.5)
    assert power == printed("0.344616")
    assert power * 480.0 == printed("165.4157")


@pytest.mark.parametrize("efficiency", [0.0, -0.5, 1.2])
def test_an_impossible_efficiency_is_refused(efficiency):
    with pytest.raises(ValueError, match="efficiency"):
        pump_power_kw(0.002, 8.0, efficiency)


@given(st.floats(0.301, 20.0), st.floats(1e-6, 1e-2))
def test_inflow_is_inverse_to_the_reach(head_m, k):
    """Law: handbook 6.8, for a slot twice the reach is half the flow."""
    near = slot_inflow_m2_per_s(head_m, FOOT_M, k, 50.0)
    far = slot_inflow_m2_per_s(head_m, FOOT_M, k, 100.0)
    assert near == pytest.approx(2.0 * far)


def test_water_under_the_rock_brings_no_inflow():
    inflow = trench_inflow([-1.0, 0.3], [54.0, 54.0], k_m_per_s=K, specific_yield=0.15)
    for flow in (inflow.steady_m3_per_h, inflow.first_stage_m3_per_h, inflow.reach_m):
        assert flow.tolist() == [0.0, 0.0]


def test_planned_hours_are_taken_as_they_are():
    """Oracle: example B, 480 hours; the inflow is told beside them."""
    pumping = plan_pumping(
        cutoff_b(), MEASURED, Works(pump_hours=480.0, days_below_water=3.0, pump_m3_per_hour=5.0)
    )
    assert pumping.hours.tolist() == [480.0]
    assert pumping.working == "as planned in works.pump_hours"
    assert pumping.why == ""
    assert pumping.inflow.head_m[0] == pytest.approx(HEAD_M)
    assert pumping.pumps.tolist() == [7]  # 31.9 over 5
    dry = plan_pumping(cutoff_b(), GroundWater(), Works(pump_hours=0.0))
    assert dry.hours.tolist() == [0.0]
    assert dry.inflow is None


def test_hours_from_days_below_water():
    """Oracle: handbook 6.11 with check value 6.i: 24 h x 10 days x 2 pumps."""
    pumping = plan_pumping(cutoff_b(), MEASURED, Works(days_below_water=10.0))
    assert pumping.hours.tolist() == [480.0]
    assert pumping.working == (
        "24 h x 10 days x 2 pumps running at 20 m3/h (1 more standing by); first stage 31.9, "
        "steady 7.9 (5.3 to 10.5) m3/h"
    )


def test_specific_yield_falls_back_to_the_default():
    """Oracle: handbook 12, 0.15, which is that of check value 6.i."""
    water = GroundWater(hydraulic_conductivity_m_per_day=K * 86400, water_level_m=249.35)
    pumping = plan_pumping(cutoff_b(), water, Works())
    assert pumping.inflow.first_stage_m3_per_h[0] == printed("31.90853")
    assert pumping.hours is None


@pytest.mark.parametrize(("c", "steady"), [(1500.0, "10.53872"), (3000.0, "5.26936")])
def test_the_middle_figure_is_that_of_the_set_factor(c, steady):
    """Oracle: check value 6.f; the first stage keeps both ends of the range (6.i)."""
    practice = Practice(sichardt_c=c)
    inflow = plan_pumping(cutoff_b(), MEASURED, Works(), practice=practice).inflow
    assert inflow.steady_m3_per_h[0] == printed(steady)
    assert inflow.steady_most_m3_per_h[0] == printed("10.53872")
    assert inflow.steady_least_m3_per_h[0] == printed("5.26936")
    assert inflow.first_stage_m3_per_h[0] == printed("31.90853")


STORED_M3_PER_M = 78.93089  # check value 6.h, with C = 2000; in proportion to the factor


@pytest.mark.parametrize(
    ("practice", "first_stage"),
    [
        # Longer for the drawdown: C = 3000, its steady inflow and what is stored over 480 h.
        (Practice(drawdown_hours=480.0), 5.26936 + 1.5 * STORED_M3_PER_M * 54 / 480),
        # So long that the factor on the steady inflow of C = 1500 is the larger.
        (Practice(drawdown_hours=1000.0, first_stage_factor=2.0), 2.0 * 10.53872),
        # Twice the specific yield: twice what is stored.
        (Practice(specific_yield=0.30), 5.26936 + 2.0 * 1.5 * STORED_M3_PER_M * 54 / 240),
    ],
)
def test_first_stage_follows_what_is_set(practice, first_stage):
    """Oracle: handbook 6.8 and 6.9 by hand from check values 6.f and 6.h, 54 m."""
    water = GroundWater(hydraulic_conductivity_m_per_day=K * 86400, water_level_m=249.35)
    pumping = plan_pumping(cutoff_b(), water, Works(), practice=practice)
    assert pumping.inflow.first_stage_m3_per_h[0] == pytest.approx(first_stage, rel=1e-6)


def test_smaller_pumps_run_longer_hours_and_the_plan_goes_before_the_setting():
    """Oracle: handbook 6.11 with 6.i: 31.9 over 10 is 4 pumps, 24 h x 10 days x 4."""
    practice = Practice(pump_m3_per_hour=10.0)
    days = Works(days_below_water=10.0)
    pumping = plan_pumping(cutoff_b(), MEASURED, days, practice=practice)
    assert pumping.hours.tolist() == [960.0]
    assert "4 pumps running at 10 m3/h" in pumping.working
    planned = replace(days, pump_m3_per_hour=20.0)
    assert plan_pumping(cutoff_b(), MEASURED, planned, practice=practice).hours.tolist() == [480.0]


@pytest.mark.parametrize(
    ("water", "works", "lacking"),
    [
        (MEASURED, Works(), "works.pump_hours or works.days_below_water"),
        (
            GroundWater(water_level_m=249.35),
            Works(days_below_water=10.0),
            "ground_water.hydraulic_conductivity_m_per_day",
        ),
        (
            GroundWater(hydraulic_conductivity_m_per_day=17.28),
            Works(days_below_water=10.0),
            "ground_water.water_level_m",
        ),
        (
            GroundWater(),
            Works(),
            (
                "works.pump_hours or works.days_below_water, "
                "ground_water.hydraulic_conductivity_m_per_day, ground_water.water_level_m"
            ),
        ),
    ],
)
def test_hours_that_are_not_known_say_what_is_lacking(water, works, lacking):
    pumping = plan_pumping(cutoff_b(), water, works)
    assert pumping.hours is None
    assert pumping.why == f"not given: {lacking}"


def test_every_draw_has_its_own_hours():
    """Law: the same lines one at a time."""
    shifts, works = (-2.0, 0.0, 2.0, 5.0), Works(days_below_water=10.0)
    together = plan_pumping(cutoff_b(*shifts), MEASURED, works)
    alone = [plan_pumping(cutoff_b(shift), MEASURED, works).hours[0] for shift in shifts]
    assert together.hours.tolist() == alone
    assert (np.diff(together.hours) <= 0.0).all()  # higher rock, less water
