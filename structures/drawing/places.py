"""Places for labels: boxes on the sheet that must not touch each other."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Final, Literal

from structures.drawing.letters import ASCENT_EM, DESCENT_EM, width_mm

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

Anchor = Literal["start", "mid", "end"]
PAD_MM: Final = 0.4  # white at both ends of words, so that two labels never read as one
SHARE_LEFT: dict[str, float] = {"start": 0.0, "mid": 0.5, "end": 1.0}


@dataclass(frozen=True, slots=True)
class Box:
    """A part of the sheet in millimetres, y downwards."""

    left: float
    top: float
    right: float
    bottom: float

    def meets(self, other: Box) -> bool:
        """Say whether the two have some area in common."""
        return (
            self.left < other.right
            and other.left < self.right
            and self.top < other.bottom
            and other.top < self.bottom
        )

    def holds(self, other: Box) -> bool:
        """Say whether the other lies inside."""
        return (
            self.left <= other.left
            and other.right <= self.right
            and self.top <= other.top
            and other.bottom <= self.bottom
        )


@dataclass(frozen=True, slots=True)
class Label:
    """Lines of words with one anchor; `y` is the base line of the first."""

    x: float
    y: float
    lines: tuple[str, ...]
    anchor: Anchor = "start"
    strong: bool = False

    def box(self, size_mm: float, step_mm: float) -> Box:
        """Room that the words take."""
        width = max(width_mm(line, size_mm, strong=self.strong) for line in self.lines)
        left = self.x - SHARE_LEFT[self.anchor] * width
        last = self.y + step_mm * (len(self.lines) - 1)
        return Box(
            left - PAD_MM,
            self.y - ASCENT_EM * size_mm,
            left + width + PAD_MM,
            last + DESCENT_EM * size_mm,
        )


@dataclass(slots=True)
class Places:
    """What is taken on a sheet, and the first place that is still free."""

    limits: Box
    size_mm: float
    step_mm: float
    taken: list[Box] = field(default_factory=list)

    def take(self, *boxes: Box) -> None:
        """Keep other labels off these boxes."""
        self.taken += boxes

    def free(self, box: Box) -> bool:
        """Say whether a box lies on the sheet and touches nothing."""
        return self.limits.holds(box) and not any(box.meets(other) for other in self.taken)

    def put(self, candidates: Iterable[Label]) -> Label | None:
        """Take the first candidate that is free; None where none is."""
        for label in candidates:
            box = label.box(self.size_mm, self.step_mm)
            if self.free(box):
                self.take(box)
                return label
        return None


def spread(wanted: Sequence[float], gap_mm: float) -> list[float]:
    """Give places downwards, as near to the wanted ones as a gap between neighbours allows.

    Source: least squares under an order (pool adjacent violators): labels that would touch move
    apart as one group about the mean of what they wanted.

    Parameters
    ----------
    wanted
        Wanted places, rising, shape (n,).
    gap_mm
        Least distance between neighbours.
    """
    groups: list[list[float]] = []  # mean of the wanted first place, members
    for index, y in enumerate(wanted):
        groups.append([y - index * gap_mm, 1.0])
        while len(groups) > 1 and groups[-1][0] < groups[-2][0]:
            (mean, count), (before, others) = groups.pop(), groups.pop()
            groups.append([(mean * count + before * others) / (count + others), count + others])
    firsts = [mean for mean, count in groups for _ in range(int(count))]
    return [first + index * gap_mm for index, first in enumerate(firsts)]
