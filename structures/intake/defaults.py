"""Defaults of the engineering handbook, section 12: value, accepted range, source mark, owner.

Source marks: C common practice, A decision of this project, M from memory (never a test oracle),
P n published source n. Owner: E a licensed engineer, D the district office, P the programme manager.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, Literal


@dataclass(frozen=True, slots=True)
class Default:
    """One default with the range that is accepted in its place."""

    key: str
    value: float
    unit: str
    low: float
    high: float
    source: str
    owner: Literal["E", "D", "P"]
    words: str
    whole: bool = False


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

# What the calculations use beside the wall; numerics take these as arguments.
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
)

WATER: Final = _table(
    Default("specific_yield", 0.15, "-", 0.05, 0.30, "M", "E", "specific yield"),
    Default("clay_k_m_per_s", 1e-8, "m/s", 1e-10, 1e-8, "M", "E", "clay in place, at most"),
    Default("sichardt_c", 2000.0, "s^0.5 m^-0.5", 1500.0, 3000.0, "M", "E", "Sichardt's factor"),
    Default("first_stage_factor", 1.30, "-", 1.0, 2.0, "P 2", "E", "first stage of pumping"),
    Default("drawdown_hours", 240.0, "h", 48.0, 1000.0, "A", "E", "hours of the first stage"),
    Default("pump_m3_per_hour", 20.0, "m3/h", 1.0, 500.0, "A", "D", "capacity of one pump"),
)

MONEY: Final = _table(
    Default("contingency_percent", 5.0, "%", 0.0, 15.0, "P 9", "P", "contingency"),
    Default("overhead_percent", 2.0, "%", 0.0, 10.0, "A", "P", "overhead on the subtotal"),
)

LEAST_SLOPE: Final = 1.5  # across per 1 up; under it a signed support design is named (handbook 12)
LICENSED_DEPTH_M: Final = 6.1  # to the bottom of the key; deeper asks for a licensed design [P 13]
