"""Level readings of wells, one a line: their records, and the file that `assess_effect` reads."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final, Literal

from structures.intake.builder import refusal
from structures.intake.fields import DEPTH_MOST_M, LEVEL_MOST_M, Field
from structures.intake.moments import read_moment
from structures.intake.reading_checks import check_readings
from structures.intake.single_table import read_single_table, tell_columns
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_value, tell_missing

if TYPE_CHECKING:
    from datetime import date, datetime, tzinfo

    from structures.errors import Finding
    from structures.intake.tables import Table

Role = Literal["affected", "control"]
ROLES: Final = ("affected", "control")
STATES: Final = ("static", "pumping", "recovering", "not known", "obstructed", "flowing", "flooded")
WITHOUT_DEPTH: Final = ("obstructed", "flowing", "flooded")
# What people write in the column of depths for a dry well, and for one that was not read.
DRY_WORDS: Final = frozenset({"dry", "nil", "d", "सूखा"})
UNREAD_WORDS: Final = frozenset({"-", "--", "\N{EN DASH}", "\N{EM DASH}", "nr", "n/r"})

WELL: Final = Field("well", "code of the well", "code", required=True)
ROLE: Final = Field("role", "affected or control", "choice", required=True, choices=ROLES)
STATE: Final = Field("state", "state of the well while it was read", "choice", choices=STATES)
DRY: Final = Field("dry", "whether the well was dry", "yes_no")
DEPTH: Final = Field(
    "depth_m",
    "depth below the measuring point; for a dry well the depth of its bottom",
    unit="m",
    low=0.0,
    high=DEPTH_MOST_M,
    low_says=("{value:g} m is above the mark.", "Flowing well? Then the state is flowing."),
    high_says=(
        "{value:g} m looks like a level, not a depth.",
        "Write the depth below the measuring point.",
    ),
)
HEIGHT: Final = Field(
    "height_m",
    "level of the measuring point valid that day",
    unit="m",
    low=-LEVEL_MOST_M,
    high=LEVEL_MOST_M,
)
COLUMNS: Final = ("well", "role", "read_at", "state", "dry", "depth_m", "height_m")
NEEDED: Final = ("well", "role", "read_at", "state", "depth_m", "height_m")


@dataclass(frozen=True, slots=True)
class WellReading:
    """One reading; `left_out` says why it takes no part in a comparison, empty where it does.

    `depth_m` is below the measuring point, for a dry well that of its bottom; `height_m` the level
    of the measuring point. Neither is zero for want of a value.
    """

    well: str
    role: Role
    read_at: datetime
    state: str
    dry: bool
    depth_m: float | None
    height_m: float | None
    where: str = ""
    left_out: str = ""

    def __post_init__(self) -> None:
        if self.read_at.tzinfo is None:
            raise ValueError(f"the reading of {self.well} has a time without zone")

    @property
    def day(self) -> date:
        """The day on the clock of the place where it was read."""
        return self.read_at.date()

    @property
    def level_m(self) -> float:
        """Level of the water; of a dry well the level of its bottom.

        Raises
        ------
        ValueError
            If depth or height is not known.
        """
        if self.depth_m is None or self.height_m is None:
            raise ValueError(f"the reading of {self.well} at {self.read_at} gives no level")
        return self.height_m - self.depth_m


@dataclass(frozen=True, slots=True)
class ReadingsFile:
    """All readings of a file, those that take no part with their reason, and what is doubted."""

    readings: tuple[WellReading, ...]
    findings: tuple[Finding, ...] = ()


def read_readings(name: str, data: bytes, zone: tzinfo) -> ReadingsFile:
    """Read the readings of affected and control wells.

    Source: the interface of `assess_effect`; field practice, rules LV.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    data
        CSV or XLSX with `well,role,read_at,state,dry,depth_m,height_m`; metres.
    zone
        Zone of the place, for times without one.

    Raises
    ------
    Refused
        If the file cannot be used; `findings` names each line and field.
    """
    ledger = Ledger()
    table = read_single_table(name, data, "readings", ledger)
    if table is None or not tell_columns(table, COLUMNS, NEEDED, ledger):
        raise refusal(ledger, "readings file")
    read = [_reading(table, place, zone, ledger) for place in range(len(table.rows))]
    kept = check_readings([one for one in read if one is not None], ledger)
    if ledger.blocks:
        raise refusal(ledger, "readings file")
    return ReadingsFile(tuple(kept), tuple(ledger.findings))


def _reading(table: Table, place: int, zone: tzinfo, ledger: Ledger) -> WellReading | None:
    row = table.node(table.rows[place], "")
    blocks = ledger.blocks
    well = needed(row, WELL, ledger)
    role = needed(row, ROLE, ledger)
    read_at = moment(row, zone, ledger)
    state = given(row, STATE, ledger) or "not known"
    height_m = given(row, HEIGHT, ledger)
    dry, depth_m = dry_and_depth(row, ledger)
    if ledger.blocks > blocks:
        return None
    reading = WellReading(well, role, read_at, state, dry, depth_m, height_m, row.where)
    return replace(reading, left_out=_why_left_out(reading))


def needed(row: Node, field: Field, ledger: Ledger) -> object:
    """Read a field that every row must have."""
    node = row.named(field.key)
    if node.blank:
        tell_missing(node, field, ledger)
        return None
    return read_value(node, field, ledger)


def given(row: Node, field: Field, ledger: Ledger) -> object:
    """Read a field, None where it was left blank."""
    node = row.named(field.key)
    return None if node.blank else read_value(node, field, ledger)


def moment(row: Node, zone: tzinfo, ledger: Ledger) -> datetime | None:
    """Read when the well was read."""
    node = row.named("read_at")
    if node.blank:
        ledger.add(node, "This is missing.", "Give the day and time of the reading.")
        return None
    return read_moment(node, zone, ledger)


def dry_and_depth(row: Node, ledger: Ledger, *, field: Field = DEPTH) -> tuple[bool, float | None]:
    """Read whether the well was dry and the depth; a blank is not read, never zero.

    A word for dry in the column of depths says dry and no depth; it is told. `field` is the depth
    with its range, for callers that doubt what lies outside instead of refusing it.
    """
    dry = bool(given(row, DRY, ledger))
    node = row.named("depth_m")
    word = node.value.strip().lower() if isinstance(node.value, str) else ""
    if word in UNREAD_WORDS:
        return dry, None
    if word not in DRY_WORDS:
        return dry, given(row, field, ledger)
    what = f"{shown(node.value)} is read as a dry well whose bottom is not known."
    remedy = "Write yes under dry and the depth of the bottom."
    ledger.add(node, what, remedy, level="warn", rule="LV-05")
    return True, None


def _why_left_out(reading: WellReading) -> str:
    if reading.state == "not known":
        return "state not known"
    if reading.state != "static":
        return reading.state
    if reading.depth_m is None:
        return "dry, depth of the bottom not given" if reading.dry else "not read (no depth)"
    return "height of the measuring point not given" if reading.height_m is None else ""
