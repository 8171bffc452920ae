"""The wall as it was built beside the wall as it was drawn: what differs, and what nobody measured.

What nobody levelled is in no figure of the wall as built: it is named, strip by strip.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from structures.takeoff.quantity import ITEMS
from structures.takeoff.strip_work import strip_work
from structures.wall.stretch import Stretch

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from structures.ground.found import FoundLevel
    from structures.intake.pack import WallSettings
    from structures.life.strips import Strip
    from structures.wall.cutoff import Cutoff

END_M: Final = 0.5  # a level this close to the end of a strip speaks for the end (project choice)
LEAST_LEVELS: Final = 2  # one level says nothing of the line beside it
Key = tuple[str, float | None, float | None]


@dataclass(frozen=True, slots=True)
class Missed:
    """Part of a strip along which nobody levelled the rock."""

    strip: int
    from_m: float
    to_m: float
    whole: bool


@dataclass(frozen=True, slots=True)
class Compared:
    """One item, not rounded: the whole wall as drawn, the measured stretches as drawn and as built.

    None is "not known". Of excavation `from_m` and `to_m` are the limits of the lift.
    """

    item: str
    unit: str
    drawn: float | None
    drawn_there: float | None
    built: float | None
    from_m: float | None = None
    to_m: float | None = None

    @property
    def difference(self) -> float | None:
        """As built less as drawn, over the same stretches."""
        if self.built is None or self.drawn_there is None:
            return None
        return self.built - self.drawn_there


@dataclass(frozen=True, slots=True)
class AsBuilt:
    """Where the rock was levelled, where it was not, and the work of both walls, in item order."""

    measured: tuple[Stretch, ...]
    missed: tuple[Missed, ...]
    rows: tuple[Compared, ...]

    @property
    def complete(self) -> bool:
        """Whether the rock was levelled along every strip."""
        return not self.missed


def levelled(
    strips: Sequence[Strip], found: Iterable[FoundLevel]
) -> tuple[tuple[Stretch, ...], tuple[Missed, ...]]:
    """Tell along which stretches the rock was levelled, and along which it was not.

    Source: the office's practice, hold point H2 (levels at both ends and in the middle of a strip);
    between two levels of a strip the rock counts as straight.
    """
    by_strip: dict[int | None, list[float]] = defaultdict(list)
    for one in found:
        by_strip[one.strip].append(one.offset_m)
    measured, missed = [], []
    for strip in strips:
        offsets = by_strip[strip.number]
        if len(offsets) < LEAST_LEVELS:
            missed.append(Missed(strip.number, strip.from_m, strip.to_m, whole=True))
            continue
        first, last = min(offsets), max(offsets)
        start = strip.from_m if first - strip.from_m <= END_M else first
        stop = strip.to_m if strip.to_m - last <= END_M else last
        measured.append(Stretch(start, stop))
        for a, b in ((strip.from_m, start), (stop, strip.to_m)):
            if b > a:
                missed.append(Missed(strip.number, a, b, whole=False))
    return tuple(measured), tuple(missed)


def compare(
    drawn: Cutoff | None,
    built: Cutoff,
    settings: WallSettings,
    strips: Sequence[Strip],
    found: Iterable[FoundLevel],
) -> AsBuilt:
    """Measure the wall as built beside the wall as drawn.

    Source: handbook section 6 on both rock lines, along the measured stretches.

    Parameters
    ----------
    drawn
        The wall of the frozen drawing; None where no drawing is kept.
    built
        The wall of the rock line as found.
    settings
        Settings that both sections were made with.
    strips
        The strips of the wall, left to right.
    found
        Levels of rock seen in the trench.

    Raises
    ------
    ValueError
        If a wall has more than one rock line.
    """
    measured, missed = levelled(strips, found)
    whole = [Stretch(one.from_m, one.to_m) for one in strips]
    there, all_drawn = _work(drawn, settings, measured), _work(drawn, settings, whole)
    now = _work(built, settings, measured) if measured else None
    keys = {**(all_drawn or {}), **(there or {}), **(now or {})}
    order = list(ITEMS)
    rows = [
        Compared(
            key[0],
            ITEMS[key[0]],
            _of(all_drawn, key),
            _of(there, key) if measured else None,
            _of(now, key),
            key[1],
            key[2],
        )
        for key in sorted(keys, key=lambda key: (order.index(key[0]), key[1] or 0.0))
    ]
    return AsBuilt(measured, missed, tuple(rows))


def _work(
    cutoff: Cutoff | None, settings: WallSettings, reaches: Iterable[Stretch]
) -> dict[Key, float] | None:
    """Add up the work of some reaches by item and lift; a lift that is not there is no work."""
    if cutoff is None:
        return None
    sums: dict[Key, float] = defaultdict(float)
    for reach in reaches:
        for one in strip_work(cutoff, settings, reach.from_m, reach.to_m):
            sums[one.item, one.from_m, one.to_m] += one.quantity
    return dict(sums)


def _of(work: dict[Key, float] | None, key: Key) -> float | None:
    return None if work is None else work.get(key, 0.0)
