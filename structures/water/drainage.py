"""How a strip of ground empties into channels, and fills under recharge; closed forms."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from scipy.special import beta, betaincinv

from structures.water.bounds import insist_not_negative, insist_positive

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from structures.water.response import Aquifer

# Before this time the middle feels neither drain: what it feels is erfc(7.9) = 1e-28 of the whole.
SHORT_TAU: Final = 1e-3
# From then on exp(-n^2 pi^2 tau) is under 1e-17 beyond the thirty-third odd term.
ODD: Final = np.arange(1, 81, 2)
ALTERNATING: Final = (-1.0) ** ((ODD - 1) // 2)

_BETA: Final = float(beta(2.0 / 3.0, 0.5))
EMPTYING_RATE: Final = _BETA**2 / 6.0  # 1.1155 of handbook 9.15, exact from its similarity solution
EMPTYING_FLOW: Final = _BETA / 3.0  # 0.8624 of handbook 9.15, exact from its similarity solution


def drain_time(aquifer: Aquifer, spacing_m: float, days: ArrayLike) -> NDArray[np.float64]:
    """Time tau = T t/(S L^2) of a strip between two drains, no unit. Source: handbook 9.14.

    Raises
    ------
    ValueError
        If the spacing is not above zero or a time is negative.
    """
    insist_positive(spacing_m=spacing_m)
    insist_not_negative(days=days)
    scale = aquifer.transmissivity_m2_per_day / (aquifer.storage * spacing_m**2)
    return scale * np.asarray(days, dtype=np.float64)


def drained_mid_share(tau: ArrayLike) -> NDArray[np.float64]:
    """Height left midway between two drains, of the first height; shape of `tau`.

    Source: handbook 9.14.
    """
    late = np.maximum(np.asarray(tau, dtype=np.float64), SHORT_TAU)
    series = 4.0 / np.pi * (_decay(late) * (ALTERNATING / ODD)).sum(axis=-1)
    return np.where(np.asarray(tau) < SHORT_TAU, 1.0, series)


def drained_volume_share(tau: ArrayLike) -> NDArray[np.float64]:
    """Volume left between two drains, of the first volume; shape of `tau`.

    Source: handbook 9.14; early on each drain empties a half-space, 4 sqrt(tau/pi) together.
    """
    early = np.minimum(np.asarray(tau, dtype=np.float64), SHORT_TAU)
    late = np.maximum(np.asarray(tau, dtype=np.float64), SHORT_TAU)
    series = 8.0 / np.pi**2 * (_decay(late) / ODD**2).sum(axis=-1)
    return np.where(np.asarray(tau) < SHORT_TAU, 1.0 - 4.0 * np.sqrt(early / np.pi), series)


def recharged_mid_m(
    aquifer: Aquifer, recharge_m_per_day: float, spacing_m: float, days: ArrayLike
) -> NDArray[np.float64]:
    """Height midway between two drains under steady recharge from rest; shape of `days`.

    Source: handbook 9.14; early on the middle rises as if there were no drains.

    Raises
    ------
    ValueError
        If the spacing is not above zero or a time is negative.
    """
    tau = drain_time(aquifer, spacing_m, days)
    full = recharge_m_per_day * spacing_m**2 / aquifer.transmissivity_m2_per_day
    late = np.maximum(tau, SHORT_TAU)
    series = 4.0 / np.pi**3 * (_decay(late) * (ALTERNATING / ODD**3)).sum(axis=-1)
    return full * np.where(tau < SHORT_TAU, tau, 1.0 / 8.0 - series)


@dataclass(frozen=True, slots=True)
class EmptyingStrip:
    """A strip on level rock that empties into an empty channel, its thickness changing.

    `depth_m` is the first depth at the divide, `length_m` from there to the channel.
    """

    depth_m: float
    length_m: float
    conductivity_m_per_day: float
    specific_yield: float

    def __post_init__(self) -> None:
        insist_positive(
            depth_m=self.depth_m,
            length_m=self.length_m,
            conductivity_m_per_day=self.conductivity_m_per_day,
            specific_yield=self.specific_yield,
        )

    def depth_at_m(self, distance_m: ArrayLike, days: ArrayLike) -> NDArray[np.float64]:
        """Depth of water at a distance from the divide; shapes broadcast.

        Source: handbook 9.15, h0 F(x/L)/(1 + a t). The similarity equation of F gives
        1 - x/L = I(F^3; 2/3, 1/2), the regularised incomplete beta function.

        Raises
        ------
        ValueError
            If a distance is outside the strip.
        """
        along = np.asarray(distance_m, dtype=np.float64) / self.length_m
        if not ((along >= 0.0) & (along <= 1.0)).all():
            raise ValueError("a distance lies outside the strip")
        shape = np.cbrt(betaincinv(2.0 / 3.0, 0.5, 1.0 - along))
        return self.depth_m * shape / self._slowing(days)

    def outflow_m2_per_day(self, days: ArrayLike) -> NDArray[np.float64]:
        """Flow into the channel per metre of its length. Source: handbook 9.15."""
        first = EMPTYING_FLOW * self.conductivity_m_per_day * self.depth_m**2 / self.length_m
        return first / self._slowing(days) ** 2

    def _slowing(self, days: ArrayLike) -> NDArray[np.float64]:
        insist_not_negative(days=days)
        rate = self.conductivity_m_per_day * self.depth_m / self.specific_yield / self.length_m**2
        return 1.0 + EMPTYING_RATE * rate * np.asarray(days, dtype=np.float64)


def _decay(tau: NDArray) -> NDArray[np.float64]:
    """exp(-n^2 pi^2 tau) for odd n on a last axis."""
    return np.exp(-(ODD**2) * np.pi**2 * tau[..., None])
