from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from structures.models import District
from structures.web.sent_files import SentFile

RATES_HELP = _("CSV with item,from_m,unit,rate,currency, or JSON of the same rows.")
RATES_ENDINGS = ".csv,.json"


class AppraisalForm(forms.Form):
    """A survey pack, and the rates it is to be priced at."""

    pack = SentFile(
        label=_("Survey pack"),
        missing=_("No survey pack was chosen. Choose one file."),
        endings=".json,.zip,.xlsx",
        help_text=_("JSON, a zip of CSV files, or XLSX; one site, 20 MB at most."),
    )
    rates = SentFile(
        label=_("Rate schedule (may be left out)"),
        required=False,
        endings=RATES_ENDINGS,
        help_text=RATES_HELP,
    )


class ScheduleForm(forms.Form):
    """A rate schedule for a district."""

    district = forms.ModelChoiceField(District.objects.none(), label=_("District"))
    rates = SentFile(
        label=_("Rate schedule"),
        missing=_("No rate schedule was chosen. Choose one file."),
        endings=RATES_ENDINGS,
        help_text=RATES_HELP,
    )

    def __init__(self, districts, *args, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["district"].queryset = districts.order_by("code")
        if len(districts) == 1:
            self.fields["district"].initial = districts[0]
