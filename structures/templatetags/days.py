"""Which day it is where a sheet belongs: the district's own, not the server's."""

from __future__ import annotations

from django import template

from structures.queries.districts import today_of

register = template.Library()


@register.filter
def today(district):
    """The day that counts in a district."""
    return today_of(district)
