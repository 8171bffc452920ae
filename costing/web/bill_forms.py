"""Forms of bills: a new one, a contractor's file, what is said of each line, payment."""

from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from costing.web.decision_forms import MoneyField
from structures.web.people_forms import day_field
from structures.web.sent_files import SentFile

KINDS = (("running", _("running bill")), ("final", _("final bill: closes the account")))
# What the district office says of one line; the rules speak first.
SAYS = (
    ("", _("as the rules say")),
    ("paid", _("pay")),
    ("held", _("hold")),
    ("refused", _("refuse")),
)
INDEX_MOST = 20  # characters of an index


class BillForm(forms.Form):
    """A bill of everything accepted and not billed, or of a contractor's own file."""

    number = forms.CharField(
        label=_("Number of the bill"),
        max_length=60,
        required=False,
        help_text=_("May be left blank where a file names it."),
    )
    kind = forms.ChoiceField(label=_("Kind"), choices=KINDS)
    billed_on = day_field(_("Date of the bill"))
    file = SentFile(
        label=_("The contractor's own lines"),
        required=False,
        endings=".csv,.xlsx",
        help_text=_(
            "CSV or XLSX headed bill,line,entry,quantity,rate,amount. Left out: every accepted "
            "entry that no bill has, at the contract's rates."
        ),
    )
    total = MoneyField(label=_("Total that the contractor's bill says"), required=False)


class LineForm(forms.Form):
    """What is said of one line."""

    state = forms.ChoiceField(label=_("Decision"), choices=SAYS, required=False)
    why = forms.CharField(label=_("Reason"), required=False, max_length=500, widget=forms.TextInput)


class WhyForm(forms.Form):
    why = forms.CharField(label=_("Reason"), widget=forms.Textarea(attrs={"rows": 3}))


class PaidForm(forms.Form):
    """That it was paid out."""

    paid_on = day_field(_("Paid on"))
    reference = forms.CharField(label=_("Number of the payment order"), max_length=120)


class IndexNowForm(forms.Form):
    """Today's value of each index that the contract names."""

    def __init__(self, *args, names, **options):
        super().__init__(*args, **options)
        self.names = names
        for place, name in enumerate(names):
            self.fields[f"index_{place}"] = forms.DecimalField(
                label=name,
                min_value=0,
                required=False,
                localize=False,
                widget=forms.TextInput(attrs={"class": "figure", "inputmode": "decimal"}),
            )

    def values(self):
        """Give the indices that were given, by their names in the contract."""
        said = {name: self.cleaned_data.get(f"index_{n}") for n, name in enumerate(self.names)}
        return {name: value for name, value in said.items() if value is not None}
