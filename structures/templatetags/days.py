"""Which day and hour it is where a sheet belongs: the district's own, not the server's."""

from __future__ import annotations

from datetime import date
from typing import Final
from zoneinfo import ZoneInfo

from django import template
from django.utils.dateformat import format as written

from structures.queries.districts import today_of

register = template.Library()
DAY: Final = "j M Y"
HOUR: Final = "j M Y H:i"
SECOND: Final = "H:i:s"


@register.filter
def today(district):
    """The day that counts in a district."""
    return today_of(district)


@register.filter
def day(written_so):
    """A day kept as text in a result (2027-03-14), as pages write it."""
    return written(date.fromisoformat(written_so), DAY)


@register.filter
def clock(at, zone):
    """A moment as the clocks of a zone show it; the page names the zone beside it."""
    return written(at.astimezone(ZoneInfo(zone)), HOUR)


@register.filter
def second(at, zone):
    """The time of day alone, to the second."""
    return written(at.astimezone(ZoneInfo(zone)), SECOND)
