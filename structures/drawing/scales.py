"""Scales of a section: standard ones, with the heights drawn larger by a plain number."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

# Denominators of the scales engraved on metric scale rulers, per power of ten.
MANTISSAS: Final = (1.0, 1.25, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 7.5)
POWERS: Final = (10, 100, 1000, 10000)
MOST_TIMES: Final = 25.0  # [A] heights over lengths; beyond it a slope can no longer be judged
LEAST_WIDTH_MM: Final = 40.0  # [A] a section drawn true to scale but narrower says nothing
WORDS: Final = {
    1.5: "one and a half times",
    2.0: "twice",
    2.5: "two and a half times",
    3.0: "three times",
    4.0: "four times",
    5.0: "five times",
    10.0: "ten times",
}


@dataclass(frozen=True, slots=True)
class Scales:
    """Denominators of the scale of lengths and of the scale of heights."""

    length: float
    height: float

    @property
    def mm_per_m(self) -> float:
        """Millimetres on paper for a metre along the section."""
        return 1000.0 / self.length

    @property
    def rise_mm_per_m(self) -> float:
        """Millimetres on paper for a metre of height."""
        return 1000.0 / self.height

    @property
    def times(self) -> float:
        """How many times as tall as lengths the heights are drawn."""
        return self.length / self.height

    @property
    def words(self) -> str:
        """Say the exaggeration in words, or as a number where there is no short word."""
        return WORDS.get(self.times, f"{self.times:g} times")


def choose_scales(span_m: float, rise_m: float, width_mm: float, height_mm: float) -> Scales:
    """Choose the largest standard scales that fit the paper.

    Source: common drafting practice. Lengths take the largest scale that fits the width. Heights
    take the largest that fits the height and is a whole or half number of times as tall; where
    that would be flatter than true, both take one scale, as long as the drawing stays wide enough.

    Parameters
    ----------
    span_m, rise_m
        Length and height to be drawn, above zero.
    width_mm, height_mm
        Room on paper.

    Raises
    ------
    ValueError
        If a length is not above zero, or no scale is small enough.
    """
    if min(span_m, rise_m, width_mm, height_mm) <= 0.0:
        raise ValueError("lengths and room on paper are above zero")
    scales = [p * m for p in POWERS for m in MANTISSAS]
    length = _first_fit(scales, span_m, width_mm)
    height = next(
        (h for h in scales if rise_m * 1000.0 / h <= height_mm and _plain(length / h)), None
    )
    if height is not None:
        return Scales(length, height)
    both = _first_fit(scales, rise_m, height_mm)
    if span_m * 1000.0 / both >= LEAST_WIDTH_MM:
        return Scales(both, both)
    return Scales(next(n for n in reversed(scales) if span_m * 1000.0 / n >= LEAST_WIDTH_MM), both)


def _first_fit(denominators: list[float], metres: float, room_mm: float) -> float:
    fitting = (n for n in denominators if metres * 1000.0 / n <= room_mm + 1e-9)
    found = next(fitting, None)
    if found is None:
        raise ValueError(f"{metres:g} m do not fit {room_mm:g} mm at any scale")
    return found


def _plain(times: float) -> bool:
    """Say whether heights are drawn a whole or half number of times as tall, within reason."""
    return 1.0 <= times <= MOST_TIMES and abs(2.0 * times - round(2.0 * times)) < 1e-9


def round_step(least: float) -> float:
    """Give the smallest of 1, 2, 5 times a power of ten that is not below the least."""
    power = 0.001
    while True:
        for step in (1.0, 2.0, 5.0):
            if step * power >= least * (1.0 - 1e-9):
                return step * power
        power *= 10.0
