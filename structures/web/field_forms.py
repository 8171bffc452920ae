"""Forms of the stream bed: one record each, its fields from the table of kinds of record."""

from __future__ import annotations

from typing import Any, Final
from uuid import UUID, uuid4

from django import forms
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from structures.intake.field_records import HOLD_READINGS, RecordField, RecordKind, point_of
from structures.life.holds import LAYERS, MUST_SEE
from structures.web.typed import NumberField

YES_NO: Final = (("yes", gettext_lazy("yes")), ("no", gettext_lazy("no")))
HOLD_READING_KEYS: Final = frozenset(one.key for many in HOLD_READINGS.values() for one in many)
CHOICE_WORDS: Final = {
    "no stop found": gettext_lazy("no stop found"),
    "stop": gettext_lazy("stop: nobody goes in"),
    "not looked": gettext_lazy("not looked"),
    "hurt": gettext_lazy("somebody was hurt"),
    "near": gettext_lazy("nearly"),
    "collapse": gettext_lazy("the trench caved in"),
    "flood": gettext_lazy("water came in"),
    "other": gettext_lazy("something else"),
}
LONGEST: Final = 2000  # characters of an answer, as the reader takes them


class RecordForm(forms.Form):
    """One record; it is read and judged where a parcel is, so that a page knows no other rule."""

    def __init__(self, *args: Any, kind: RecordKind, hold: str = "", **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.kind, self.hold = kind, hold
        self.fields["record_id"] = forms.UUIDField(
            widget=forms.HiddenInput, required=False, initial=uuid4
        )
        for one in self.asked():
            self.fields[one.key] = _field(one)
        if hold and point_of(hold) != LAYERS:  # which layer it is, is seen at the trench
            self.fields["hold"].widget = forms.HiddenInput()
        self.fields["photo"] = forms.FileField(
            label=_("Photo"),
            required=False,
            help_text=self._photo_words(),
            widget=forms.ClearableFileInput(attrs={"accept": "image/*", "capture": "environment"}),
        )
        self.fields["place"] = forms.BooleanField(
            label=_("Say where the photo was taken"),
            required=False,
            initial=True,
            widget=forms.CheckboxInput(attrs={"data-place": "yes"}),
        )

    def asked(self) -> list[RecordField]:
        """Fields of the kind; of the readings only those that belong to the hold point asked for."""
        if not self.hold:
            return list(self.kind.fields)
        mine = {one.key for one in HOLD_READINGS[point_of(self.hold)]}
        return [
            one for one in self.kind.fields if one.key in mine or one.key not in HOLD_READING_KEYS
        ]

    def steps(self) -> list[list[forms.BoundField]]:
        """Questions in the order of asking, one a screen; the photo stands with its place."""
        steps = [[self[one.key]] for one in self.asked() if not self[one.key].is_hidden]
        return [*steps, [self["photo"], self["place"]]]

    @property
    def record_id(self) -> UUID:
        return self.cleaned_data.get("record_id") or uuid4()

    def said(self) -> dict[str, str]:
        """Answers that were given, by field."""
        return {
            one.key: self.cleaned_data[one.key].strip()
            for one in self.asked()
            if (self.cleaned_data.get(one.key) or "").strip()
        }

    def _photo_words(self) -> str:
        if self.hold and point_of(self.hold) in MUST_SEE:
            return _(
                "This point is seen only with a photo, the strip board in it, that says its place "
                "and day. No photo is worth going in: take it from the edge."
            )
        return _("If one helps. No photo is worth going in.")


class SeeForm(forms.Form):
    """What an engineer saw at a hold point."""

    result = forms.ChoiceField(
        label=gettext_lazy("What did you see?"),
        choices=[
            ("go", gettext_lazy("go: the work may go on")),
            ("go with note", gettext_lazy("go, with a note")),
            ("no", gettext_lazy("no: it is mended and asked for again")),
        ],
        widget=forms.RadioSelect,
    )
    note = forms.CharField(
        label=gettext_lazy("Note"),
        required=False,
        widget=forms.Textarea(attrs={"rows": 3}),
        help_text=gettext_lazy("What was seen; for a note or a no, what is to be done."),
    )


class DayForm(forms.Form):
    """The day on which a strip was opened or covered."""

    on = forms.DateField(
        label=gettext_lazy("On which day?"),
        widget=forms.DateInput(format="%Y-%m-%d", attrs={"type": "date"}),
    )
    knows_unseen = forms.BooleanField(
        label=gettext_lazy("I know that the mark stays for ever"), required=False
    )


class ReasonForm(forms.Form):
    why = forms.CharField(
        label=gettext_lazy("Why?"), widget=forms.Textarea(attrs={"rows": 2}), max_length=300
    )


class ClaySourceForm(forms.Form):
    """A borrow pit; what is not known stays blank."""

    name = forms.CharField(label=gettext_lazy("Name of the pit"), max_length=120)
    proven_m3 = NumberField(label=gettext_lazy("Clay proven, m³"), low=0, high=1e6)
    distance_km = NumberField(label=gettext_lazy("Distance to the site, km"), low=0, high=500)
    from_bund_m = NumberField(label=gettext_lazy("Distance from a tank's bund, m"), low=0, high=1e5)


class ClashForm(forms.Form):
    """Which of two forms of a record counts."""

    counts = forms.ChoiceField(
        label=gettext_lazy("Which counts?"),
        choices=[("first", gettext_lazy("the first")), ("second", gettext_lazy("the second"))],
        widget=forms.RadioSelect,
    )
    why = forms.CharField(
        label=gettext_lazy("Why?"), widget=forms.Textarea(attrs={"rows": 2}), max_length=1000
    )


def _field(one: RecordField) -> forms.Field:
    label = f"{one.asks} ({one.unit})" if one.unit else one.asks
    about: dict[str, Any] = {"label": label, "help_text": one.help, "required": False}
    if one.kind in ("choice", "yes no"):
        choices = YES_NO if one.kind == "yes no" else [(c, CHOICE_WORDS[c]) for c in one.choices]
        attrs = {"required": True} if one.required else {}
        about |= {"choices": choices, "widget": forms.RadioSelect(attrs=attrs)}
        return forms.ChoiceField(**about)
    widget: forms.Widget
    attrs = {"autocomplete": "off"} | ({"required": True} if one.required else {})
    if one.kind == "long text":
        widget = forms.Textarea(attrs={**attrs, "rows": 4})
    elif one.kind in ("day", "time"):
        widget = forms.TextInput(attrs={**attrs, "type": "date" if one.kind == "day" else "time"})
    elif one.kind in ("number", "whole"):
        mode = "decimal" if one.kind == "number" else "numeric"
        widget = forms.TextInput(attrs={**attrs, "class": "figure", "inputmode": mode})
    else:
        widget = forms.TextInput(attrs=attrs)
    return forms.CharField(widget=widget, max_length=LONGEST, **about)
