"""What the drawing of a sounding needs to know, as plain values."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, Literal

import numpy as np

from structures.arrays import frozen

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.ground.sounding import Interpretation
    from structures.intake.pack import Sounding

BAR_SDS: Final = 2.0  # half length of the error bars in standard deviations


@dataclass(frozen=True, eq=False, slots=True)
class SoundingView:
    """One sounding; arrays of shape (readings,), in the order of the sheet.

    `noise` is one standard deviation of the logarithm. `bottom_m` and `resistivity_ohm_m` are those
    of the layers, shape (layers,), the last bottom infinite and left out; both empty without layers.
    Rock depths are the median, the 10 % and the 90 % point; None, with `refusal`, where none is read.
    """

    label: str
    array: Literal["schlumberger", "wenner"]
    ab2_m: NDArray[np.float64]
    mn2_m: NDArray[np.float64]
    observed_ohm_m: NDArray[np.float64]
    noise: NDArray[np.float64]
    computed_ohm_m: NDArray[np.float64] | None
    bottom_m: NDArray[np.float64]
    resistivity_ohm_m: NDArray[np.float64]
    rock_depth_m: float | None = None
    rock_low_m: float | None = None
    rock_high_m: float | None = None
    refusal: str = ""

    def __post_init__(self) -> None:
        for name in ("ab2_m", "mn2_m", "observed_ohm_m", "noise"):
            values = frozen(getattr(self, name))
            if values.size != len(self.ab2_m) or not values.size or (values <= 0).any():
                raise ValueError(f"{name}: one value above zero a reading is asked")
            object.__setattr__(self, name, values)
        for name in ("bottom_m", "resistivity_ohm_m"):
            object.__setattr__(self, name, frozen(getattr(self, name)))
        if self.resistivity_ohm_m.size and self.bottom_m.size != self.resistivity_ohm_m.size - 1:
            raise ValueError("every layer but the deepest has a bottom")
        if self.computed_ohm_m is not None:
            object.__setattr__(self, "computed_ohm_m", frozen(self.computed_ohm_m))

    @property
    def segments(self) -> list[NDArray[np.int_]]:
        """Readings of one MN each, in the order of the sheet, by rising spacing.

        Electrodes of a Wenner sounding keep their proportions: all its readings are one segment.
        """
        if self.array == "wenner":
            return [np.argsort(self.ab2_m, kind="stable")]
        _, first = np.unique(self.mn2_m, return_index=True)
        parts = [np.flatnonzero(self.mn2_m == self.mn2_m[index]) for index in sorted(first)]
        return [part[np.argsort(self.ab2_m[part], kind="stable")] for part in parts]

    @property
    def ends_ohm_m(self) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """Lower and upper ends of the error bars, shapes (readings,)."""
        factor = np.exp(BAR_SDS * self.noise)
        return self.observed_ohm_m / factor, self.observed_ohm_m * factor


def view_sounding(sounding: Sounding, said: Interpretation) -> SoundingView:
    """Bring readings and interpretation of one sounding together."""
    thickness = [layer.thickness_m for layer in said.layers if layer.thickness_m is not None]
    return SoundingView(
        label=sounding.label,
        array=sounding.array,
        ab2_m=np.array([one.ab2_m for one in sounding.readings]),
        mn2_m=np.array([one.mn2_m for one in sounding.readings]),
        observed_ohm_m=np.array([one.apparent_resistivity_ohm_m for one in sounding.readings]),
        noise=said.noise,
        computed_ohm_m=said.computed_ohm_m,
        bottom_m=np.cumsum(thickness),
        resistivity_ohm_m=np.array([layer.resistivity_ohm_m for layer in said.layers]),
        rock_depth_m=said.rock_depth_m,
        rock_low_m=said.rock_depth_low_m,
        rock_high_m=said.rock_depth_high_m,
        refusal="" if said.refusal is None else said.refusal.sentence,
    )
