"""What at most goes missing below: shares by catchment, and the first point that hardly feels it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from structures.intake.defaults import WATER
from structures.water.bounds import insist_positive

SHARE_LIMIT: Final = WATER["downstream_limit_percent"]


@dataclass(frozen=True, slots=True)
class Point:
    """A place downstream with all the catchment above it."""

    name: str
    catchment_km2: float


@dataclass(frozen=True, slots=True)
class PointShare:
    """Share of the water at a point that is cut off, at most."""

    point: Point
    share: float
    under_limit: bool


@dataclass(frozen=True, slots=True)
class Screening:
    """Shares going downstream; `first_under` is None where no point is under the limit."""

    shares: tuple[PointShare, ...]
    first_under: Point | None
    limit_percent: float


def screen_downstream(
    dam_catchment_km2: float,
    points: tuple[Point, ...],
    *,
    held_share: float = 1.0,
    limit_percent: float = SHARE_LIMIT.value,
) -> Screening:
    """Bound the share cut off at each point downstream.

    Source: handbook 9.19, f * A_dam/A_j; where side streams join, the loss thins out. Under the
    limit means strictly less. People above the first such point are heard first.

    Parameters
    ----------
    dam_catchment_km2
        Catchment above the wall.
    points
        Going downstream, so catchments do not shrink and none is smaller than the wall's.
    held_share
        Share of the underflow that is held; 1 for screening.
    limit_percent
        Limit of the share.

    Raises
    ------
    ValueError
        If points are out of order, or a share or the limit is outside its range.
    """
    insist_positive(dam_catchment_km2=dam_catchment_km2)
    if not 0.0 <= held_share <= 1.0:
        raise ValueError(f"a held share of {held_share:g} is not between 0 and 1")
    if not SHARE_LIMIT.low <= limit_percent <= SHARE_LIMIT.high:
        raise ValueError(f"a limit of {limit_percent:g} % is not accepted")
    above_km2 = dam_catchment_km2
    shares = []
    for point in points:
        if point.catchment_km2 < above_km2:
            raise ValueError(f"{point.name} has less catchment than the point above it")
        above_km2 = point.catchment_km2
        share = held_share * dam_catchment_km2 / above_km2
        shares.append(PointShare(point, share, 100.0 * share < limit_percent))
    first = next((one.point for one in shares if one.under_limit), None)
    return Screening(tuple(shares), first, limit_percent)
