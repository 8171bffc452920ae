from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _


class AppraisalForm(forms.Form):
    """A survey pack, and the rates it is to be priced at."""

    pack = forms.FileField(
        label=_("Survey pack"),
        error_messages={
            "required": _("No survey pack was chosen. Choose one file."),
            "empty": _("This file is empty. Send it again."),
        },
        help_text=_("JSON, a zip of CSV files, or XLSX; one site, 20 MB at most."),
        widget=forms.ClearableFileInput(attrs={"accept": ".json,.zip,.xlsx"}),
    )
    rates = forms.FileField(
        label=_("Rate schedule (may be left out)"),
        required=False,
        help_text=_("CSV with item,from_m,unit,rate,currency, or JSON of the same rows."),
        widget=forms.ClearableFileInput(attrs={"accept": ".csv,.json"}),
    )
