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
