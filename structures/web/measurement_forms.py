"""Forms of the measurement book: exact quantities, a day, a reason."""

from __future__ import annotations

from django import forms
from django.utils.translation import gettext_lazy as _

from structures.intake.values import with_point
from structures.takeoff.quantity import ITEMS
from structures.web.people_forms import day_field
from structures.web.typed import NumberField

DEPTH_MOST_M = 60  # as in a survey: deeper figures are levels


class ExactField(forms.DecimalField):
    """A number of two decimals as it is typed, exact, with a point or a decimal comma."""

    def __init__(self, **options):
        figure = forms.TextInput(attrs={"class": "figure", "inputmode": "decimal"})
        super().__init__(widget=figure, max_digits=15, decimal_places=2, **options)

    def to_python(self, value):
        return super().to_python(with_point(value) if isinstance(value, str) else value)


def _long(label, **more):
    return forms.CharField(label=label, widget=forms.Textarea(attrs={"rows": 3}), **more)


class MeasurementForm(forms.Form):
    """One item of one strip, or of the whole wall."""

    strip = forms.ChoiceField(label=_("Strip"), required=False)
    item = forms.ChoiceField(
        label=_("Item"),
        choices=[(key, f"{key.replace('_', ' ')} ({unit})") for key, unit in ITEMS.items()],
    )
    from_m = NumberField(
        label=_("Lift from (m below ground)"),
        low=0,
        high=DEPTH_MOST_M,
        help_text=_("Excavation only."),
    )
    to_m = NumberField(label=_("to (m below ground)"), low=0, high=DEPTH_MOST_M)
    quantity = ExactField(label=_("Quantity"))
    measured_on = day_field(_("Measured on"))
    working = _long(
        _("How it came about"),
        help_text=_("Dimensions or readings, so that another person can work it out again."),
    )

    def __init__(self, *args, strips, **options):
        super().__init__(*args, **options)
        whole = [("", _("the whole wall"))]
        self.fields["strip"].choices = whole + [
            (str(one.pk), f"{one.number}: {one.from_m:.2f} to {one.to_m:.2f} m") for one in strips
        ]

    def clean_strip(self):
        value = self.cleaned_data["strip"]
        return int(value) if value else None


class ReasonForm(forms.Form):
    why = _long(_("What is wrong with it"))


class CorrectionForm(forms.Form):
    """The difference to what was accepted; with a minus it takes back."""

    difference = ExactField(
        label=_("Difference"), help_text=_("As 0.50 to add, -0.50 to take back.")
    )
    measured_on = day_field(_("Measured on"))
    why = _long(_("What was mistaken"))
