"""Defaults, accepted ranges, source marks and owners: the table of handbook section 12."""

from __future__ import annotations

import pytest

from structures.intake.defaults import EVERY, FIXED, LEAST_SLOPE, WALL
from structures.intake.pack import WallSettings

# key: value, lowest and highest accepted, source mark, who may change it
HANDBOOK_12 = {
    "thickness_m": (0.90, 0.60, 1.50, "C", "E"),
    "film_faces": (2, 0, 2, "C", "E"),
    "crest_below_bed_m": (0.30, 0.15, 1.00, "C", "E"),
    "key_m": (0.15, 0.10, 0.60, "A", "E"),
    "bottom_margin_m": (0.15, 0.10, 0.60, "A", "D"),
    "side_slope": (2.0, 1.0, 3.0, "C", "E"),
    "lift_m": (1.5, 1.0, 2.0, "C", "D"),
    "film_width_m": (6.0, 1.0, 8.0, "A", "D"),
    "film_lap_m": (0.30, 0.10, 0.50, "A", "D"),
    "film_anchor_m": (0.30, 0.15, 1.00, "A", "D"),
    "film_fold_m": (0.30, 0.15, 1.00, "A", "D"),
    "borrow_factor": (1.25, 1.0, 1.6, "M", "D"),
    "loose_factor": (1.50, 1.1, 2.0, "M", "D"),
    "clay_waste": (0.05, 0.0, 0.20, "A", "D"),
    "surplus_bulking": (1.25, 1.0, 1.6, "M", "D"),
    "marker_spacing_m": (10.0, 5.0, 25.0, "A", "D"),
    "clay_k_m_per_s": (1e-8, 1e-10, 1e-8, "M", "E"),
    "specific_yield": (0.15, 0.05, 0.30, "M", "E"),
    "sichardt_c": (2000.0, 1500.0, 3000.0, "M", "E"),
    "first_stage_factor": (1.30, 1.0, 2.0, "P 2", "E"),
    "pump_m3_per_hour": (20.0, 1.0, 500.0, "A", "D"),
    "drawdown_hours": (240.0, 48.0, 1000.0, "A", "E"),
    "misclosure_mm": (12.0, 5.0, 25.0, "P 1", "P"),
    "sounding_noise": (0.03, 0.01, 0.10, "A", "P"),
    "sounding_chi_square": (1.5, 1.2, 2.0, "A", "E"),
    "sounding_starts": (8, 8, 64, "A", "E"),
    "rock_share": (0.90, 0.8, 0.99, "A", "E"),
    "sounding_segment_sd": (0.05, 0.02, 0.2, "A", "E"),
    "rock_least_ohm_m": (300.0, 100.0, 3000.0, "A", "E"),
    "rock_least_ratio": (3.0, 2.0, 20.0, "A", "E"),
    "rock_range_m": (20.0, 5.0, 100.0, "A", "E"),
    "rock_least_sill_m2": (1.0, 0.1, 25.0, "A", "E"),
    "risk_draws": (2000, 2000, 100000, "A", "P"),
    "reciprocity_ms": (2.0, 0.5, 5.0, "A", "P"),
    "contingency_percent": (5.0, 0.0, 15.0, "P 9", "P"),
    "overhead_percent": (2.0, 0.0, 10.0, "A", "P"),
    "observation_pipes": (2, 2, 100, "A", "D"),
    "film_thickness_micron": (200, 150, 500, "C", "E"),
    "trodden_least_m": (0.15, 0.10, 0.25, "C", "E"),
    "trodden_most_m": (0.20, 0.10, 0.25, "C", "E"),
    "clay_liquid_limit_percent": (50.0, 50.0, 90.0, "C", "E"),
    "pump_efficiency": (0.50, 0.2, 0.8, "A", "D"),
    "se_pit_m": (0.05, 0.05, 5.0, "A", "E"),
    "se_core_m": (0.10, 0.10, 5.0, "A", "E"),
    "se_well_m": (0.20, 0.20, 5.0, "A", "E"),
    "se_refraction_m": (0.5, 0.5, 10.0, "A", "E"),
    "se_refraction_share": (0.10, 0.10, 0.5, "A", "E"),
    "se_sounding_m": (0.75, 0.75, 10.0, "A", "E"),
    "se_sounding_share": (0.15, 0.15, 0.5, "A", "E"),
    "lead_step_m": (50.0, 25.0, 100.0, "C", "D"),
    "rate_overhead_profit_percent": (10.0, 0.0, 25.0, "A", "P"),
    "excess_technical_percent": (5.0, 0.0, 20.0, "A", "P"),
    "excess_administrative_percent": (10.0, 0.0, 20.0, "P 9", "P"),
    "discount_rate_percent": (6.0, 2.0, 15.0, "A", "P"),
    "life_years": (40, 10, 60, "A", "P"),
    "downstream_limit_percent": (20.0, 5.0, 30.0, "A", "E"),
    "effect_least_full_years": (2, 1, 20, "A", "P"),
    "effect_least_m": (0.30, 0.05, 2.0, "A", "E"),
    "effect_confidence": (0.90, 0.8, 0.99, "A", "P"),
    "effect_least_pairs": (6, 6, 60, "A", "P"),
    "effect_months_of_full_year": (10, 8, 12, "A", "P"),
    "serial_lag": (None, 0, 12, "M", "P"),
    "progress_excavation_m3_per_day": (80.0, 16.0, 400.0, "A", "D"),
    "progress_rock_key_m3_per_day": (1.5, 0.3, 7.5, "A", "D"),
    "progress_clay_m3_per_day": (10.0, 2.0, 50.0, "A", "D"),
    "progress_film_m2_per_day": (100.0, 20.0, 500.0, "A", "D"),
    "progress_backfill_m3_per_day": (120.0, 24.0, 600.0, "A", "D"),
    "clay_pit_from_bund_m": (50.0, 50.0, 1000.0, "C", "E"),
    "depth_without_entry_m": (1.2, 0.9, 1.2, "A", "E"),
    "licensed_depth_m": (6.1, 1.5, 6.1, "P 13", "E"),
    "rate_common_spread_percent": (8.0, 0.0, 30.0, "A", "P"),
}


