"""One measured quantity and the items that are measured, in their order."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

GATE_DECIMALS: Final = 6  # computed numbers are rounded to these first: exact ties survive (8.4)
# Item code -> unit, in the order of every list and sheet. Source: the interface's item codes.
ITEMS: Final[dict[str, str]] = {
    "excavation": "m3",
    "rock_key": "m3",
    "dewatering": "hour",
    "clay": "m3",
    "film": "m2",
    "centering": "m2",
    "backfill": "m3",
    "surplus": "m3",
    "marker": "each",
    "observation_pipe": "each",
}


@dataclass(frozen=True, slots=True)
class Quantity:
    """How much of one item, not rounded; None is "not known", and `working` then says why.

    Only excavation carries `from_m` and `to_m`: the lift's limits below ground.
    """

    item: str
    unit: str
    quantity: float | None
    from_m: float | None = None
    to_m: float | None = None
    working: str = ""

    def __post_init__(self) -> None:
        if ITEMS.get(self.item) != self.unit:
            raise ValueError(f"{self.item!r} is not measured in {self.unit!r}")
