"""A figure as people type it: a decimal comma and the digits of any script are understood."""

from __future__ import annotations

import math
import re
import unicodedata
from typing import Final

from django import forms
from django.utils.translation import gettext_lazy as _

PLAIN: Final = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d{1,3})?", re.ASCII)
# One comma before three digits may be a decimal or a thousands mark: nobody can tell.
EITHER: Final = re.compile(r"[+-]?[1-9]\d{0,2},\d{3}", re.ASCII)
COMMA: Final = re.compile(r"[+-]?\d*,\d+", re.ASCII)


class FigureField(forms.FloatField):
    """A number with a unit; what can be read in two ways is asked again."""

    widget = forms.TextInput
    default_error_messages = {
        "invalid": _("This is no number. Type digits, with a decimal point or comma."),
        "either": _("This comma may mean thousands or a decimal. Write a decimal point."),
    }

    def __init__(self, **kwargs):
        super().__init__(**kwargs)
        self.widget.attrs |= {"class": "figure", "inputmode": "decimal", "autocomplete": "off"}

    def to_python(self, value):
        text = "".join(map(_digit, str(value or "").strip()))
        if not text:
            return None
        if EITHER.fullmatch(text):
            raise forms.ValidationError(self.error_messages["either"], code="either")
        if COMMA.fullmatch(text):
            text = text.replace(",", ".")
        if not PLAIN.fullmatch(text) or not math.isfinite(float(text)):
            raise forms.ValidationError(self.error_messages["invalid"], code="invalid")
        return float(text)


def _digit(letter):
    """Give a decimal digit of any script as one of ours."""
    number = unicodedata.decimal(letter, None)
    return letter if number is None else str(number)