@pytest.mark.parametrize("key", HANDBOOK_12)
def test_each_default_is_the_handbook_s(key):
    """Oracle: handbook section 12, as a definition ("the default equals this")."""
    found = EVERY[key]
    assert (found.value, found.low, found.high, found.source, found.owner) == HANDBOOK_12[key]


def test_every_default_lies_in_its_own_range():
    said = [one for one in EVERY.values() if one.value is not None]
    assert all(one.low <= one.value <= one.high for one in said)
    assert all(one.unset for one in EVERY.values() if one.value is None)


def test_amounts_are_written_in_full():
    limit = EVERY["technical_sanction_limit"]
    assert limit.written(2_500_000.5) == "2500000.5"
    assert EVERY["clay_k_m_per_s"].written(1e-9) == "1e-09 m/s"
    assert EVERY["effect_confidence"].written(0.95) == "0.95"


def test_a_wall_without_overrides_is_the_table():
    plain = WallSettings()
    for key, default in WALL.items():
        value = getattr(plain, key)
        assert (value[0].slope if key == "side_slope" else value) == default.value
    assert plain.changed == ()


def test_the_two_limits_of_safety():
    """Oracle: handbook section 12: side slope blocked under 1.5, licensed design over 6.1 m."""
    assert (LEAST_SLOPE, EVERY["licensed_depth_m"].value) == (1.5, 6.1)


def test_what_no_office_changes():
    """Oracle: handbook section 12, rows of the two lines and of the spoil; "never less"."""
    assert [(one.key, one.value, one.low, one.high) for one in FIXED.values()] == [
        ("design_line_percent", 50.0, 50.0, 50.0),
        ("risk_line_percent", 10.0, 10.0, 10.0),
        ("least_side_slope", 1.5, 1.5, 1.5),
        ("spoil_least_m", 1.5, 1.5, 1.5),
        ("spoil_depth_share", 0.5, 0.5, 0.5),
    ]
    assert not FIXED.keys() & EVERY.keys()
