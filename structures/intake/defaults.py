"""Defaults of the engineering handbook, section 12: value, accepted range, source mark, owner.

Source marks: C common practice, A decision of this project, M from memory (never a test oracle),
P n published source n. Owner: E a licensed engineer, D the district office, P the programme manager.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, Literal

UNSPOKEN: Final = ("-", "amount")  # units that are not written behind a figure


@dataclass(frozen=True, slots=True)
class Default:
    """One default with the range that is accepted in its place.

    `value` is None where the office has to say it itself; `unset` says what holds until then.
    """

    key: str
    value: float | None
    unit: str
    low: float
    high: float
    source: str
    owner: Literal["E", "D", "P"]
    words: str
    whole: bool = False
    unset: str = ""

    def written(self, value: float) -> str:
        """Write a value with its unit as it is typed: no digit lost, amounts in full."""
        unit = "" if self.unit in UNSPOKEN else f" {self.unit}"
        return f"{value:.15g}{unit}"


def _table(*rows: Default) -> dict[str, Default]:
    return {row.key: row for row in rows}


# Keys that a survey pack may override in its `wall` object.
WALL: Final = _table(
    Default("thickness_m", 0.90, "m", 0.60, 1.50, "C", "E", "wall thickness"),
    Default("crest_below_bed_m", 0.30, "m", 0.15, 1.00, "C", "E", "cover, crest below bed"),
    Default("key_m", 0.15, "m", 0.10, 0.60, "A", "E", "rock key"),
    Default("side_slope", 2.0, "across per 1 up", 1.0, 3.0, "C", "E", "side slope of the trench"),
    Default("bottom_margin_m", 0.15, "m", 0.10, 0.60, "A", "D", "trench margin each side"),
    Default("lift_m", 1.5, "m", 1.0, 2.0, "C", "D", "lift of excavation"),
    Default("film_faces", 2, "-", 0, 2, "C", "E", "film faces", whole=True),
    Default("film_width_m", 6.0, "m", 1.0, 8.0, "A", "D", "film roll width"),
    Default("film_lap_m", 0.30, "m", 0.10, 0.50, "A", "D", "film lap"),
    Default("film_anchor_m", 0.30, "m", 0.15, 1.00, "A", "D", "film anchor at the bottom"),
    Default("film_fold_m", 0.30, "m", 0.15, 1.00, "A", "D", "film fold at the top"),
    Default("surplus_bulking", 1.25, "-", 1.0, 1.6, "M", "D", "bulking of the surplus"),
    Default("borrow_factor", 1.25, "-", 1.0, 1.6, "M", "D", "clay at the borrow per clay in place"),
    Default("loose_factor", 1.50, "-", 1.1, 2.0, "M", "D", "loose clay per clay in place"),
    Default("clay_waste", 0.05, "-", 0.0, 0.20, "A", "D", "clay wasted"),
    Default("marker_spacing_m", 10.0, "m", 5.0, 25.0, "A", "D", "marker spacing"),
    Default("observation_pipes", 2, "each", 2, 100, "A", "D", "observation pipes", whole=True),
)

# What the calculations use beside the wall; numerics take these as arguments. A test of the rock is
# never taken as surer than here, so a standard error has its default as its lowest value.
GROUND: Final = _table(
    Default("sounding_noise", 0.03, "-", 0.01, 0.10, "A", "P", "noise of a sounding reading"),
    Default("sounding_segment_sd", 0.05, "-", 0.02, 0.2, "A", "E", "factor of a segment, log sd"),
    Default("sounding_chi_square", 1.5, "-", 1.2, 2.0, "A", "E", "limit of chi-square per degree"),
    Default("sounding_starts", 8, "-", 8, 64, "A", "E", "starts of an inversion", whole=True),
    Default(
        "rock_least_ohm_m", 300.0, "ohm m", 100.0, 3000.0, "A", "E", "least resistivity of rock"
    ),
    Default("rock_least_ratio", 3.0, "-", 2.0, 20.0, "A", "E", "rock over the layer above"),
    Default("rock_share", 0.90, "-", 0.8, 0.99, "A", "E", "share of the ensemble that shows rock"),
    Default("rock_range_m", 20.0, "m", 5.0, 100.0, "A", "E", "range of the rock line"),
    Default("rock_least_sill_m2", 1.0, "m2", 0.1, 25.0, "A", "E", "least sill of the rock line"),
    Default("risk_draws", 2000, "-", 2000, 100000, "A", "P", "draws of the rock line", whole=True),
    Default("misclosure_mm", 12.0, "mm per root km", 5.0, 25.0, "P 1", "P", "level misclosure"),
    Default("reciprocity_ms", 2.0, "ms", 0.5, 5.0, "A", "P", "refraction reciprocity"),
    Default("se_pit_m", 0.05, "m", 0.05, 5.0, "A", "E", "error of rock seen in a pit"),
    Default("se_core_m", 0.10, "m", 0.10, 5.0, "A", "E", "error of rock met in a core bore"),
    Default("se_well_m", 0.20, "m", 0.20, 5.0, "A", "E", "error of rock known from an open well"),
    Default("se_refraction_m", 0.5, "m", 0.5, 10.0, "A", "E", "error of refraction, at least"),
    Default(
        "se_refraction_share", 0.10, "of depth", 0.10, 0.5, "A", "E", "error of refraction, share"
    ),
    Default("se_sounding_m", 0.75, "m", 0.75, 10.0, "A", "E", "error of a sounding, at least"),
    Default(
        "se_sounding_share", 0.15, "of depth", 0.15, 0.5, "A", "E", "error of a sounding, share"
    ),
)

WATER: Final = _table(
    Default("specific_yield", 0.15, "-", 0.05, 0.30, "M", "E", "specific yield"),
    Default("clay_k_m_per_s", 1e-8, "m/s", 1e-10, 1e-8, "M", "E", "clay in place, at most"),
    Default("sichardt_c", 2000.0, "s^0.5 m^-0.5", 1500.0, 3000.0, "M", "E", "Sichardt's factor"),
    Default("first_stage_factor", 1.30, "-", 1.0, 2.0, "P 2", "E", "first stage of pumping"),
    Default("drawdown_hours", 240.0, "h", 48.0, 1000.0, "A", "E", "hours of the first stage"),
    Default("pump_m3_per_hour", 20.0, "m3/h", 1.0, 500.0, "A", "D", "capacity of one pump"),
    Default("pump_efficiency", 0.50, "-", 0.2, 0.8, "A", "D", "efficiency of pump and engine"),
    Default("downstream_limit_percent", 20.0, "%", 5.0, 30.0, "A", "E", "downstream share limit"),
)

GANG_DAY: Final = "a gang and day"
WORKS: Final = _table(
    Default(
        "depth_without_entry_m", 1.2, "m", 0.9, 1.2, "A", "E", "depth nobody enters unsupported"
    ),
    Default(
        "licensed_depth_m", 6.1, "m", 1.5, 6.1, "P 13", "E", "depth that asks for a licensed design"
    ),
    Default("film_thickness_micron", 200, "micron", 150, 500, "C", "E", "film thickness"),
    Default("trodden_least_m", 0.15, "m", 0.10, 0.25, "C", "E", "trodden layer of clay, thinnest"),
    Default("trodden_most_m", 0.20, "m", 0.10, 0.25, "C", "E", "trodden layer of clay, thickest"),
    Default(
        "clay_liquid_limit_percent", 50.0, "%", 50.0, 90.0, "C", "E", "clay liquid limit, above"
    ),
    Default("clay_pit_from_bund_m", 50.0, "m", 50.0, 1000.0, "C", "E", "clay pit from a tank bund"),
    Default("strip_m", 6.0, "m", 3.0, 15.0, "C", "D", "length of a strip"),
    Default("season_reserve_days", 10, "days", 0, 90, "C", "D", "days kept in reserve", whole=True),
    Default(
        "progress_excavation_m3_per_day",
        80.0,
        f"m3 {GANG_DAY}",
        16.0,
        400.0,
        "A",
        "D",
        "progress in digging",
    ),
    Default(
        "progress_rock_key_m3_per_day",
        1.5,
        f"m3 {GANG_DAY}",
        0.3,
        7.5,
        "A",
        "D",
        "progress in the key",
    ),
    Default(
        "progress_clay_m3_per_day", 10.0, f"m3 {GANG_DAY}", 2.0, 50.0, "A", "D", "progress in clay"
    ),
    Default(
        "progress_film_m2_per_day",
        100.0,
        f"m2 {GANG_DAY}",
        20.0,
        500.0,
        "A",
        "D",
        "progress in film",
    ),
    Default(
        "progress_backfill_m3_per_day",
        120.0,
        f"m3 {GANG_DAY}",
        24.0,
        600.0,
        "A",
        "D",
        "progress in backfill",
    ),
)

# Percentages that a rate schedule carries itself; these count where one lacks them.
MONEY: Final = _table(
    Default("contingency_percent", 5.0, "%", 0.0, 15.0, "P 9", "P", "contingency"),
    Default("overhead_percent", 2.0, "%", 0.0, 10.0, "A", "P", "overhead on the subtotal"),
)

RATES: Final = _table(
    Default("lead_step_m", 50.0, "m", 25.0, 100.0, "C", "D", "step of lead"),
    Default("lift_step_m", 1.5, "m", 1.0, 2.0, "C", "D", "step of lift"),
    Default(
        "rate_overhead_profit_percent", 10.0, "%", 0.0, 25.0, "A", "P", "overhead, profit in a rate"
    ),
    Default("rate_common_spread_percent", 8.0, "%", 0.0, 30.0, "A", "P", "common spread of rates"),
    Default("discount_rate_percent", 6.0, "%", 2.0, 15.0, "A", "P", "discount rate"),
    Default("life_years", 40, "years", 10, 60, "A", "P", "life of the wall", whole=True),
)

NOT_ENTERED: Final = "none entered"
AMOUNT_MOST: Final = 1e12  # project choice; a limit beyond it is a slip of the hand
OFFICE: Final = _table(
    Default(
        "technical_sanction_limit",
        None,
        "amount",
        0.0,
        AMOUNT_MOST,
        "A",
        "P",
        "limit of technical sanction by the district",
        unset=NOT_ENTERED,
    ),
    Default(
        "administrative_approval_limit",
        None,
        "amount",
        0.0,
        AMOUNT_MOST,
        "A",
        "P",
        "limit of administrative approval by the district",
        unset=NOT_ENTERED,
    ),
    Default(
        "excess_technical_percent", 5.0, "%", 0.0, 20.0, "A", "P", "excess over technical sanction"
    ),
    Default(
        "excess_administrative_percent", 10.0, "%", 0.0, 20.0, "P 9", "P", "excess over approval"
    ),
    Default(
        "second_factor_for_approvers",
        0,
        "0 no, 1 yes",
        0,
        1,
        "A",
        "P",
        "one-time code asked of those who approve",
        whole=True,
    ),
)

EFFECT: Final = _table(
    Default(
        "effect_least_full_years",
        2,
        "years",
        1,
        20,
        "A",
        "P",
        "full water years a side",
        whole=True,
    ),
    Default("effect_least_m", 0.30, "m", 0.05, 2.0, "A", "E", "least effect that matters"),
    Default("effect_confidence", 0.90, "-", 0.8, 0.99, "A", "P", "confidence of intervals"),
    Default("effect_least_pairs", 6, "pairs", 6, 60, "A", "P", "pairs a side, least", whole=True),
    Default(
        "effect_months_of_full_year",
        10,
        "months",
        8,
        12,
        "A",
        "P",
        "months of a full year",
        whole=True,
    ),
    Default(
        "serial_lag",
        None,
        "pairs",
        0,
        12,
        "M",
        "P",
        "serial-correlation lag",
        whole=True,
        unset="floor(4 (n/100)^(2/9))",
    ),
)

# Figures of the handbook that no office changes; `LEAST_SLOPE` below is one of them.
FIXED: Final = _table(
    Default(
        "design_line_percent", 50.0, "%", 50.0, 50.0, "A", "P", "rock deeper than the design line"
    ),
    Default("risk_line_percent", 10.0, "%", 10.0, 10.0, "A", "P", "rock deeper than the risk line"),
    Default(
        "least_side_slope",
        1.5,
        "across per 1 up",
        1.5,
        1.5,
        "C",
        "E",
        "steepest side slope without a signed support design",
    ),
    Default("spoil_least_m", 1.5, "m", 1.5, 1.5, "A", "E", "spoil from the edge, at least"),
    Default(
        "spoil_depth_share",
        0.5,
        "of depth",
        0.5,
        0.5,
        "A",
        "E",
        "spoil from the edge, where farther",
    ),
)

GROUPS: Final[dict[str, dict[str, Default]]] = {
    "Wall and trench": WALL,
    "Rock and soundings": GROUND,
    "Water and pumping": WATER,
    "Work on site": WORKS,
    "Estimate": MONEY,
    "Rates and worth": RATES,
    "Sanction and approval": OFFICE,
    "Effect of a wall": EFFECT,
}
EVERY: Final[dict[str, Default]] = {
    key: default for table in GROUPS.values() for key, default in table.items()
}

LEAST_SLOPE: Final = FIXED[
    "least_side_slope"
].value  # across per 1 up; under it a signed support design is named (handbook 12)
