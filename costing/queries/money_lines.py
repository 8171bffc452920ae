"""Money lines: what each gives, what is promised from it, what is left."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING

from django.db.models import Exists, OuterRef

from costing.models import MoneyLine, Sanction
from structures.access import Act, districts

if TYPE_CHECKING:
    from collections.abc import Iterable

    from django.db.models import QuerySet

    from structures.models import Structure, User


@dataclass(frozen=True, slots=True)
class LineSheet:
    """One line with its approvals in force, newest revision of each structure."""

    line: MoneyLine
    approvals: tuple[Sanction, ...]
    promised: Decimal

    @property
    def left(self) -> Decimal:
        return self.line.amount - self.promised


def visible_money_lines(user: User) -> QuerySet[MoneyLine]:
    found = MoneyLine.objects.filter(district__in=districts(user, Act.SEE_MONEY))
    return found.select_related("district", "by").order_by("district__code", "code")


def money_line_sheets(user: User) -> list[LineSheet]:
    """Every visible line with what is promised from it, in two queries."""
    lines = list(visible_money_lines(user))
    by_line: dict[int, list[Sanction]] = {line.pk: [] for line in lines}
    for one in _in_force().filter(money_line__in=lines):
        by_line[one.money_line_id].append(one)
    return [LineSheet(line, tuple(by_line[line.pk]), _sum(by_line[line.pk])) for line in lines]


def promised_from(line: MoneyLine) -> Decimal:
    return _sum(_in_force().filter(money_line=line))


def left_on(line: MoneyLine, *, besides: Structure) -> Decimal:
    """Give what is left on a line, the present approval of one structure not counted."""
    promised = _in_force().filter(money_line=line).exclude(structure=besides)
    return line.amount - _sum(promised)


def _in_force() -> QuerySet[Sanction]:
    """Approvals that no later revision of the same structure has replaced."""
    later = Sanction.objects.filter(
        structure=OuterRef("structure"),
        kind=OuterRef("kind"),
        revision__gt=OuterRef("revision"),
    )
    found = Sanction.objects.filter(kind=Sanction.Kind.ADMINISTRATIVE).exclude(Exists(later))
    return found.select_related("structure__site").order_by("structure__site__code")


def _sum(approvals: Iterable[Sanction]) -> Decimal:
    return sum((one.amount for one in approvals), start=Decimal(0))
