"""Where the wall ends under the banks, and whether it ties into rock there."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from structures.wall.section import SAME_LEVEL_M

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from structures.wall.section import Section


@dataclass(frozen=True, eq=False, slots=True)
class Ends:
    """Ends of the wall line, one value a draw, shape (draws,); an open flank is not `closed`."""

    left_m: NDArray[np.float64]
    right_m: NDArray[np.float64]
    closed_left: NDArray[np.bool_]
    closed_right: NDArray[np.bool_]

    @property
    def line_m(self) -> NDArray[np.float64]:
        """From end to end, rock bars included; shape (draws,)."""
        return self.right_m - self.left_m


def find_ends(section: Section) -> Ends:
    """Go outward from each toe to where the rock first reaches the closing level.

    Source: handbook 5.5. Rock that high at the toe itself ends the wall at the toe. Where the
    section ends first, or the rock line does not reach the toe, the flank is open and its end is
    the last known offset.
    """
    x, rock = section.offset_m, section.rock_m
    closing = section.closing_level_m
    right_m, closed_right = _outward(x, rock, section.right_toe_m, closing)
    # The left bank is the right bank seen from the other side.
    left_m, closed_left = _outward(-x[::-1], rock[:, ::-1], -section.left_toe_m, closing)
    return Ends(-left_m, right_m, closed_left, closed_right)


def _outward(
    x: NDArray, rock: NDArray, toe_m: float, closing_m: float
) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    """First offset from the toe to the right with rock at the closing level; is there one."""
    draws = rock.shape[0]
    if not x[0] <= toe_m <= x[-1]:
        return np.full(draws, x[-1]), np.zeros(draws, dtype=bool)
    start = int(np.searchsorted(x, toe_m))
    high = rock[:, start:] >= closing_m - SAME_LEVEL_M
    closed = high.any(axis=1)
    j = start + np.where(closed, high.argmax(axis=1), 0)
    rows = np.arange(draws)
    before = np.maximum(j - 1, start)
    low, reached = rock[rows, before], rock[rows, j]
    climbed = j > before  # not so where the rock is that high at the toe itself
    share = np.divide(closing_m - low, reached - low, out=np.ones(draws), where=climbed)
    crossing = x[before] + (x[j] - x[before]) * np.minimum(share, 1.0)
    return np.where(closed, crossing, x[-1]), closed
