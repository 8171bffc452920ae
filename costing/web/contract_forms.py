"""The contract as a form: terms that stay blank are not stated, and one row for each rate."""

from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from costing.web.decision_forms import MoneyField
from structures.web.measurement_forms import ExactField
from structures.web.people_forms import day_field

SPARE = 2  # blank rows below those that are filled
BLANK = _("Blank: the contract does not state it, and nothing is assumed.")
SCAN = {"accept": "image/*,.pdf"}


def _long(label, **more):
    return forms.CharField(
        label=label, required=False, widget=forms.Textarea(attrs={"rows": 3}), **more
    )


def _scan(label):
    return forms.FileField(label=label, required=False, widget=forms.ClearableFileInput(attrs=SCAN))


class ContractForm(forms.Form):
    """What was signed."""

    number = forms.CharField(label=_("Number"), max_length=60)
    contractor = forms.CharField(
        label=_("Contractor, as a code"), max_length=40, help_text=_("No name of a person.")
    )
    currency = forms.CharField(label=_("Currency"), max_length=3)
    signed_on = day_field(_("Signed on"))
    starts_on = day_field(_("Work begins"))
    ends_on = day_field(_("Work ends"), required=False, help_text=BLANK)
    safety_terms = _long(
        _("Safety terms"), help_text=_("Without them the structure is not moved to signed.")
    )
    signatories = _long(_("Who signed"), help_text=_("As codes or offices."))
    retention_percent = ExactField(label=_("Retention (%)"), required=False, help_text=BLANK)
    advance = MoneyField(label=_("Advance"), required=False, help_text=BLANK)
    advance_recovery_percent = ExactField(
        label=_("Advance recovered, of each bill (%)"), required=False
    )
    fixed = forms.CharField(
        label=_("Price index: fixed share"), required=False, max_length=20, help_text=BLANK
    )
    authority_paper = _scan(_("Contractor's authority paper"))
    signed_sheet = _scan(_("Signed sheet"))

    def __init__(self, *args, varied=False, **options):
        super().__init__(*args, **options)
        if varied:
            self.fields["why"] = forms.CharField(
                label=_("Why it is varied"), widget=forms.Textarea(attrs={"rows": 3})
            )


class RateForm(forms.Form):
    """One rate; a row whose rate stays blank is not agreed."""

    item = forms.CharField(widget=forms.HiddenInput)
    unit = forms.CharField(widget=forms.HiddenInput)
    from_m = forms.FloatField(required=False, widget=forms.HiddenInput)
    quantity = ExactField(label=_("Quantity"), required=False)
    rate = MoneyField(label=_("Rate"), required=False)


class DeductionForm(forms.Form):
    """Something taken off each bill: a percentage or an amount."""

    what = forms.CharField(label=_("Deduction"), required=False, max_length=80)
    percent = ExactField(label=_("%"), required=False)
    amount = MoneyField(label=_("or amount"), required=False)


class IndexForm(forms.Form):
    """One part of the price that follows an index."""

    what = forms.CharField(label=_("Part"), required=False, max_length=80)
    share = forms.CharField(label=_("Share"), required=False, max_length=20)
    base = forms.CharField(label=_("Index when agreed"), required=False, max_length=20)


Rates = forms.formset_factory(RateForm, extra=0)
Deductions = forms.formset_factory(DeductionForm, extra=SPARE)
Parts = forms.formset_factory(IndexForm, extra=3)
