"""Figures as they are printed: unit beside them, and "not known" where there is none."""

from __future__ import annotations

from decimal import Decimal

from django import template
from django.utils.formats import number_format
from django.utils.translation import gettext as _

register = template.Library()


@register.filter
def figure(value, places=2):
    """A number with fixed decimals in the reader's locale; None is "not known", never zero."""
    if value is None:
        return _("not known")
    # Rounded here as drawing and report round it: the framework would cut digits off.
    rounded = Decimal(f"{value:.{places}f}")
    return number_format(rounded, places, use_l10n=True, force_grouping=True)


@register.filter
def money(text):
    """An exact amount, two decimals, grouped as the reader's locale does."""
    if text is None:
        return _("not known")
    return number_format(Decimal(text), 2, use_l10n=True, force_grouping=True)


@register.filter
def small(value):
    """A small flow or volume: more decimals where it would print as nothing."""
    if value is None:
        return _("not known")
    return figure(value, 4 if abs(value) < 1 else 2)
