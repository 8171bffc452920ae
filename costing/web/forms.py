from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from structures.models import District

EMPTY = _("This file is empty. Send it again.")
RATES_HELP = _("CSV with item,from_m,unit,rate,currency, or JSON of the same rows.")
RATES_FILE = forms.ClearableFileInput(attrs={"accept": ".csv,.json"})


class AppraisalForm(forms.Form):
    """A survey pack, and the rates it is to be priced at."""

    pack = forms.FileField(
        label=_("Survey pack"),
        error_messages={
            "required": _("No survey pack was chosen. Choose one file."),
            "empty": EMPTY,
        },
        help_text=_("JSON, a zip of CSV files, or XLSX; one site, 20 MB at most."),
        widget=forms.ClearableFileInput(attrs={"accept": ".json,.zip,.xlsx"}),
    )
    rates = forms.FileField(
        label=_("Rate schedule (may be left out)"),
        required=False,
        error_messages={"empty": EMPTY},
        help_text=RATES_HELP,
        widget=RATES_FILE,
    )


class ScheduleForm(forms.Form):
    """A rate schedule for a district."""

    district = forms.ModelChoiceField(District.objects.none(), label=_("District"))
    rates = forms.FileField(
        label=_("Rate schedule"),
        error_messages={
            "required": _("No rate schedule was chosen. Choose one file."),
            "empty": EMPTY,
        },
        help_text=RATES_HELP,
        widget=RATES_FILE,
    )

    def __init__(self, districts, *args, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["district"].queryset = districts.order_by("code")
        if len(districts) == 1:
            self.fields["district"].initial = districts[0]
