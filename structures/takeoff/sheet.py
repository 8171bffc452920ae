"""The quantities of one design in item order, and the measurement sheet that they add up from."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.takeoff.markers import count_markers
from structures.takeoff.quantity import GATE_DECIMALS, ITEMS, Quantity
from structures.takeoff.takings import Takings, measure_works
from structures.takeoff.trench import (
    backfill_m3,
    excavation_by_lift_m3,
    lift_limits_m,
    volume_below_m3,
)

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.intake.pack import WallSettings
    from structures.takeoff.dewatering import Pumping
    from structures.wall.cutoff import Cutoff, Upright

PIECE_COLUMNS: Final = (  # of a row, as the works of the wall name them
    "length_m",
    "face_area_m2",
    "face_above_rock_m2",
    "rock_key_m3",
    "clay_m3",
    "film_m2",
    "centering_m2",
    "surplus_m3",
)
LEAST_LISTED: Final = 0.005  # a lift that rounds to 0.00 is not listed, handbook 8.4


def measure(cutoff: Cutoff, settings: WallSettings) -> Takings:
    """Measure the wall of every draw. Where no wall stands every quantity is 0.

    Source: handbook section 6; with an open flank, of the surveyed part.

    Parameters
    ----------
    cutoff
        The wall of every draw.
    settings
        The settings that the section was made with.
    """
    works = measure_works(cutoff.length_m, cutoff.face_above_rock_m2, settings)
    limits = lift_limits_m(float(cutoff.greatest_depth_m.max()), settings.lift_m)
    excavation = excavation_by_lift_m3(cutoff, limits)
    line, there = cutoff.ends.line_m, works.length_m > 0.0
    return Takings(
        settings=settings,
        limits_m=limits,
        excavation_m3=excavation,
        line_m=line,
        works=works,
        backfill_m3=backfill_m3(
            excavation.sum(axis=1), works.face_above_rock_m2, settings.thickness_m
        ),
        markers=np.where(there, count_markers(line, settings.marker_spacing_m), 0.0),
        observation_pipes=np.where(there, float(settings.observation_pipes), 0.0),
    )


def quantities(takings: Takings, pumping: Pumping) -> tuple[Quantity, ...]:
    """Give the quantities of one rock line in item order, not rounded, with their working.

    Source: handbook section 6; 8.4 (a lift is listed when it rounds above 0.00, dewatering
    always, with None where the hours are not known).

    Raises
    ------
    ValueError
        If more than one rock line was measured.
    """
    if takings.draws != 1:
        raise ValueError(f"one rock line is asked for, got {takings.draws} draws")
    hours = None if pumping.hours is None else float(pumping.hours[0])
    known = {item: float(values[0]) for item, values in takings.by_item.items()}
    known["dewatering"] = hours
    workings = _workings(takings)
    workings["dewatering"] = pumping.working or pumping.why
    rest = (item for item in ITEMS if item != "excavation")
    return (
        *_lifts(takings),
        *(Quantity(item, ITEMS[item], known[item], working=workings[item]) for item in rest),
    )


def _lifts(takings: Takings) -> list[Quantity]:
    limits = takings.limits_m.tolist()
    return [
        Quantity(
            "excavation",
            ITEMS["excavation"],
            volume,
            from_m,
            to_m,
            f"trench in place, {from_m:g} to {to_m:g} m below ground",
        )
        for volume, from_m, to_m in zip(
            takings.excavation_m3[0].tolist(), limits[:-1], limits[1:], strict=True
        )
        if round(volume, GATE_DECIMALS) >= LEAST_LISTED
    ]


def _workings(takings: Takings) -> dict[str, str]:
    """Say in one line each how a quantity follows from face, length and settings."""
    wall = takings.settings
    length, line = float(takings.works.length_m[0]), float(takings.line_m[0])
    face, above_rock = (
        float(takings.works.face_area_m2[0]),
        float(takings.works.face_above_rock_m2[0]),
    )
    return {
        "rock_key": f"{wall.thickness_m:g} m x {wall.key_m:g} m x {length:.3f} m",
        "clay": f"{wall.thickness_m:g} m x face {face:.3f} m2",
        "film": (
            f"{wall.film_faces} x (face {face:.3f} m2 + {length:.3f} m x "
            f"({wall.film_anchor_m:g} + {wall.film_fold_m:g}) m), laps {wall.film_width_m:g}/"
            f"({wall.film_width_m:g} - {wall.film_lap_m:g})"
        ),
        "centering": f"2 x face above rock {above_rock:.3f} m2",
        "backfill": (
            f"excavation {float(takings.excavation_m3[0].sum()):.3f} m3 - {wall.thickness_m:g} m x "
            f"face above rock {above_rock:.3f} m2"
        ),
        "surplus": f"wall {float(takings.works.clay_m3[0]):.3f} m3 x {wall.surplus_bulking:g} loose",
        "marker": f"both ends and every {wall.marker_spacing_m:g} m on {line:.3f} m",
        "observation_pipe": "at least one upstream and one downstream",
    }


@dataclass(frozen=True, slots=True)
class SheetUpright:
    """One side of a row: offset, levels, depth to rock and side slope there."""

    offset_m: float
    ground_m: float
    top_m: float
    rock_m: float
    bottom_m: float
    depth_m: float
    slope: float


@dataclass(frozen=True, slots=True)
class SheetRow:
    """One piece of the wall between two uprights, everything straight between them.

    `excavation_m3` is by lift, as many values as the takings have lifts.
    """

    start: SheetUpright
    stop: SheetUpright
    excavation_m3: tuple[float, ...]
    backfill_m3: float
    length_m: float
    face_area_m2: float
    face_above_rock_m2: float
    rock_key_m3: float
    clay_m3: float
    film_m2: float
    centering_m2: float
    surplus_m3: float


def measurement_sheet(cutoff: Cutoff, takings: Takings) -> tuple[SheetRow, ...]:
    """Give the wall piece by piece; the rows add up to the takings.

    Source: handbook 5.9 and section 6, piece by piece. A row ends where ground, rock, side slope
    or the wall's top changes direction, so an auditor can measure each again.

    Parameters
    ----------
    cutoff
        The wall of one rock line.
    takings
        What was measured on it.

    Raises
    ------
    ValueError
        If there is more than one rock line.
    """
    if takings.draws != 1 or cutoff.section.draws != 1:
        raise ValueError("a measurement sheet is made of one rock line")
    there = cutoff.stands[0]
    below = np.stack([volume_below_m3(cutoff, limit)[0] for limit in takings.limits_m], axis=1)
    lifts = (below[:, :-1] - below[:, 1:])[there]
    works = measure_works(
        cutoff.width_m[0][there], cutoff.piece_face_above_rock_m2[0][there], takings.settings
    )
    backfill = backfill_m3(
        lifts.sum(axis=1), works.face_above_rock_m2, takings.settings.thickness_m
    )
    columns = zip(*(getattr(works, name).tolist() for name in PIECE_COLUMNS), strict=True)
    key_m = cutoff.section.key_m
    return tuple(
        SheetRow(start, stop, tuple(by_lift), filled, **dict(zip(PIECE_COLUMNS, rest, strict=True)))
        for start, stop, by_lift, filled, rest in zip(
            _uprights(cutoff.left, there, key_m),
            _uprights(cutoff.right, there, key_m),
            lifts.tolist(),
            backfill.tolist(),
            columns,
            strict=True,
        )
    )


def _uprights(side: Upright, there: NDArray, key_m: float) -> list[SheetUpright]:
    columns = (
        side.offset_m,
        side.ground_m,
        side.top_m,
        side.rock_m,
        side.rock_m - key_m,
        side.depth_m,
        side.slope,
    )
    return [
        SheetUpright(*row) for row in zip(*(c[0][there].tolist() for c in columns), strict=True)
    ]
