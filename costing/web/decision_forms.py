"""Forms of the decisions: number, validity, conditions, reason, money."""

from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from costing.queries.money_lines import visible_money_lines
from structures.web.people_forms import day_field

MONEY = {"max_digits": 15, "decimal_places": 2, "localize": False}


def _long(label, *, required, help_text=""):
    widget = forms.Textarea(attrs={"rows": 3})
    return forms.CharField(label=label, required=required, widget=widget, help_text=help_text)


class MoneyField(forms.DecimalField):
    """A sum of money as it is typed, exact; `12 500,00` and `12,500.00` are asked about."""

    def __init__(self, **options):
        figure = forms.TextInput(attrs={"class": "figure", "inputmode": "decimal"})
        super().__init__(widget=figure, **{**MONEY, **options})


class TermsForm(forms.Form):
    """What is written on a sanction."""

    number = forms.CharField(label=_("Number"), max_length=60)
    valid_to = day_field(_("Valid to"))
    conditions = _long(_("Conditions"), required=False)

    def __init__(self, *args, revised=False, **options):
        super().__init__(*args, **options)
        if revised:
            self.fields["why"] = _long(_("Why it is revised"), required=True)


class ApprovalForm(TermsForm):
    """What is written on an approval, and where the money comes from."""

    money_line = forms.ModelChoiceField(
        label=_("Money line"), queryset=None, empty_label=_("not chosen")
    )
    amount = MoneyField(label=_("Amount"))
    photo = forms.FileField(
        label=_("Sheet signed by the funder"),
        widget=forms.ClearableFileInput(attrs={"accept": "image/*,.pdf"}),
        help_text=_("A photo or scan, 10 MB at most."),
    )
    field_order = ("number", "valid_to", "money_line", "amount", "photo", "conditions")

    def __init__(self, *args, by, district, **options):
        super().__init__(*args, **options)
        lines = visible_money_lines(by).filter(district=district)
        self.fields["money_line"].queryset = lines


class ReasonForm(forms.Form):
    """Why it is sent back or refused, and where it goes."""

    reason = _long(
        _("Reason"), required=True, help_text=_("It stays in the thread, with your name.")
    )

    def __init__(self, *args, stages=(), **options):
        super().__init__(*args, **options)
        if stages:
            choices = [(one, one) for one in stages]
            self.fields["to"] = forms.ChoiceField(label=_("Back to"), choices=choices)
            self.order_fields(("to", "reason"))


class MoneyLineForm(forms.Form):
    """A line that a funder signed."""

    district = forms.ModelChoiceField(
        label=_("District"), queryset=None, empty_label=_("not chosen")
    )
    code = forms.CharField(label=_("Code"), max_length=40)
    funder = forms.CharField(
        label=_("Funder, as a code"), max_length=40, help_text=_("No name of a person.")
    )
    currency = forms.CharField(label=_("Currency"), max_length=3)
    amount = MoneyField(label=_("Amount"))
    valid_from = day_field(_("From"))
    valid_to = day_field(_("To"), required=False, help_text=_("Left blank where no end is known."))

    def __init__(self, *args, districts, **options):
        super().__init__(*args, **options)
        self.fields["district"].queryset = districts
        if len(districts) == 1:
            self.fields["district"].initial = districts[0]
            self.fields["currency"].initial = districts[0].currency


class LineChangeForm(forms.Form):
    """Another amount or end of a line."""

    amount = MoneyField(label=_("Amount"))
    valid_to = day_field(_("To"), required=False)
    reason = _long(_("Who signed what"), required=True)
