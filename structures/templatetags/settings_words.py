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
        "P 13": _("a contractors' summary of 29 CFR 1926 Subpart P, second-hand"),
    }[mark]


@register.filter
def owner_words(owner):
    return {
        "E": _("licensed engineer"),
        "D": _("district office"),
        "P": _("programme manager"),
    }[owner]


@register.filter
def group_words(name):
    return {
        "Wall and trench": _("Wall and trench"),
        "Rock and soundings": _("Rock and soundings"),
        "Water and pumping": _("Water and pumping"),
        "Work on site": _("Work on site"),
        "Estimate": _("Estimate"),
        "Rates and worth": _("Rates and worth"),
        "Sanction and approval": _("Sanction and approval"),
        "Effect of a wall": _("Effect of a wall"),
    }[name]


@register.filter
def plain(value):
    """A default as it is written: no more decimals than it has, tiny ones in powers of ten."""
    text = f"{value:.15g}"  # as many digits as a typed number keeps
    if "e" in text:
        return text
    return number_format(text, len(text.partition(".")[2]), use_l10n=True, force_grouping=True)


@register.filter
def figure_of(default, value):
    """What counts of a default: its value, or the words for what nobody has said yet."""
    return default.unset if value is None else plain(value)


@register.filter
def accepted(default):
    """The accepted range; of an amount only that it is none below nothing."""
    if default.unit == "amount":
        return _("0 or more")
    return f"{plain(default.low)} \u2013 {plain(default.high)}"


UNITS = {
    "-": "",
    "amount": "",
    "m2": "m²",
    "m3/h": "m³/h",
    "ohm m": "Ω m",
    "m2 a gang and day": "m² a gang and day",
    "m3 a gang and day": "m³ a gang and day",
}


@register.filter
def unit_words(unit):
    return UNITS.get(unit, unit)
