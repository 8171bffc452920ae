"""First arrivals of a refraction line to the depth of rock with its range, or a refusal."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations, pairwise
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.arrays import frozen
from structures.ground.gaussian import NORMAL_90
from structures.ground.sounding_refusals import Refusal
from structures.ground.travel_times import (
    DippingPlane,
    dipping_plane,
    slowness,
    thicknesses_m,
)
from structures.intake.practice import HANDBOOK, Practice

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from numpy.typing import NDArray

    from structures.intake.pack import RefractionLine

LEAST_PICKS: Final = 6  # [A] on one side of a shot; fewer cannot show two branches
LEAST_ROCK_V: Final = 2000.0  # [A] m/s; slower may be water-filled sand (field rule RF-04)
MOST_ROCK_V: Final = 7000.0  # [A] m/s; no rock this near the ground is faster
WATER_V: Final = 1500.0  # [M] m/s, water-filled sand: the layer that may hide (handbook 3.6)
PICK_SD_S: Final = 0.001  # [A] s; error of a pick, the coarser of handbook 3 "attainable"
TWO_LAYERS: Final = 2
LEAST_ON_BRANCH: Final = 2  # picks that draw a straight line
PICKS_DIFFER: Final = (
    "its arrivals contradict each other: taken together they give no layers that get faster with "
    "depth. Look at triggers and picks, or shoot again."
)
GRID: Final = 80  # [A] thicknesses of each layer that are tried
MS: Final = 1000.0  # ms in a second


@dataclass(frozen=True, slots=True)
class RefractionReading:
    """What one refraction line says; depths are all None where `refusal` says why.

    `velocities_m_per_s` are those of the layers that were seen, from the top.
    """

    offset_m: float
    label: str
    velocities_m_per_s: tuple[float, ...] = ()
    rock_depth_m: float | None = None
    rock_depth_low_m: float | None = None
    rock_depth_high_m: float | None = None
    rock_depth_sd_m: float | None = None
    refusal: Refusal | None = None
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, eq=False, slots=True)
class Side:
    """Arrivals on one side of a shot, rising distances; `forward` towards greater stations."""

    x_m: NDArray[np.float64]
    t_s: NDArray[np.float64]
    forward: bool

    def __post_init__(self) -> None:
        for name in ("x_m", "t_s"):
            object.__setattr__(self, name, frozen(getattr(self, name)))


@dataclass(frozen=True, eq=False, slots=True)
class Branches:
    """Straight branches of the arrivals of one side: velocities (m/s), intercepts (s)."""

    side: Side
    velocities: tuple[float, ...]
    intercepts: tuple[float, ...]
    score: float


def interpret_refraction(
    line: RefractionLine, *, practice: Practice = HANDBOOK
) -> RefractionReading:
    """Read the depth of rock from a refraction line.

    Source: handbook 3.1 to 3.3 and 3.6. Each side of each shot is split into two or three straight
    branches by least squares; sides shot both ways give the dip. Water-filled sand that may hide
    between two branches is tried at every thickness.

    Parameters
    ----------
    line
        Picks along a spread that crosses the wall line at `offset_m`.
    practice
        Least error of the depth, and how far times there and back may differ.
    """
    known = {"offset_m": line.offset_m, "label": line.label}
    sides = [split for side in _sides(line) if (split := split_branches(side)) is not None]
    if not sides:
        why = (
            f"no side of a shot has {LEAST_PICKS} picks in two branches that grow faster with "
            "distance. Shoot again with geophones close to the shot and far beyond."
        )
        return RefractionReading(**known, refusal=Refusal("no-branches", why))
    layers = max(len(side.velocities) for side in sides)
    sides = [side for side in sides if len(side.velocities) == layers]
    known["notes"] = _notes(line, sides, practice.reciprocity_ms)
    try:
        velocities, plane = _velocities(sides)
    except ValueError:
        return RefractionReading(**known, refusal=Refusal("picks-differ", PICKS_DIFFER))
    known["velocities_m_per_s"] = velocities
    if velocities[-1] < LEAST_ROCK_V:
        why = (
            f"the fastest layer has {velocities[-1]:.0f} m/s, near that of water-filled sand: "
            "rock, or only the water table? Lengthen the spread, or bore."
        )
        return RefractionReading(**known, refusal=Refusal("no-fast-layer", why))
    if velocities[-1] > MOST_ROCK_V:
        why = (
            f"the fastest layer comes out at {velocities[-1]:.0f} m/s, faster than any rock: the dip "
            "is too steep for this spread, or picks are wrong. Shoot it from the other end too."
        )
        return RefractionReading(**known, refusal=Refusal("too-fast", why))
    layers_m = [_thicknesses_m(side, velocities, plane) for side in sides]
    if min(min(thicknesses) for thicknesses in layers_m) <= 0.0:
        return RefractionReading(**known, refusal=Refusal("picks-differ", PICKS_DIFFER))
    depths = [sum(thicknesses) for thicknesses in layers_m]
    depth, low, high, spread = _with_hidden_sand(sides, velocities, float(np.mean(depths)))
    least_m, share = practice.se_refraction_m, practice.se_refraction_share
    sd = max(least_m, share * depth, spread, float(np.std(depths)))
    return RefractionReading(
        **known,
        rock_depth_m=depth,
        rock_depth_low_m=max(min(low, depth - NORMAL_90 * sd), 0.0),
        rock_depth_high_m=max(high, depth + NORMAL_90 * sd),
        rock_depth_sd_m=sd,
    )


def _sides(line: RefractionLine) -> Iterable[Side]:
    """Give the two sides of every shot that have picks enough; repeated ones are averaged."""
    for shot in sorted({pick.shot_m for pick in line.picks}):
        for forward in (True, False):
            times: dict[float, list[float]] = {}
            for pick in line.picks:
                # At the shot itself no wave has travelled.
                if pick.shot_m == shot != pick.geophone_m and (pick.geophone_m > shot) == forward:
                    times.setdefault(abs(pick.geophone_m - shot), []).append(pick.time_ms / MS)
            if len(times) >= LEAST_PICKS:
                x = sorted(times)
                yield Side(x, [float(np.mean(times[one])) for one in x], forward)


def split_branches(side: Side) -> Branches | None:
    """Split arrivals into two or three straight branches, the first through the shot.

    The split with the least Bayesian information criterion is taken; None where no split has
    velocities that grow and intercepts above zero.

    Parameters
    ----------
    side
        One side of a shot, shape (n,).
    """
    n = side.x_m.size
    cuts = [(i,) for i in range(1, n - 1)]
    cuts += [(i, j) for i, j in combinations(range(1, n - 1), 2) if j - i >= LEAST_ON_BRANCH]
    fits = [_fit(side, cut) for cut in cuts]
    return min((fit for fit in fits if fit is not None), key=lambda fit: fit.score, default=None)


def _fit(side: Side, cut: tuple[int, ...]) -> Branches | None:
    """Fit one split; None where it is not one of ground that gets faster with depth."""
    x, t = side.x_m, side.t_s
    first = slice(0, cut[0])
    slopes, intercepts = [float(x[first] @ t[first] / (x[first] @ x[first]))], []
    misfit = float(np.sum((t[first] - slopes[0] * x[first]) ** 2))
    for start, stop in zip(cut, (*cut[1:], x.size), strict=True):
        part, times = x[start:stop], t[start:stop]
        middle = part.mean()
        slope = float((part - middle) @ times / ((part - middle) @ (part - middle)))
        intercept = float(times.mean() - slope * middle)
        misfit += float(np.sum((times - slope * part - intercept) ** 2))
        slopes.append(slope)
        intercepts.append(intercept)
    falling = all(0.0 < later < earlier for earlier, later in pairwise(slopes))
    if not falling or not all(a < b for a, b in zip((0.0, *intercepts), intercepts, strict=False)):
        return None
    unknowns = 1 + 3 * len(cut)
    score = x.size * np.log(misfit / x.size + PICK_SD_S**2) + unknowns * np.log(x.size)
    return Branches(side, tuple(1.0 / s for s in slopes), tuple(intercepts), float(score))


def _velocities(sides: Sequence[Branches]) -> tuple[tuple[float, ...], DippingPlane | None]:
    """Give true velocities; the deepest freed of the dip where both directions were shot."""
    both = [_mean_velocities([s for s in sides if s.side.forward is way]) for way in (True, False)]
    mean = _mean_velocities(sides)
    if any(one is None for one in both) or len(mean) > TWO_LAYERS:
        return mean, None
    V1 = mean[0]
    plane = dipping_plane(V1, both[0][-1], both[1][-1])
    return (V1, plane.velocity(V1)), plane


def _mean_velocities(sides: Sequence[Branches]) -> tuple[float, ...] | None:
    """Average the slownesses, which is what a dip turns up and down alike."""
    if not sides:
        return None
    slownesses = np.mean([[1.0 / v for v in side.velocities] for side in sides], axis=0)
    return tuple(float(v) for v in 1.0 / slownesses)


def _thicknesses_m(
    side: Branches, velocities: tuple[float, ...], plane: DippingPlane | None
) -> tuple[float, ...]:
    if plane is not None:
        return (plane.vertical_m(velocities[0], side.intercepts[0]),)
    return thicknesses_m(velocities, side.intercepts)


def _with_hidden_sand(
    sides: Sequence[Branches], velocities: tuple[float, ...], shallow_m: float
) -> tuple[float, float, float, float]:
    """Give median, 10 and 90 % point and sd of the depth where water-filled sand may hide.

    Source: handbook 3.6. Dry sand and a hidden layer of 1500 m/s take every pair of thicknesses on
    a grid, as shares of the depth without one; each pair counts by how well its first arrivals
    meet the picks, so geophones too far apart to catch the hidden layer widen the range by
    themselves. A share of the depth is the same share of each side's intercept, whatever the dip.
    """
    V1, V3 = velocities[0], velocities[-1]
    if len(velocities) > TWO_LAYERS or not V1 < WATER_V < V3:
        return shallow_m, shallow_m, shallow_m, 0.0
    dry = np.linspace(0.02, 1.1, GRID)[:, None, None]
    wet = np.linspace(0.0, 2.0, GRID)[None, :, None]
    to_wet = slowness(V1, WATER_V) / slowness(V1, V3)
    through_wet = slowness(WATER_V, V3) / slowness(V1, V3)
    misfit = np.zeros((GRID, GRID))
    for one in sides:
        x, t, (ti,) = one.side.x_m, one.side.t_s, one.intercepts
        middle = x / WATER_V + ti * dry * to_wet
        deep = x / one.velocities[-1] + ti * (dry + wet * through_wet)
        first = np.minimum(np.minimum(x / one.velocities[0], middle), deep)
        misfit += np.sum(((t - first) / PICK_SD_S) ** 2, axis=2)
    weight = np.exp(-0.5 * (misfit - misfit.min())).ravel()
    weight /= weight.sum()
    depth = shallow_m * (dry + wet).ravel()
    order = np.argsort(depth)
    low, median, high = depth[order][np.searchsorted(np.cumsum(weight[order]), (0.1, 0.5, 0.9))]
    mean = float(weight @ depth)
    sd = float(np.sqrt(weight @ (depth - mean) ** 2))
    # Nothing hidden is always possible, however the grid weighs it.
    return float(median), min(float(low), shallow_m), float(high), sd


def _notes(line: RefractionLine, sides: Sequence[Branches], limit_ms: float) -> tuple[str, ...]:
    notes = []
    if len({side.side.forward for side in sides}) == 1:
        notes.append(
            "Rock shows in one direction only: its dip cannot be told, the depth is doubtful."
        )
    time_ms = {(pick.shot_m, pick.geophone_m): pick.time_ms for pick in line.picks}
    for (shot, geophone), one_way in time_ms.items():
        back = time_ms.get((geophone, shot))
        if shot < geophone and back is not None and abs(one_way - back) > limit_ms:
            notes.append(
                f"Times from {shot:g} to {geophone:g} m differ by {abs(one_way - back):.1f} ms "
                "forward and back: one trigger was late, or a pick is wrong."
            )
    return tuple(notes)
