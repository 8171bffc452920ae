"""Forms of a changed default and of a district."""

from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from structures.web.people_forms import LICENCE_MOST, day_field
from structures.web.typed import NumberField

NAME_MOST = 120  # characters, as the table of settings keeps them
ENGINEER = "E"
AMOUNT = "amount"  # of money; any is accepted that is not a slip


class SettingForm(forms.Form):
    """A value in the place of a default, with who decided it and why."""

    value = NumberField(label=_("Value"), required=True)
    reason = forms.CharField(label=_("Why it is changed"), widget=forms.Textarea(attrs={"rows": 3}))
    decided_by = forms.CharField(label=_("Who decided it"), max_length=NAME_MOST)
    licence_number = forms.CharField(label=_("Licence number"), max_length=LICENCE_MOST)
    decided_on = day_field(_("Decided on"))

    def __init__(self, *args, default, on_behalf, **kwargs):
        """`on_behalf`: an administrator enters what somebody else decided."""
        super().__init__(*args, **kwargs)
        signed = default.owner == ENGINEER
        self.fields["value"].label = default.words.capitalize()
        self.fields["value"].required = default.value is not None
        if default.unit != AMOUNT:
            self.fields["value"].help_text = _("Accepted: %(low)s to %(high)s") % {
                "low": f"{default.low:.15g}",
                "high": default.written(default.high),
            }
        if signed:
            self.fields["decided_by"].label = _("Licensed engineer who decided it")
        else:
            del self.fields["licence_number"]
            if not on_behalf:
                del self.fields["decided_by"], self.fields["decided_on"]

    @property
    def decided(self):
        """Who decided it, under which licence and when; None where it is the user's own word."""
        said = self.cleaned_data
        if "decided_by" not in said:
            return None
        return said["decided_by"], said.get("licence_number", ""), said["decided_on"]


class DistrictForm(forms.Form):
    """What a district counts by."""

    code = forms.CharField(
        label=_("Code"), max_length=40, help_text=_("Letters, digits, - _ or . without blanks.")
    )
    name = forms.CharField(label=_("Name"), max_length=NAME_MOST)
    zone = forms.CharField(label=_("Time zone"), max_length=60, help_text=_("Like Asia/Kolkata."))
    currency = forms.CharField(
        label=_("Currency"), max_length=3, help_text=_("Its three capital letters.")
    )
    water_year_month = forms.IntegerField(
        label=_("Month in which the water year starts"), min_value=1, max_value=12, initial=6
    )
    water_year_day = forms.IntegerField(
        label=_("Day on which it starts"), min_value=1, max_value=31, initial=1
    )
