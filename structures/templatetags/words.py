"""States and levels in words: the word first, its colour second."""

from __future__ import annotations

from django import template
from django.utils.translation import gettext as _

register = template.Library()


@register.filter
def caution_word(level):
    return {"block": _("Stop"), "hold": _("Hold"), "warn": _("Take care"), "note": _("Note")}[level]


@register.filter
def caution_css(level):
    return {"block": "stop", "hold": "doubt", "warn": "doubt", "note": "quiet"}[level]


@register.filter
def run_word(state):
    return {
        "queued": _("Waiting for a worker"),
        "running": _("At work"),
        "done": _("Done"),
        "failed": _("Stopped"),
        "cancelled": _("Cancelled"),
    }[state]


@register.filter
def item_word(item):
    """An item's code as words: rock_key is read as rock key."""
    return item.replace("_", " ")


@register.filter
def unit_word(unit):
    return {"m2": "m²", "m3": "m³", "hour": _("hour"), "each": _("each")}[unit]


@register.filter
def sum_word(name):
    return {
        "subtotal": _("Subtotal"),
        "contingency": _("Contingency"),
        "overhead": _("Overhead"),
        "total": _("Total"),
        "sanction": _("For sanction, rounded up to the next 100"),
        "p10": "P10",
        "p50": "P50",
        "p90": "P90",
    }[name]


@register.filter
def change_word(kind):
    return {"added": _("added"), "changed": _("changed"), "removed": _("no longer there")}[kind]


@register.filter
def kind_word(kind):
    words = {
        "appraisal": _("Appraisal of a pack"),
        "survey.read": _("Reading of a survey"),
        "estimate.price": _("Estimate"),
        "works.forecast": _("Forecast with the rock as found"),
    }
    return words.get(kind, kind)
