"""Figures of two walls beside each other: the same rows for surveys compared and for a tried wall."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from django.utils.translation import gettext_lazy as _

WALL_ROWS: Final = {
    "crest_level_m": (_("Crest level"), "m"),
    "left_end_m": (_("Left end at offset"), "m"),
    "right_end_m": (_("Right end at offset"), "m"),
    "length_m": (_("Length in plan"), "m"),
    "face_area_m2": (_("Face, key included"), "m²"),
    "greatest_height_m": (_("Greatest height, key included"), "m"),
    "greatest_depth_to_key_m": (_("Greatest depth to the bottom of the key"), "m"),
}
SAME: Final = 0.005  # figures print two decimals; less than half of the last is no change


@dataclass(frozen=True, slots=True)
class FigureRow:
    """One figure of two walls; None where it is not known."""

    words: Any
    unit: str
    old: float | None
    new: float | None

    @property
    def change(self) -> float | None:
        """New less old, 0 where both print alike."""
        if self.old is None or self.new is None:
            return None
        change = self.new - self.old
        return 0.0 if abs(change) < SAME else change


def figure_rows(old: dict[str, Any] | None, new: dict[str, Any] | None) -> list[FigureRow]:
    """Compare wall and quantities of two appraisals, as a reading keeps them."""
    old, new = old or {}, new or {}
    walls = [one.get("wall") or {} for one in (old, new)]
    rows = [
        FigureRow(words, unit, walls[0].get(key), walls[1].get(key))
        for key, (words, unit) in WALL_ROWS.items()
    ]
    before, after = _quantities(old), _quantities(new)
    for key in dict.fromkeys((*before, *after)):
        item, first_m, last_m = key
        words = item.replace("_", " ")
        if last_m is not None:
            words = f"{words} {first_m:.1f} to {last_m:.1f} m"
        unit = (before.get(key) or after.get(key))["unit"]
        figures = [(side.get(key) or {}).get("quantity") for side in (before, after)]
        rows.append(FigureRow(words, unit.replace("m2", "m²").replace("m3", "m³"), *figures))
    return rows


def _quantities(one: dict[str, Any]) -> dict[tuple[Any, ...], dict[str, Any]]:
    listed = one.get("quantities") or []
    return {(row["item"], row["from_m"], row["to_m"]): row for row in listed}
