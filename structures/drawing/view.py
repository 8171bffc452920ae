"""What the drawing of a section needs to know, as plain values that cannot contradict each other.

Offsets run from the left bank, looking downstream; levels are heights above the site's bench mark.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, Literal

import numpy as np

from structures.arrays import frozen, rising
from structures.ground.bed import bed_level_m

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.life.cautions import Caution
    from structures.wall.stretch import Stretch

TestKind = Literal[
    "bore",
    "pit",
    "outcrop",
    "hole",
    "weathered",
    "probe refused",
    "probe stopped",
    "sounding",
    "refraction",
]
SEEN: Final[tuple[TestKind, ...]] = ("bore", "pit", "outcrop")  # sheet rock itself was met


@dataclass(frozen=True, slots=True)
class GroundTest:
    """One place where the ground was tested.

    `depth_m` is that of the rock that was met, of a hole's foot or of a rod's tip; a sounding or a
    refraction line has a range from `shallow_m` to `deep_m` (10 % and 90 %) where it gave one.
    """

    offset_m: float
    kind: TestKind
    label: str
    depth_m: float | None = None
    shallow_m: float | None = None
    deep_m: float | None = None

    @property
    def seen(self) -> bool:
        """Was sheet rock met here."""
        return self.kind in SEEN

    @property
    def foot_m(self) -> float:
        """Depth down to which the test is drawn; 0 for a tick on the ground alone."""
        return max(self.depth_m or 0.0, self.deep_m or 0.0)


@dataclass(frozen=True, eq=False, slots=True)
class RockDrawn:
    """The rock line where it is known, shapes (n,); straight between its points.

    `low_m` and `high_m` are the 10 % and 90 % points of the level, both None for a settled line.
    """

    offset_m: NDArray[np.float64]
    level_m: NDArray[np.float64]
    low_m: NDArray[np.float64] | None = None
    high_m: NDArray[np.float64] | None = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "offset_m", rising(self.offset_m))
        for name in ("level_m", "low_m", "high_m"):
            values = getattr(self, name)
            if values is not None:
                _set_line(self, name, values, self.offset_m.size)
        if (self.low_m is None) != (self.high_m is None):
            raise ValueError("a range has both its ends or none")

    @property
    def reach(self) -> tuple[float, float]:
        """First and last offset where the rock is known."""
        return float(self.offset_m[0]), float(self.offset_m[-1])

    def at(self, offset_m: NDArray) -> NDArray[np.float64]:
        """Level at offsets inside the reach."""
        return np.interp(offset_m, self.offset_m, self.level_m)


@dataclass(frozen=True, eq=False, slots=True)
class WallDrawn:
    """The wall as pieces between two uprights, arrays of shape (pieces, 2); none where no wall.

    `left_slope` and `right_slope` are the trench's side slopes at the ends.
    """

    offset_m: NDArray[np.float64]
    top_m: NDArray[np.float64]
    rock_m: NDArray[np.float64]
    crest_m: float
    key_m: float
    ends_m: tuple[float, float]
    closed: tuple[bool, bool]
    slopes: tuple[float, float]
    film: bool
    bars: tuple[Stretch, ...] = ()

    def __post_init__(self) -> None:
        for name in ("offset_m", "top_m", "rock_m"):
            values = frozen(getattr(self, name), ndim=2)
            if values.shape != (len(self.offset_m), 2):
                raise ValueError(f"{name} has shape {values.shape}, two uprights a piece are asked")
            object.__setattr__(self, name, values)

    @property
    def length_m(self) -> float:
        """Length in plan where the wall stands."""
        return float((self.offset_m[:, 1] - self.offset_m[:, 0]).sum())

    def runs(self) -> list[NDArray[np.int_]]:
        """Give the pieces that stand against each other, run by run."""
        apart = np.flatnonzero(self.offset_m[1:, 0] > self.offset_m[:-1, 1] + 1e-9) + 1
        return np.split(np.arange(len(self.offset_m)), apart) if len(self.offset_m) else []


@dataclass(frozen=True, slots=True)
class StripBuilt:
    """One strip of a wall that was built, and what must be said of it for ever."""

    number: int
    from_m: float
    to_m: float
    unseen: str = ""


@dataclass(frozen=True, eq=False, slots=True)
class Built:
    """What a sheet as built shows besides: the line and the wall as drawn, strips, levels found.

    `measured` and `missed` are the stretches along which the rock was levelled and was not; `line`
    and `wall` are None where no drawing is kept. `found` holds offset and level of each reading.
    """

    measured: tuple[Stretch, ...]
    missed: tuple[Stretch, ...]
    strips: tuple[StripBuilt, ...]
    found: tuple[tuple[float, float], ...]
    line: RockDrawn | None = None
    wall: WallDrawn | None = None

    def levelled(self, offset_m: NDArray) -> NDArray[np.bool_]:
        """Tell for each offset whether it lies in a stretch that was levelled."""
        inside = [(offset_m >= one.from_m) & (offset_m <= one.to_m) for one in self.measured]
        return np.any(inside, axis=0) if inside else np.zeros(np.shape(offset_m), dtype=bool)


@dataclass(frozen=True, eq=False, slots=True)
class SectionView:
    """One section under the line. Rock None: not surveyed; wall None: not known.

    `cautions` are all of the site's; the drawing carries those that belong on it. With `built` rock
    and wall are those that were found and built, firm, over those that were drawn, thin.
    """

    site_code: str
    site_name: str
    offset_m: NDArray[np.float64]
    ground_m: NDArray[np.float64]
    toes_m: tuple[float, float]
    rock: RockDrawn | None = None
    wall: WallDrawn | None = None
    tests: tuple[GroundTest, ...] = ()
    water_m: float | None = None
    cautions: tuple[Caution, ...] = ()
    built: Built | None = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "offset_m", rising(self.offset_m))
        _set_line(self, "ground_m", self.ground_m, self.offset_m.size)
        if self.offset_m.size < 2:
            raise ValueError("a section has two points or more")
        first, last = self.reach
        outside = [t.label for t in self.tests if not first <= t.offset_m <= last]
        if outside:
            raise ValueError(f"test {outside[0]} lies outside the surveyed ground")
        if self.wall is not None and self.rock is None:
            raise ValueError("a wall stands on a rock line")

    @property
    def bed_m(self) -> float:
        """Level of the bed."""
        return bed_level_m(self.offset_m, self.ground_m, *self.toes_m)

    @property
    def site(self) -> str:
        """Code and name of the site."""
        return f"{self.site_code} {self.site_name}".strip()

    @property
    def reach(self) -> tuple[float, float]:
        """First and last surveyed offset."""
        return float(self.offset_m[0]), float(self.offset_m[-1])

    @property
    def gaps(self) -> tuple[tuple[float, float], ...]:
        """Parts of the survey where the rock is not surveyed."""
        first, last = self.reach
        if self.rock is None:
            return ((first, last),)
        start, stop = self.rock.reach
        return tuple((a, b) for a, b in ((first, start), (stop, last)) if b > a)

    def ground(self, offset_m: NDArray | float) -> NDArray[np.float64]:
        """Level of the ground at offsets."""
        return np.interp(offset_m, self.offset_m, self.ground_m)

    @property
    def ends_known(self) -> bool:
        """Whether the rock is known beyond the strips: without a drawing nobody looked there."""
        return self.built is None or self.built.line is not None

    @property
    def lowest_rock_m(self) -> float | None:
        """Lowest level of the rock line."""
        return None if self.rock is None else float(self.rock.level_m.min())


def _set_line(record: object, name: str, values: NDArray, size: int) -> None:
    """Keep a read-only copy of one value an offset."""
    array = frozen(values)
    if array.size != size:
        raise ValueError(f"{name} has {array.size} points, offsets {size}")
    object.__setattr__(record, name, array)
