"""From the wall as drawn, the wall as built and the levels found to what their sheet shows."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from structures.drawing.survey import wall_drawn
from structures.drawing.view import Built, RockDrawn, SectionView
from structures.life.cautions import caution
from structures.wall.stretch import Stretch

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.drawing.view import StripBuilt
    from structures.ground.found import FoundLevel
    from structures.intake.pack import SurveyPack
    from structures.takeoff.as_built import AsBuilt
    from structures.wall.cutoff import Cutoff


def view_as_built(
    pack: SurveyPack,
    drawn: Cutoff | None,
    built: Cutoff,
    compared: AsBuilt,
    strips: Iterable[StripBuilt],
    found: Iterable[FoundLevel],
) -> SectionView:
    """Bring everything on the sheet as built together.

    Source: drawing conventions of this project, "as built beside as designed: firm over thin".

    Parameters
    ----------
    pack
        The survey whose ground the wall stands in.
    drawn
        The wall of the frozen drawing; None where no drawing is kept.
    built
        The wall of the rock line as found.
    compared
        Which stretches were measured.
    strips, found
        The strips of the wall, and the levels of rock seen in them.
    """
    film = pack.wall.film_faces > 0
    return SectionView(
        site_code=pack.site.code,
        site_name=pack.site.name or "",
        offset_m=np.array([point.offset_m for point in pack.ground]),
        ground_m=np.array([point.level_m for point in pack.ground]),
        toes_m=(pack.toes.left_m, pack.toes.right_m),
        rock=_line(built),
        wall=wall_drawn(built, film=film),
        cautions=(caution("raw-water"),),
        built=Built(
            measured=compared.measured,
            missed=tuple(Stretch(one.from_m, one.to_m) for one in compared.missed),
            strips=tuple(strips),
            found=tuple((one.offset_m, one.level_m) for one in found),
            line=None if drawn is None else _line(drawn),
            wall=None if drawn is None else wall_drawn(drawn, film=film),
        ),
    )


def _line(cutoff: Cutoff) -> RockDrawn:
    """Give the rock line that a wall was cut along, under the surveyed ground."""
    return RockDrawn(cutoff.section.offset_m, cutoff.section.rock_m[0])
