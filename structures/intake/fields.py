"""The fields of a survey pack, one table a part: the reader and the published schema use these.

Limits without a mark are sanity limits of this project: beyond them a value is a slip of the hand,
a unit or a column in the wrong place. Settings take their accepted ranges from `defaults`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, Literal

from structures.intake.defaults import WALL as WALL_DEFAULTS
from structures.intake.defaults import WATER, Default

LEVEL_MOST_M: Final = 10000.0  # above any bed, whatever the datum
OFFSET_LEAST_M: Final = -1000.0
OFFSET_MOST_M: Final = 5000.0
DEPTH_MOST_M: Final = 60.0  # deeper figures in a depth column are levels
CODE_PATTERN: Final = r"^\w[\w.\-]{0,39}$"
TEXT_MOST: Final = 2000  # characters of a note

Kind = Literal["number", "whole", "text", "code", "choice", "yes_no"]


@dataclass(frozen=True, slots=True)
class Field:
    """One field: what it holds, its unit and accepted range, and what to say outside of it.

    `open_low` leaves `low` itself out. `low_says` and `high_says` are (what, remedy) with the value
    as {value}; without them the range is told.
    """

    key: str
    words: str
    kind: Kind = "number"
    unit: str = ""
    low: float | None = None
    high: float | None = None
    open_low: bool = False
    required: bool = False
    choices: tuple[str, ...] = ()
    rule: str = ""
    low_says: tuple[str, str] | None = None
    high_says: tuple[str, str] | None = None
    missing_says: tuple[str, str] | None = None


def _offset(words: str, key: str = "offset_m") -> Field:
    return Field(key, words, unit="m", low=OFFSET_LEAST_M, high=OFFSET_MOST_M, required=True)


def _level(key: str, words: str, *, required: bool = True) -> Field:
    return Field(key, words, unit="m", low=-LEVEL_MOST_M, high=LEVEL_MOST_M, required=required)


def _depth(words: str) -> Field:
    return Field(
        "depth_m",
        words,
        unit="m",
        low=0.0,
        high=DEPTH_MOST_M,
        required=True,
        rule="PR-01",
        low_says=("Depth {value:g} m is negative.", "Depth goes down as plus."),
        high_says=(
            "{value:g} m is deeper than any test here goes: a level typed as a depth?",
            "Write the depth below ground.",
        ),
    )


def _setting(default: Default) -> Field:
    kind: Kind = "whole" if default.whole else "number"
    return Field(default.key, default.words, kind, default.unit, default.low, default.high)


SITE: Final = (
    Field("code", "code of the site", "code", required=True),
    Field("name", "name of the place", "text"),
    Field("stream", "name of the stream", "text"),
    Field(
        "bed_slope",
        "fall of the bed along the stream",
        unit="m per m",
        low=0,
        high=0.5,
        open_low=True,
    ),
    Field("catchment_km2", "catchment above the site", unit="km2", low=0, high=1e6, open_low=True),
)
GROUND: Final = (
    _offset("offset from the left bank, looking downstream"),
    _level("level_m", "level of the ground above the site's datum"),
    Field("note", "what stands there", "text"),
)
TOES: Final = (
    _offset("offset of the foot of the left bank slope", "left_m"),
    _offset("offset of the foot of the right bank slope", "right_m"),
)
ROCK: Final = (
    _offset("offset of the test"),
    _depth("depth below ground where rock was met, or where the hole ended"),
    Field(
        "method",
        "how rock was looked for",
        "choice",
        required=True,
        choices=("outcrop", "pit", "bore"),
    ),
    Field(
        "met_rock",
        "whether rock was met; no says only that rock lies below the depth",
        "yes_no",
        required=True,
        missing_says=("It is not said whether rock was met.", "Answer yes or no."),
    ),
    Field(
        "what",
        "sheet rock, or weathered rock that only bounds it",
        "choice",
        choices=("sheet", "weathered"),
    ),
)
PROBES: Final = (
    _offset("offset of the probe"),
    _depth("depth below ground that the rod reached"),
    Field(
        "refused",
        "yes: rock at or below the depth; no: rock below it",
        "yes_no",
        required=True,
        rule="PR-02",
        missing_says=("Did the probe refuse, or was it stopped?", "Answer yes or no."),
    ),
    Field("why_stopped", "why the rod stopped", "text"),
)
_RESISTIVITY: Final = Field(
    "apparent_resistivity_ohm_m",
    "apparent resistivity",
    unit="ohm m",
    low=0,
    high=1e6,
    open_low=True,
    required=True,
    low_says=(
        "An apparent resistivity of {value:g} ohm m cannot be.",
        "Look at the field sheet; leave the reading out where it was not taken.",
    ),
)
_SD: Final = Field(
    "sd_percent",
    "standard deviation of the reading; where left out the setting counts, 3 unless changed",
    unit="%",
    low=1,
    high=10,
)
SCHLUMBERGER: Final = (
    Field(
        "ab2_m",
        "half the spacing of the current electrodes",
        unit="m",
        low=0,
        high=2000,
        open_low=True,
        required=True,
    ),
    Field(
        "mn2_m",
        "half the spacing of the potential electrodes",
        unit="m",
        low=0,
        high=1000,
        open_low=True,
        required=True,
    ),
    _RESISTIVITY,
    _SD,
)
WENNER: Final = (
    Field(
        "a_m",
        "spacing of neighbouring electrodes",
        unit="m",
        low=0,
        high=1300,
        open_low=True,
        required=True,
    ),
    _RESISTIVITY,
    _SD,
)
ARRAYS: Final = {"schlumberger": SCHLUMBERGER, "wenner": WENNER}
SOUNDING: Final = (
    Field("sounding", "label of the sounding", "text"),
    _offset("offset of the sounding's centre"),
    Field("array", "schlumberger where left out", "choice", choices=tuple(ARRAYS)),
)
REFRACTION: Final = (
    Field("line", "label of the spread", "text"),
    _offset("offset at which the spread crosses the wall line"),
)
PICKS: Final = (
    _offset("place of the shot along the spread", "shot_m"),
    _offset("place of the geophone along the spread", "geophone_m"),
    Field("time_ms", "first arrival after the shot", unit="ms", low=0, high=5000, required=True),
)
ROCK_LINE: Final = (
    _offset("offset of a point of the settled rock line"),
    _level("level_m", "level of the rock above the site's datum"),
)
GROUND_WATER: Final = (
    Field(
        "hydraulic_conductivity_m_per_day",
        "hydraulic conductivity of the bed sand",
        unit="m/day",
        low=0,
        high=10000,
        open_low=True,
    ),
    Field("gradient", "fall of the water table along the stream", unit="m per m", low=0, high=0.5),
    _setting(WATER["specific_yield"]),
    _level("water_level_m", "level of the ground water at the wall line", required=False),
)
WALL: Final = tuple(
    _setting(default) for key, default in WALL_DEFAULTS.items() if key != "side_slope"
)
SIDE_SLOPE: Final = _setting(WALL_DEFAULTS["side_slope"])
SLOPE_STATION: Final = (
    _offset("offset of the station"),
    Field(
        "slope",
        SIDE_SLOPE.words,
        "number",
        SIDE_SLOPE.unit,
        SIDE_SLOPE.low,
        SIDE_SLOPE.high,
        required=True,
    ),
)
WORKS: Final = (
    Field("pump_hours", "planned pump time, 0 for a dry trench", unit="h", low=0, high=50000),
    Field(
        "days_below_water", "days the trench is below the water level", unit="day", low=0, high=1000
    ),
    _setting(WATER["pump_m3_per_hour"]),
    Field("support_design", "signed design of a licensed engineer for the trench sides", "text"),
)
PACK_VERSION: Final = 1
PARTS: Final = (
    "pack",
    "site",
    "ground",
    "toes",
    "rock",
    "probes",
    "soundings",
    "refraction",
    "rock_line",
    "ground_water",
    "wall",
    "works",
)
