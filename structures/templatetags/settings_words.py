"""Defaults in words: where a value comes from by name, and who answers for it."""

from __future__ import annotations

from django import template
from django.utils.formats import number_format
from django.utils.translation import gettext as _

register = template.Library()


@register.filter
def source_words(mark):
    """A source by its name; the numbers are those of the handbook's list, 14."""
    return {
        "C": _("common practice, no source"),
        "A": _("decided for this program"),
        "M": _("from memory: put the office's own in its place"),
        "P 1": _("reference pages on permissible closing error, second-hand"),
        "P 2": _("TM 5-818-5, Dewatering and Groundwater Control, 1983"),
        "P 9": _("CPWD Works Manual 2012"),
    }[mark]


@register.filter
def owner_words(owner):
    return {
        "E": _("licensed engineer"),
        "D": _("district office"),
        "P": _("programme manager"),
    }[owner]


@register.filter
def plain(value):
    """A default as it is written: no more decimals than it has, tiny ones in powers of ten."""
    text = f"{value:g}"
    if "e" in text:
        return text
    return number_format(text, len(text.partition(".")[2]), use_l10n=True, force_grouping=True)


@register.filter
def unit_words(unit):
    return "" if unit == "-" else {"m2": "m²", "m3/h": "m³/h", "ohm m": "Ω m"}.get(unit, unit)
