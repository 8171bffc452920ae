"""A file sent with a form: asked for, not empty, and no larger than what is read."""

from __future__ import annotations

from typing import Final

from django import forms
from django.core.exceptions import ValidationError
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from structures.intake.archive import FILE_MOST_BYTES, MEGABYTE

LIMIT_MB: Final = FILE_MOST_BYTES // MEGABYTE


class SentFile(forms.FileField):
    """A file of one of the endings; what is too large is told before its bytes are looked at."""

    def __init__(self, *, missing: str = "", endings: str, **options):
        told = {"empty": gettext_lazy("This file is empty. Send it again.")}
        if missing:
            told["required"] = missing
        picker = forms.ClearableFileInput(attrs={"accept": endings})
        super().__init__(error_messages=told, widget=picker, **options)

    def clean(self, data, initial=None):
        file = super().clean(data, initial)
        if file and file.size > FILE_MOST_BYTES:
            size = f"{file.size / MEGABYTE:.0f}"
            words = _("The file has %(size)s MB, limit %(limit)d. Nothing was read. Split it.")
            raise ValidationError(words % {"size": size, "limit": LIMIT_MB}, code="too-large")
        return file
