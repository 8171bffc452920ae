"""A wall that ends on a shelf: its raised bottom, and what passes each way."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from costing.options.site import left_of
from structures.water.shelf import shelf_leak

if TYPE_CHECKING:
    from costing.appraisal import Appraisal
    from costing.options.site import OnSite
    from structures.water.shelf import ShelfLeak

EDGE_M: Final = 0.001  # [A] over this length the bottom steps up beside a covered strip


@dataclass(frozen=True, slots=True)
class Leak:
    """Water that passes, between two figures; None is "cannot be said", `words` say how and why.

    `share` is given for a wall on a shelf, always with its L/T.
    """

    least_m3_per_day: float | None
    most_m3_per_day: float | None
    words: str
    share: ShelfLeak | None = None


def raised(walk: Appraisal, shelf_m: float, site: OnSite) -> tuple[list[float] | None, list[float]]:
    """Raise the bottom of a wall to a shelf where nothing is covered.

    Source: the office's practice, the way "step".

    Returns
    -------
    tuple
        Offsets and levels of the new bottom; offsets are None where nothing is raised.
    """
    x, rock = walk.rock.offset_m, walk.rock.level_m
    above = rock - shelf_m
    i = np.flatnonzero(above[:-1] * above[1:] < 0.0)
    crossings = x[i] + (x[i + 1] - x[i]) * above[i] / (above[i] - above[i + 1])
    edges = np.array(site.covered, dtype=np.float64).reshape(-1, 2)
    beside = np.concatenate((edges[:, 0] - EDGE_M, edges[:, 1] + EDGE_M))
    at = np.unique(np.concatenate((x, crossings, edges.ravel(), beside)))
    at = at[(at >= x[0]) & (at <= x[-1])]
    level = np.interp(at, x, rock)
    covered = ((at[:, None] >= edges[:, 0]) & (at[:, None] <= edges[:, 1])).any(axis=1)
    new = np.where(covered, level, np.maximum(level, shelf_m))
    if not (new > level).any():
        return None, []
    return at.tolist(), new.tolist()


def leak_through_clay(walk: Appraisal) -> Leak:
    """Say what passes a wall that reaches rock. Source: handbook 9.3, clay as accepted at most."""
    words = "Through sound clay at the limit of acceptance, at most; the wall reaches rock."
    return Leak(None, walk.water.leakage_m3_per_day, words)


def leak_unfinished(walk: Appraisal) -> Leak:
    """Say what passes where the works stop: a wall that reaches rock in part hardly works (9.5)."""
    flow = walk.water.underflow_m3_per_day
    return Leak(flow, flow, "No wall is finished: reckon with all of the underflow passing.")


def leak_under_shelf(walk: Appraisal, shelf_m: float, reach_m: float | None, site: OnSite) -> Leak:
    """Say what passes under a wall that ends on a shelf. Source: handbook 9.4 (b) and 9.6.

    Parameters
    ----------
    walk
        The wall as if it went down to rock everywhere.
    shelf_m, reach_m
        Level of the shelf, and the reach over which the head drop is fixed, None if not given.
    site
        Its covered strips reach rock.
    """
    level_m = walk.pack.ground_water.water_level_m
    lacking = {
        "the reach over which the head drops": reach_m,
        "ground_water.water_level_m": level_m,
    }
    missing = [name for name, value in lacking.items() if value is None]
    if missing:
        return Leak(None, None, f"The leak cannot be said: {', '.join(missing)} not given.")
    part = left_of(walk, site)
    if part is None or level_m <= float(part.lowest_rock_m[0]):
        words = "The leak cannot be said: no rock under the water is left to close."
        return Leak(None, None, words)
    share = shelf_leak(
        walk.design.cutoff,
        shelf_m=shelf_m,
        water_m=level_m,
        reach_m=reach_m,
        down_to_rock=site.covered,
    )
    words = (
        f"{100 * share.least_share:.1f} to {100 * share.most_share:.1f} % of the underflow still "
        f"passes, with L/T {share.reach_over_layer:.1f} under the shelf and "
        f"{share.reach_over_width:.2f} in plan; leakage is never in proportion to the open area."
    )
    flow = walk.water.underflow_m3_per_day
    if flow is None:
        return Leak(None, None, words, share)
    return Leak(share.least_share * flow, share.most_share * flow, words, share)
