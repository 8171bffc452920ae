"""The drawing of a section as numbers: its twin for screen readers, for checking and for print."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

if TYPE_CHECKING:
    from structures.drawing.view import RockDrawn, SectionView, WallDrawn

SAME_M: Final = 1e-6  # offsets closer than this are one place, handbook 8.4 (six-decimal gate)


@dataclass(frozen=True, slots=True)
class SectionRow:
    """Levels at one offset; None where not known, or where no wall stands.

    At a toe, where the wall's top steps, two rows share an offset.
    """

    offset_m: float
    ground_m: float
    rock_low_m: float | None
    rock_m: float | None
    rock_high_m: float | None
    top_m: float | None
    bottom_m: float | None
    note: str


def section_numbers(view: SectionView) -> tuple[SectionRow, ...]:
    """Give the rows "as numbers" of a section.

    Source: the values that are drawn; between points everything is straight (handbook 5.9).

    Parameters
    ----------
    view
        What is drawn.

    Returns
    -------
    tuple of SectionRow
        One row at each ground point, toe, wall end, test and end of the rock line; two at a toe.
    """
    notes = _notes(view)
    rows = []
    for offset in _places(view):
        note = ", ".join(word for at, word in notes if abs(at - offset) < SAME_M)
        for top in _tops(view.wall, offset) or [None]:
            rock = _at(view.rock, "level_m", offset)
            rows.append(
                SectionRow(
                    offset_m=offset,
                    ground_m=float(view.ground(offset)),
                    rock_low_m=_at(view.rock, "low_m", offset),
                    rock_m=rock,
                    rock_high_m=_at(view.rock, "high_m", offset),
                    top_m=top,
                    bottom_m=None if top is None or rock is None else rock - view.wall.key_m,
                    note=note,
                )
            )
    return tuple(rows)


def _notes(view: SectionView) -> list[tuple[float, str]]:
    notes = [(view.toes_m[0], "left toe"), (view.toes_m[1], "right toe")]
    if view.wall is not None and len(view.wall.offset_m):
        for side, end, shut in zip(
            ("left", "right"), view.wall.ends_m, view.wall.closed, strict=True
        ):
            notes.append((end, f"{side} end, {'closed on rock' if shut else 'OPEN'}"))
        for bar in view.wall.bars:
            middle = (bar.from_m + bar.to_m) / 2.0
            notes += [
                (bar.from_m, "rock bar begins"),
                (middle, "rock bar"),
                (bar.to_m, "rock bar ends"),
            ]
    if view.rock is not None:
        start, stop = view.rock.reach
        notes += [(start, "rock line begins")] if start > view.reach[0] + SAME_M else []
        notes += [(stop, "rock line ends")] if stop < view.reach[1] - SAME_M else []
    return notes + [(test.offset_m, test.label) for test in view.tests]


def _places(view: SectionView) -> list[float]:
    """Offsets in order, each place once."""
    at = [*view.offset_m.tolist(), *(offset for offset, _ in _notes(view))]
    kept: list[float] = []
    for offset in sorted(at):
        if not kept or offset - kept[-1] >= SAME_M:
            kept.append(offset)
    return kept


def _at(rock: RockDrawn | None, name: str, offset_m: float) -> float | None:
    line = None if rock is None else getattr(rock, name)
    if line is None or not rock.reach[0] - SAME_M <= offset_m <= rock.reach[1] + SAME_M:
        return None
    return float(np.interp(offset_m, rock.offset_m, line))


def _tops(wall: WallDrawn | None, offset_m: float) -> list[float]:
    """Top of the wall at an offset: none, one, or two where it steps, the left one first."""
    tops: list[float] = []
    pieces = () if wall is None else zip(wall.offset_m, wall.top_m, strict=True)
    for (start, stop), (left, right) in pieces:
        if start - SAME_M <= offset_m <= stop + SAME_M:
            share = (offset_m - start) / (stop - start)
            top = float(left + (right - left) * min(max(share, 0.0), 1.0))
            if not tops or abs(top - tops[-1]) > SAME_M:
                tops.append(top)
    return tops
