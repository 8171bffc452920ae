"""What was kept of a district before it was kept here: its tables, their columns, what each names.

One table for the reader, the tests and whoever writes such a file. Limits are sanity limits of this
project: beyond them a value is a slip; what it means is judged by the rules of `life`, and stored.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Final, Literal

from structures.intake.fields import DEPTH_MOST_M, LEVEL_MOST_M, OFFSET_LEAST_M, OFFSET_MOST_M

Kind = Literal[
    "text", "code", "number", "whole", "choice", "yes_no",
    "day", "month", "moment", "clock", "exact", "levels", "list", "water_year", "uuid",
]  # fmt: skip
HUNDREDTHS: Final = 100_000_000  # most of an exact figure; larger is a slip of the point


@dataclass(frozen=True, slots=True)
class Column:
    """One column. `to` names the list of people, sites, stages … in which its value has to stand.

    `exact` is a decimal of whole hundredths, `levels` numbers with ";" between, `list` words with
    ";" between, `water_year` is "2024-25". `blank` is a text that stands for "none", beside blank.
    """

    key: str
    kind: Kind = "text"
    required: bool = True
    low: float | None = None
    high: float | None = None
    choices: tuple[str, ...] = ()
    to: str = ""
    blank: str = ""


@dataclass(frozen=True, slots=True)
class HistoryTable:
    """One table: columns, what makes a row one, the table of which several columns name a row.

    `beside` are columns that are known and not read: they are computed, or stand elsewhere.
    """

    name: str
    columns: tuple[Column, ...]
    key: tuple[str, ...]
    names: dict[str, tuple[str, ...]] = field(default_factory=dict)
    beside: tuple[str, ...] = ()

    @property
    def file(self) -> str:
        """Name of the file that holds it."""
        return f"{self.name}.csv"


def _optional(key: str, kind: Kind = "text", **more: object) -> Column:
    return Column(key, kind, required=False, **more)


def _level(key: str, *, required: bool = True) -> Column:
    return Column(key, "number", required, low=-LEVEL_MOST_M, high=LEVEL_MOST_M)


def _offset(key: str) -> Column:
    return Column(key, "number", low=OFFSET_LEAST_M, high=OFFSET_MOST_M)


def _depth(key: str, *, required: bool = True) -> Column:
    return Column(key, "number", required, low=-DEPTH_MOST_M, high=DEPTH_MOST_M)


SITE: Final = Column("site_id", "code", to="sites")
STRUCTURE: Final = Column("structure_id", "code", to="sites")
STRIP_NO: Final = Column("strip_no", "whole", low=1, high=1000)
STRIP: Final = ("structure_id", "strip_no")


def who(key: str, *, required: bool = True) -> Column:
    """Give a column that names an account."""
    return Column(key, "code", required, to="people")


def exact(key: str) -> Column:
    """Give a column of exact figures above zero."""
    return Column(key, "exact", low=0.01, high=HUNDREDTHS)


SITES: Final = HistoryTable(
    "sites",
    (
        SITE,
        _optional("downstream_users"),
        _optional("left_toe_m", "number", low=OFFSET_LEAST_M, high=OFFSET_MOST_M),
        _optional("right_toe_m", "number", low=OFFSET_LEAST_M, high=OFFSET_MOST_M),
    ),
    ("site_id",),
    beside=(
        *("watershed", "name", "stream", "lat", "lon", "accuracy_m", "bed_level_m"),
        *("village_upstream", "village_downstream", "bed_slope", "water_level_m"),
    ),
)
STRUCTURES: Final = HistoryTable(
    "structures",
    (
        STRUCTURE,
        Column("state", to="stages"),
        Column("state_since", "day"),
        _optional("cause"),
    ),
    ("structure_id",),
    beside=("site_id", "left_end_m", "right_end_m", "digging_from", "covered_on"),
)
MOVES: Final = HistoryTable(
    "moves",
    (
        STRUCTURE,
        Column("move_no", "whole", low=1, high=10_000),
        _optional("from_state", to="stages"),
        Column("to_state", to="stages"),
        Column("moved_on", "day"),
        who("moved_by"),
    ),
    ("structure_id", "move_no"),
)
UNDERFLOW: Final = HistoryTable(
    "underflow",
    (
        SITE,
        *(
            Column(f"k_{which}_m_day", "number", low=0.0, high=2000.0)
            for which in ("low", "likely", "high")
        ),
        Column("k_source"),
        Column("wetted_area_m2", "number", low=0.0, high=100_000.0),
        Column("gradient", "number", low=0.0, high=0.2),
    ),
    ("site_id",),
    beside=("q_low_m3_day", "q_likely_m3_day", "q_high_m3_day"),
)
DRAWINGS: Final = HistoryTable(
    "drawings",
    (
        SITE,
        Column("version", "whole", low=1, high=1000),
        _offset("offset_m"),
        _level("rock_low_m"),
        _level("rock_likely_m"),
        _level("rock_high_m"),
    ),
    ("site_id", "version", "offset_m"),
    beside=(
        *("drawn_on", "wall_top_m", "left_end_m", "right_end_m", "side_h_per_v"),
        *("thickness_m", "drawn_by", "checked_by"),
    ),
)
STRIPS: Final = HistoryTable(
    "strips",
    (
        STRUCTURE,
        STRIP_NO,
        _offset("from_m"),
        _offset("to_m"),
        _level("lowest_drawn_rock_m", required=False),
        _optional("opened_on", "day"),
        _optional("covered_on", "day"),
    ),
    STRIP,
    beside=("lowest_found_rock_m",),
)
HOLD_POINTS: Final = HistoryTable(
    "hold_points",
    (
        STRUCTURE,
        STRIP_NO,
        Column("hold"),
        Column("asked_at", "moment"),
        who("asked_by"),
        _optional("seen_at", "moment"),
        who("seen_by", required=False),
        _optional("result", "choice", choices=("go", "go with note", "no")),
        _optional("reading_m", "levels", low=-LEVEL_MOST_M, high=LEVEL_MOST_M),
        Column("photo", "yes_no"),
    ),
    (*STRIP, "hold", "asked_at"),
    {"strips": STRIP},
)
TRENCH_LOOKS: Final = HistoryTable(
    "trench_looks",
    (
        STRUCTURE,
        STRIP_NO,
        Column("day", "day"),
        Column("time_local", "clock"),
        who("looked_by"),
        _optional("spoil_back_m", "number", low=0.0, high=200.0),
        _optional("ladder_within_m", "number", low=0.0, high=500.0),
        _optional("sides"),
        _optional("water"),
        _optional("rain_since_last", "yes_no"),
        Column("result"),
    ),
    (*STRIP, "day", "time_local"),
    {"strips": STRIP},
)
MEASUREMENTS: Final = HistoryTable(
    "measurements",
    (
        Column("entry_id", "text"),
        STRUCTURE,
        Column("strip_no", "whole", required=False, low=0, high=1000, blank="0"),
        Column("item", "code"),
        _depth("from_m", required=False),
        _depth("to_m", required=False),
        exact("quantity"),
        Column("unit"),
        Column("measured_on", "day"),
        _optional("covered_on", "day"),
        who("measured_by"),
        who("checked_by", required=False),
        _optional("relies_on", "list"),
    ),
    ("entry_id",),
    {"strips": STRIP},
)
SEASON_STARTS: Final = HistoryTable(
    "season_starts",
    (
        Column("stream", to="streams"),
        Column("watershed", "code", to="watersheds"),
        Column("year", "whole", low=1900, high=2200),
        Column("first_run_on", "day"),
    ),
    ("watershed", "stream", "year"),
)
WELLS: Final = HistoryTable(
    "wells",
    (
        Column("well_id", "code"),
        Column("watershed", "code", to="watersheds"),
        Column("site_id", "code", required=False, to="sites"),
        Column("role", "choice", choices=("upstream", "downstream", "control", "other")),
        _optional("name"),
        _optional("lat", "number", low=-90.0, high=90.0),
        _optional("lon", "number", low=-180.0, high=180.0),
        Column("kind", "choice", choices=("dug", "bored", "observation pipe")),
        _optional("diameter_m", "number", low=0.001, high=50.0),
        _level("ground_level_m", required=False),
        _optional("bottom_below_ground_m", "number", low=0.01, high=500.0),
        _optional("bottom_sounded_on", "day"),
        _optional("upstream_of_wall_m", "number", low=-100_000.0, high=100_000.0),
    ),
    ("well_id",),
)
MEASURING_POINTS: Final = HistoryTable(
    "measuring_points",
    (
        Column("well_id", "code"),
        Column("mark_id", "code"),
        Column("what"),
        Column("height_above_ground_m", "number", required=False, low=-10.0, high=10.0),
        _level("level_m", required=False),
        Column("valid_from", "day"),
        _optional("valid_to", "day"),
        Column("entered_on", "day"),
        who("entered_by"),
        Column("photo", "yes_no"),
    ),
    ("well_id", "mark_id"),
    {"wells": ("well_id",)},
)
LEVELS: Final = HistoryTable(
    "levels",
    (
        Column("reading_id", "uuid"),
        Column("well_id", "code"),
        Column("mark_id", "code"),
        Column("read_at", "moment"),
        Column("depth_below_mark_m", "number", low=-1000.0, high=LEVEL_MOST_M),
        Column("state", "choice", choices=("static", "pumping", "recovering", "not known")),
        Column("dry", "yes_no"),
        who("read_by"),
        _optional("note"),
    ),
    ("reading_id",),
    {"wells": ("well_id",), "measuring_points": ("well_id", "mark_id")},
)
RAIN: Final = HistoryTable(
    "rain",
    (
        Column("gauge_id", "code"),
        Column("day", "day"),
        _optional("rain_mm", "number", low=0.0, high=2000.0),
        _optional("remark"),
    ),
    ("gauge_id", "day"),
)
RAIN_MONTHLY: Final = HistoryTable(
    "rain_monthly",
    (
        Column("gauge_id", "code"),
        Column("month", "month"),
        _optional("rain_mm", "number", low=0.0, high=5000.0),
    ),
    ("gauge_id", "month"),
)
COMPLAINTS: Final = HistoryTable(
    "complaints",
    (
        Column("complaint_id", "code"),
        SITE,
        Column("received_on", "day"),
        Column("from"),
        _optional("well_id", "code"),
        Column("text"),
        _optional("answered_on", "day"),
    ),
    ("complaint_id",),
    {"wells": ("well_id",)},
)
VERDICT_ROWS: Final = HistoryTable(
    "verdicts",
    (
        STRUCTURE,
        Column("water_year", "water_year"),
        Column("verdict", to="verdicts"),
        who("proposed_by"),
        who("reviewed_by", required=False),
        Column("given_on", "day"),
    ),
    ("structure_id", "water_year"),
)
# A table stands behind those that it names.
TABLES: Final[tuple[HistoryTable, ...]] = (
    *(SITES, STRUCTURES, MOVES, UNDERFLOW, DRAWINGS, STRIPS, HOLD_POINTS, TRENCH_LOOKS),
    *(MEASUREMENTS, SEASON_STARTS, WELLS, MEASURING_POINTS, LEVELS, RAIN, RAIN_MONTHLY),
    *(COMPLAINTS, VERDICT_ROWS),
)
