"""Forms by which an administrator lets people in, posts them and ends their time."""

from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from structures.queries.districts import administered_districts
from structures.queries.people_review import administered_watersheds, keeps_the_office
from structures.web.account_forms import LOGIN_MOST

ROLES = (
    ("field", _("field staff: records, never prices")),
    ("engineer", _("engineer: interprets, draws, estimates")),
    ("district", _("district officer: approves, edits no measurement")),
    ("programme", _("programme manager: sees all, changes no reading")),
    ("auditor", _("auditor: reads everything, writes nothing")),
    ("admin", _("administrator: people and settings, no approvals")),
)
LICENCE_MOST = 60  # characters, as the table of users keeps them


def day_field(label, *, required=True, help_text=""):
    widget = forms.DateInput(format="%Y-%m-%d", attrs={"type": "date"})
    return forms.DateField(label=label, required=required, help_text=help_text, widget=widget)


class PostingForm(forms.Form):
    """Role, place and days; the choices are those that this administrator may give."""

    role = forms.ChoiceField(label=_("Serves as"), choices=ROLES)
    district = forms.ModelChoiceField(label=_("District"), queryset=None, required=False)
    watersheds = forms.ModelMultipleChoiceField(
        label=_("Watersheds"),
        queryset=None,
        required=False,
        widget=forms.CheckboxSelectMultiple,
        help_text=_("None ticked means all of the district, later ones too."),
    )
    valid_from = day_field(_("First day"))
    valid_to = day_field(
        _("Last day"), required=False, help_text=_("Left blank where no end is known.")
    )

    def __init__(self, *args, by, **kwargs):
        super().__init__(*args, **kwargs)
        office = keeps_the_office(by)
        self.fields["district"].queryset = administered_districts(by)
        self.fields["district"].required = not office
        self.fields["district"].empty_label = _("the whole office") if office else None
        self.fields["watersheds"].queryset = administered_watersheds(by)

    @property
    def said(self):
        """What was typed, as the actions take it."""
        cleaned = self.cleaned_data
        return {
            "role": cleaned["role"],
            "district": cleaned["district"],
            "watersheds": list(cleaned["watersheds"]),
            "days": (cleaned["valid_from"], cleaned["valid_to"]),
        }


class NewPersonForm(PostingForm):
    """A person who was not here before."""

    login = forms.CharField(
        label=_("Name to sign in with"),
        max_length=LOGIN_MOST,
        help_text=_("Letters, digits and @ . + - _ ; never used twice."),
        widget=forms.TextInput(attrs={"autocomplete": "off", "autocapitalize": "none"}),
    )
    field_order = ("login",)


class AccountForm(forms.Form):
    """What stands at the account itself."""

    licence_number = forms.CharField(
        label=_("Licence number of an engineer"), max_length=LICENCE_MOST, required=False
    )
    email = forms.EmailField(
        label=_("E-mail address"),
        required=False,
        help_text=_("The daily list is sent there; without one it stands on the page only."),
    )
    account_ends_on = day_field(
        _("Last day of the account"),
        required=False,
        help_text=_("From the next day on nothing opens it and every session is over."),
    )
