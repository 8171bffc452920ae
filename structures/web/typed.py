"""Numbers as they are typed on a page: by the rules of files, and with a decimal comma."""

from __future__ import annotations

from django import forms

from structures.intake.fields import Field
from structures.intake.tree import Ledger, Node
from structures.intake.values import read_value, with_point


class NumberField(forms.CharField):
    """A number, by default one that may be left blank, with the range that is accepted."""

    def __init__(self, *, low=None, high=None, required=False, **kwargs):
        attrs = {"class": "figure", "inputmode": "decimal", "autocomplete": "off"}
        super().__init__(required=required, widget=forms.TextInput(attrs=attrs), **kwargs)
        self.low, self.high = low, high

    def clean(self, value):
        text = with_point(super().clean(value))
        if not text.strip():
            return None
        ledger = Ledger()
        field = Field("number", str(self.label), low=self.low, high=self.high)
        read = read_value(Node(text, "", "number", tabular=True), field, ledger)
        # That digits of another script were read is told in files; here the number is shown back.
        wrong = [one for one in ledger.findings if one.level == "block"]
        if wrong:
            raise forms.ValidationError(f"{wrong[0].what} {wrong[0].remedy}".strip())
        return read
