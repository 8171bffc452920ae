"""Two estimates line by line: what stood, what stands, and the difference where both are known."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from decimal import Decimal

    from costing.models import Estimate, EstimateLine

SUMS: Final = ("subtotal", "contingency", "overhead", "total", "sanction", "p10", "p50", "p90")
Place = tuple[str, float | None]  # item, and where its lift begins


@dataclass(frozen=True, slots=True)
class Change:
    """One line or sum in two estimates; None is "not known" or "not there"."""

    item: str
    from_m: float | None
    to_m: float | None
    old_quantity: Decimal | None
    new_quantity: Decimal | None
    old: Decimal | None
    new: Decimal | None

    @property
    def difference(self) -> Decimal | None:
        return None if self.old is None or self.new is None else self.new - self.old


def line_changes(old: Estimate, new: Estimate) -> list[Change]:
    """Give every line of either, in the order of the newer."""
    before, after = _by_place(old), _by_place(new)
    places = [*after, *(place for place in before if place not in after)]
    return [_change(before.get(place), after.get(place)) for place in places]


def sum_changes(old: Estimate, new: Estimate) -> list[Change]:
    return [
        Change(name, None, None, None, None, getattr(old, name), getattr(new, name))
        for name in SUMS
    ]


def _by_place(estimate: Estimate) -> dict[Place, EstimateLine]:
    return {(line.item, line.from_m): line for line in estimate.lines.order_by("order")}


def _change(old: EstimateLine | None, new: EstimateLine | None) -> Change:
    named = new or old
    return Change(
        item=named.item,
        from_m=named.from_m,
        to_m=named.to_m,
        old_quantity=None if old is None else old.quantity,
        new_quantity=None if new is None else new.quantity,
        old=None if old is None else old.amount,
        new=None if new is None else new.amount,
    )
