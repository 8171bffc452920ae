"""Rate schedules of a user's districts; a kept one as the record that prices."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING

from django.db.models import Count, Q

from costing.models import RateSchedule
from costing.price import rates
from structures import access
from structures.errors import Finding
from structures.intake.pack import Note

if TYPE_CHECKING:
    from datetime import date

    from django.db.models import QuerySet

    from structures.models import District, User

Place = tuple[str, float | None]  # item, and the depth at which its lift begins


def visible_schedules(user: User) -> QuerySet[RateSchedule]:
    found = RateSchedule.objects.filter(district__in=access.districts(user, access.Act.SEE_MONEY))
    return (
        found.select_related("district", "by", "upload")
        .annotate(rate_count=Count("rates"))
        .order_by("-at", "-pk")
    )


def schedules_valid_on(district: District, day: date) -> QuerySet[RateSchedule]:
    """Schedules of a district that hold on a day, the one that counts first."""
    begun = Q(valid_from__isnull=True) | Q(valid_from__lte=day)
    not_over = Q(valid_to__isnull=True) | Q(valid_to__gte=day)
    return RateSchedule.objects.filter(begun, not_over, district=district).order_by("-at", "-pk")


def schedule_record(schedule: RateSchedule) -> rates.RateSchedule:
    """Give a kept schedule as the record that prices; equal to the one that was handed in."""
    return rates.RateSchedule(
        schedule_id=schedule.code,
        currency=schedule.currency,
        rates=tuple(
            rates.Rate(
                item=row.item,
                unit=row.unit,
                rate=row.rate,
                from_m=row.from_m,
                description=row.description or None,
            )
            for row in schedule.rates.all()
        ),
        contingency_percent=schedule.contingency_percent.normalize() + Decimal(0),
        overhead_percent=schedule.overhead_percent.normalize() + Decimal(0),
        valid_from=schedule.valid_from,
        valid_to=schedule.valid_to,
        findings=tuple(Finding(**one) for one in schedule.findings),
        notes=tuple(Note(**one) for one in schedule.notes),
    )


@dataclass(frozen=True, slots=True)
class RateChange:
    """One item, or a lift of it, that differs between two schedules; None where it is not there."""

    item: str
    from_m: float | None
    before: Decimal | None
    after: Decimal | None

    @property
    def kind(self) -> str:
        if self.before is None:
            return "added"
        return "removed" if self.after is None else "changed"


def differences(
    before: rates.RateSchedule | None, after: rates.RateSchedule
) -> tuple[RateChange, ...]:
    """Compare two schedules item by item, percentages included, in the order of the items."""
    old, new = ({} if before is None else _prices(before)), _prices(after)
    places = [*new, *(place for place in old if place not in new)]
    return tuple(
        RateChange(item, from_m, old.get((item, from_m)), new.get((item, from_m)))
        for item, from_m in places
        if old.get((item, from_m)) != new.get((item, from_m))
    )


def _prices(schedule: rates.RateSchedule) -> dict[Place, Decimal]:
    prices: dict[Place, Decimal] = {(one.item, one.from_m): one.rate for one in schedule.rates}
    for key in ("contingency_percent", "overhead_percent"):
        prices[key, None] = getattr(schedule, key)
    return prices
