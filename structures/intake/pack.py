"""One site's survey as records: what was seen, proved, sounded and asked for (units in the names).

Offsets run from the left bank, looking downstream. Levels are heights above the site's bench mark
datum; depths are below ground. A value that is not known is None, never zero.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

from structures.intake.defaults import GROUND, WALL

if TYPE_CHECKING:
    from structures.errors import Finding


@dataclass(frozen=True, slots=True)
class Site:
    """The place: code, names, slope of the bed along the stream, catchment above it."""

    code: str
    name: str | None = None
    stream: str | None = None
    bed_slope: float | None = None
    catchment_km2: float | None = None


@dataclass(frozen=True, slots=True)
class GroundPoint:
    """A point of the ground on the wall line."""

    offset_m: float
    level_m: float
    note: str | None = None


@dataclass(frozen=True, slots=True)
class Toes:
    """The feet of the two bank slopes."""

    left_m: float
    right_m: float


@dataclass(frozen=True, slots=True)
class RockTest:
    """What was seen or proved. `met_rock` False says only that rock lies below `depth_m`.

    `what` "weathered" bounds the sheet rock from above and proves none.
    """

    offset_m: float
    depth_m: float
    method: Literal["outcrop", "pit", "bore"]
    met_rock: bool
    what: Literal["sheet", "weathered"] = "sheet"


@dataclass(frozen=True, slots=True)
class Probe:
    """A driven or pushed rod. Refused: rock at or below `depth_m`; not refused: rock below it."""

    offset_m: float
    depth_m: float
    refused: bool
    why_stopped: str | None = None


@dataclass(frozen=True, slots=True)
class SoundingReading:
    """One reading; a Wenner reading of spacing a stands as AB/2 = 1.5 a, MN/2 = 0.5 a.

    `sd_percent` is None where the sheet states none: then the setting counts.
    """

    ab2_m: float
    mn2_m: float
    apparent_resistivity_ohm_m: float
    sd_percent: float | None = None

    def log_sd(self, unstated: float = GROUND["sounding_noise"].value) -> float:
        """Noise of the reading as sd of its logarithm; `unstated` where none is stated."""
        return unstated if self.sd_percent is None else self.sd_percent / 100


@dataclass(frozen=True, slots=True)
class Sounding:
    """One electrical sounding; `offset_m` is None where only the curve was handed in.

    `findings` is filled for such a lone curve; those of a pack's soundings stand in the pack.
    """

    offset_m: float | None
    array: Literal["schlumberger", "wenner"]
    readings: tuple[SoundingReading, ...]
    label: str
    findings: tuple[Finding, ...] = field(default=(), compare=False, repr=False)


@dataclass(frozen=True, slots=True)
class RefractionPick:
    """One first arrival; shot and geophone are places along the spread."""

    shot_m: float
    geophone_m: float
    time_ms: float


@dataclass(frozen=True, slots=True)
class RefractionLine:
    """A refraction spread along the stream that crosses the wall line at `offset_m`."""

    offset_m: float
    picks: tuple[RefractionPick, ...]
    label: str


@dataclass(frozen=True, slots=True)
class RockLinePoint:
    """A point of the rock line that an engineer settled."""

    offset_m: float
    level_m: float


@dataclass(frozen=True, slots=True)
class GroundWater:
    """Conductivity, slope of the water table along the stream, specific yield, water level."""

    hydraulic_conductivity_m_per_day: float | None = None
    gradient: float | None = None
    specific_yield: float | None = None
    water_level_m: float | None = None


@dataclass(frozen=True, slots=True)
class SlopeStation:
    """Side slope of the trench (across per 1 up) at an offset; straight lines between stations."""

    offset_m: float
    slope: float


@dataclass(frozen=True, slots=True)
class WallSettings:
    """Settings of wall and trench; defaults of handbook section 12.

    `side_slope` holds stations; a single one means the same slope everywhere. `changed` names the
    keys whose value the pack overrode with one that differs from the default.
    """

    thickness_m: float = WALL["thickness_m"].value
    crest_below_bed_m: float = WALL["crest_below_bed_m"].value
    key_m: float = WALL["key_m"].value
    side_slope: tuple[SlopeStation, ...] = (SlopeStation(0.0, WALL["side_slope"].value),)
    bottom_margin_m: float = WALL["bottom_margin_m"].value
    lift_m: float = WALL["lift_m"].value
    film_faces: int = int(WALL["film_faces"].value)
    film_width_m: float = WALL["film_width_m"].value
    film_lap_m: float = WALL["film_lap_m"].value
    film_anchor_m: float = WALL["film_anchor_m"].value
    film_fold_m: float = WALL["film_fold_m"].value
    surplus_bulking: float = WALL["surplus_bulking"].value
    borrow_factor: float = WALL["borrow_factor"].value
    loose_factor: float = WALL["loose_factor"].value
    clay_waste: float = WALL["clay_waste"].value
    marker_spacing_m: float = WALL["marker_spacing_m"].value
    observation_pipes: int = int(WALL["observation_pipes"].value)
    changed: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Works:
    """Plan of work: pump hours, or what they are computed from; a signed support design if named."""

    pump_hours: float | None = None
    days_below_water: float | None = None
    pump_m3_per_hour: float | None = None
    support_design: str | None = None


@dataclass(frozen=True, slots=True)
class Note:
    """Something handed in that a pack has no place for, kept as it was written."""

    where: str
    field: str
    text: str


@dataclass(frozen=True, slots=True)
class SurveyPack:
    """One site's survey, read and found usable.

    `rock_line` is None where none was settled. `findings` holds what the reader doubts but keeps
    (levels "hold", "warn", "note"), unknown keys among them; `notes` holds what those keys said.
    """

    site: Site
    ground: tuple[GroundPoint, ...]
    toes: Toes
    rock: tuple[RockTest, ...] = ()
    probes: tuple[Probe, ...] = ()
    soundings: tuple[Sounding, ...] = ()
    refraction: tuple[RefractionLine, ...] = ()
    rock_line: tuple[RockLinePoint, ...] | None = None
    ground_water: GroundWater = GroundWater()
    wall: WallSettings = WallSettings()
    works: Works = Works()
    findings: tuple[Finding, ...] = field(default=(), compare=False, repr=False)
    notes: tuple[Note, ...] = field(default=(), compare=False, repr=False)
