"""The gate for rates and estimates, shared by tables, forms and serializers."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.core.exceptions import ValidationError

from structures.takeoff.quantity import ITEMS

if TYPE_CHECKING:
    from datetime import date
    from decimal import Decimal


def validate_priced_item(item: str, unit: str) -> None:
    """Insist that an item is known and priced in the unit in which it is measured."""
    if item not in ITEMS:
        raise ValidationError(f"There is no item {item}. Known: {', '.join(ITEMS)}.")
    if ITEMS[item] != unit:
        raise ValidationError(f"{item} is measured in {ITEMS[item]}, not in {unit}.")


def validate_rate(rate: Decimal | None) -> None:
    if rate is not None and not rate > 0:
        raise ValidationError(f"A rate is above zero, not {rate}.")


def validate_days(first: date | None, last: date | None) -> None:
    if first is not None and last is not None and last < first:
        raise ValidationError(f"It ends on {last}, before it begins on {first}.")
