"""Wells for today's round: where to hold the tape, last readings, and the range to expect."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from typing import TYPE_CHECKING, Final
from zoneinfo import ZoneInfo

from django.utils import timezone

from structures import access
from structures.access import Act
from structures.models import Well
from structures.queries.districts import today_of
from structures.queries.wells import facts_of, past_of, visible_wells
from structures.water.marks import mark_on

if TYPE_CHECKING:
    from structures.models import MeasuringPoint, Reading, User
    from structures.water.quality import Expected

LAST: Final = 3  # readings shown as a check
WELLS_MOST: Final = 60  # of a round; more is no round of a day


@dataclass(frozen=True, slots=True)
class WellToday:
    """One well as its reader finds it; depths are below the mark in use, None is not known."""

    well: Well
    mark: MeasuringPoint | None
    last: tuple[Reading, ...]
    low_m: float | None
    high_m: float | None
    bottom_m: float | None
    now: datetime
    zone: ZoneInfo
    read_today: bool

    @property
    def offset(self) -> str:
        """Offset of the place's clock, as ISO 8601 writes it."""
        return f"{self.now:%z}"[:3] + ":" + f"{self.now:%z}"[3:]

    def expects(self, depth_m: float) -> bool:
        """Whether a depth would not surprise; where nothing is known, none does."""
        return self.low_m is None or self.low_m <= depth_m <= self.high_m


def round_of_wells(user: User) -> list[WellToday]:
    """Wells where the user may send readings, up the stream from each wall."""
    sheds = access.watersheds(user, Act.SEND_READINGS)
    found = visible_wells(user).filter(watershed__in=sheds, ended_on__isnull=True)
    order = found.order_by("watershed__code", "site__code", "upstream_of_wall_m", "code")
    return [_today(one) for one in order[:WELLS_MOST]]


def well_today(user: User, code: str) -> WellToday | None:
    """One well of the round; None where there is none that the user may see."""
    well = visible_wells(user).filter(code=code).first()
    return None if well is None else _today(well)


def _today(well: Well) -> WellToday:
    district = well.watershed.district
    zone = ZoneInfo(district.zone)
    now = timezone.now().astimezone(zone)
    day = today_of(district)
    now = datetime.combine(day, now.timetz(), zone) if district.as_of else now
    facts = facts_of(well)
    used = mark_on(facts.marks, day)
    mark = None if used is None else well.marks.filter(mark=used.mark).first()
    expected = past_of(well).expected(day)
    last = tuple(
        well.readings.select_related("mark")
        .exclude(standing="left out")
        .order_by("-read_at")[:LAST]
    )
    low, high = _depths(expected, None if used is None else used.level_m)
    bottom = facts.bottom_below_mark_m(used)
    if high is not None and bottom is not None:
        high = min(high, bottom)
    return WellToday(
        well,
        mark,
        last,
        low,
        high,
        bottom,
        now,
        zone,
        bool(last) and last[0].read_at.astimezone(zone).date() == day,
    )


def _depths(
    expected: Expected | None, mark_level_m: float | None
) -> tuple[float | None, float | None]:
    """Turn the levels to expect into depths below the mark."""
    if expected is None or mark_level_m is None:
        return None, None
    return max(0.0, mark_level_m - expected.high_m), max(0.0, mark_level_m - expected.low_m)
