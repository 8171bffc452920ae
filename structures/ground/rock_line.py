"""The rock line as a record: what it rests on, where it is known, and how far it may be wrong."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from structures.arrays import frozen, rising

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    from structures.life.cautions import Caution


@dataclass(frozen=True, slots=True)
class Evidence:
    """One test that gave a level or bounds one.

    `kind`: outcrop, pit, bore, sounding, refraction (these give a level with `sd_m`); hole, probe
    refused, probe stopped, weathered (these bound it: rock at or below `level_m`, `sd_m` None).
    """

    offset_m: float
    level_m: float
    kind: str
    sd_m: float | None = None


@dataclass(frozen=True, eq=False, slots=True)
class RockLine:
    """Level of sheet rock along the wall line, shape (n,); straight between its points.

    Outside the first and last offset the rock is not surveyed. `low_m` and `high_m` are the 10 %
    and 90 % points of the level (low = deep), `sd_m` one standard deviation, all None for a given
    line. `draws_m` holds whole-line draws, shape (draws, n), None for a given line.
    """

    source: Literal["given", "estimated", "none"]
    offset_m: NDArray[np.float64]
    level_m: NDArray[np.float64]
    sd_m: NDArray[np.float64] | None = None
    low_m: NDArray[np.float64] | None = None
    high_m: NDArray[np.float64] | None = None
    draws_m: NDArray[np.float64] | None = None
    seed: int | None = None
    evidence: tuple[Evidence, ...] = ()
    cautions: tuple[Caution, ...] = ()

    def __post_init__(self) -> None:
        object.__setattr__(self, "offset_m", rising(self.offset_m))
        for name, ndim in (
            ("level_m", 1),
            ("sd_m", 1),
            ("low_m", 1),
            ("high_m", 1),
            ("draws_m", 2),
        ):
            values = getattr(self, name)
            if values is not None:
                array = frozen(values, ndim=ndim)
                if array.shape[-1] != self.offset_m.size:
                    raise ValueError(
                        f"{name} has {array.shape[-1]} points, offsets {self.offset_m.size}"
                    )
                object.__setattr__(self, name, array)
