"""Everything measured on a wall, one value a draw: what a price needs and no money yet."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TYPE_CHECKING

import numpy as np

from structures.takeoff.centering import centering_m2
from structures.takeoff.clay import clay_of_wall, rock_key_m3
from structures.takeoff.film import film_net_m2, film_with_laps_m2
from structures.takeoff.trench import surplus_m3

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.intake.pack import WallSettings


@dataclass(frozen=True, eq=False, slots=True)
class WallWorks:
    """What follows from face and length alone, so it adds up over pieces; all of one shape."""

    length_m: NDArray[np.float64]
    face_area_m2: NDArray[np.float64]
    face_above_rock_m2: NDArray[np.float64]
    rock_key_m3: NDArray[np.float64]
    clay_m3: NDArray[np.float64]
    clay_borrow_m3: NDArray[np.float64]
    clay_loose_m3: NDArray[np.float64]
    film_net_m2: NDArray[np.float64]
    film_m2: NDArray[np.float64]
    centering_m2: NDArray[np.float64]
    surplus_m3: NDArray[np.float64]

    def __post_init__(self) -> None:
        for field in fields(self):
            getattr(self, field.name).setflags(write=False)


@dataclass(frozen=True, eq=False, slots=True)
class Takings:
    """What was measured, shape (draws,) each; excavation by lift, shape (draws, lifts).

    `limits_m` are the limits of the lifts below ground, shape (lifts + 1,). `line_m` runs from
    end to end, rock bars included; the length in `works` counts only where the wall stands.
    """

    settings: WallSettings
    limits_m: NDArray[np.float64]
    excavation_m3: NDArray[np.float64]
    line_m: NDArray[np.float64]
    works: WallWorks
    backfill_m3: NDArray[np.float64]
    markers: NDArray[np.float64]
    observation_pipes: NDArray[np.float64]

    def __post_init__(self) -> None:
        for field in fields(self):
            value = getattr(self, field.name)
            if isinstance(value, np.ndarray):
                value.setflags(write=False)

    @property
    def draws(self) -> int:
        """Number of rock lines measured."""
        return self.line_m.size

    @property
    def by_item(self) -> dict[str, NDArray[np.float64]]:
        """Quantities by item code, shape (draws,), in item order.

        Excavation (by lift) and dewatering (from the plan of pumping) stand apart.
        """
        return {
            "rock_key": self.works.rock_key_m3,
            "clay": self.works.clay_m3,
            "film": self.works.film_m2,
            "centering": self.works.centering_m2,
            "backfill": self.backfill_m3,
            "surplus": self.works.surplus_m3,
            "marker": self.markers,
            "observation_pipe": self.observation_pipes,
        }


def measure_works(
    length_m: NDArray, face_above_rock_m2: NDArray, settings: WallSettings
) -> WallWorks:
    """Measure what follows from length and face: of whole walls, or of pieces of one.

    Source: handbook 5.3 (face with the key), 6.1, 6.3 to 6.6.

    Parameters
    ----------
    length_m, face_above_rock_m2
        Length and face area above the rock line, of one shape.
    settings
        Settings of wall and trench.
    """
    face = face_above_rock_m2 + settings.key_m * length_m
    clay = clay_of_wall(
        face,
        settings.thickness_m,
        borrow_factor=settings.borrow_factor,
        loose_factor=settings.loose_factor,
        waste_share=settings.clay_waste,
    )
    net = film_net_m2(
        face,
        length_m,
        faces=settings.film_faces,
        anchor_m=settings.film_anchor_m,
        fold_m=settings.film_fold_m,
    )
    return WallWorks(
        length_m=length_m,
        face_area_m2=face,
        face_above_rock_m2=face_above_rock_m2,
        rock_key_m3=rock_key_m3(length_m, settings.thickness_m, settings.key_m),
        clay_m3=clay.in_place_m3,
        clay_borrow_m3=clay.borrow_m3,
        clay_loose_m3=clay.loose_m3,
        film_net_m2=net,
        film_m2=film_with_laps_m2(net, settings.film_width_m, settings.film_lap_m),
        centering_m2=centering_m2(face_above_rock_m2),
        surplus_m3=surplus_m3(clay.in_place_m3, settings.surplus_bulking),
    )
