"""Forms of wells, measuring points, readings that are doubted, and what is asked of a file."""

from __future__ import annotations

from typing import Any, Final

from django import forms
from django.utils.translation import gettext_lazy as _

from structures.web.typed import with_point

ROLE_WORDS: Final = (
    ("upstream", _("upstream of the wall")),
    ("downstream", _("downstream of the wall")),
    ("control", _("control well, outside the wall's reach")),
    ("other", _("other")),
)
KIND_WORDS: Final = (
    ("dug", _("dug well")),
    ("bored", _("bored well")),
    ("pipe", _("observation pipe")),
)
CONSENT_WORDS: Final = (
    ("not known", _("not known")),
    ("yes", _("yes")),
    ("no", _("no")),
)
NUMBERS: Final = (
    "diameter_m",
    "ground_level_m",
    "bottom_below_ground_m",
    "upstream_of_wall_m",
    "height_above_ground_m",
    "level_m",
)


def _text(label: str, *, note: str = "", required: bool = False, **attrs: Any) -> forms.CharField:
    widget = forms.TextInput(attrs={"autocomplete": "off", **attrs})
    return forms.CharField(label=label, required=required, help_text=note, widget=widget)


def _figure(label: str, note: str = "") -> forms.CharField:
    return _text(label, note=note, inputmode="decimal", **{"class": "figure"})


def _day(label: str, note: str = "", *, required: bool = False) -> forms.CharField:
    return _text(label, note=note, required=required, type="date")


class WellFilter(forms.Form):
    """One filter for the list and the map."""

    q = forms.CharField(
        label=_("Code, name or site"),
        required=False,
        widget=forms.TextInput(attrs={"type": "search"}),
    )
    watershed = forms.ChoiceField(label=_("Watershed"), required=False)
    role = forms.ChoiceField(label=_("Role"), required=False, choices=[("", _("all")), *ROLE_WORDS])

    def __init__(self, *args, watersheds, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["watershed"].choices = [
            ("", _("all")),
            *((one.code, f"{one.name} {one.code}") for one in watersheds),
        ]


class WellForm(forms.Form):
    """A well as it is typed; read by the rules of the interface and of a list of wells."""

    code = _text(_("Code of the well"), required=True)
    name = _text(_("Name"))
    other_names = _text(
        _("Other names"), note=_("As people spell it, with a semicolon between names.")
    )
    role = forms.ChoiceField(
        label=_("What is it to the wall?"), choices=ROLE_WORDS, widget=forms.RadioSelect
    )
    kind = forms.ChoiceField(label=_("Kind"), choices=KIND_WORDS)
    site = _text(_("Code of its site"), note=_("Blank where it belongs to none."))
    lat = _text(_("Latitude"), note=_("Degrees like 15.7237."), **{"class": "figure"})
    lon = _text(_("Longitude"), note=_("Degrees like 77.4424."), **{"class": "figure"})
    upstream_of_wall_m = _figure(
        _("Distance from the wall, m"), _("Upstream is plus, downstream minus.")
    )
    diameter_m = _figure(_("Diameter, m"))
    ground_level_m = _figure(_("Level of the ground, m"))
    bottom_below_ground_m = _figure(_("Bottom below ground, m"))
    bottom_sounded_on = _day(_("Bottom sounded on"))
    owner_initials = _text(_("Owner, initials only"), maxlength="10")
    owner_consents = forms.ChoiceField(
        label=_("Does the owner agree to the readings?"),
        choices=CONSENT_WORDS,
        required=False,
        widget=forms.RadioSelect,
    )
    used_for = _text(_("Used for"))
    pump = _text(_("Pump"))
    existed_from = _day(_("There since"))
    ended_on = _day(_("Gone since"))

    def values(self) -> dict[str, str]:
        """Give what was typed, with a decimal comma read as a point."""
        said = {key: str(value or "").strip() for key, value in self.cleaned_data.items()}
        return {key: with_point(value) if key in NUMBERS else value for key, value in said.items()}


class NewWellForm(WellForm):
    watershed = forms.ChoiceField(label=_("Watershed"))
    field_order = ("watershed",)

    def __init__(self, *args, watersheds, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["watershed"].choices = [
            (one.code, f"{one.name} {one.code}") for one in watersheds
        ]


class EditWellForm(WellForm):
    seen_at = forms.CharField(widget=forms.HiddenInput)

    def __init__(self, *args, well, **kwargs):
        consents = {True: "yes", False: "no", None: "not known"}[well.owner_consents]
        initial = {
            name: getattr(well, name, None)
            for name in WellForm.base_fields
            if name not in ("site", "other_names", "owner_consents")
        }
        initial |= {
            "site": well.site.code if well.site else "",
            "other_names": "; ".join(well.other_names),
            "owner_consents": consents,
            "seen_at": well.changed_at.isoformat(),
        }
        super().__init__(*args, initial=initial, **kwargs)
        del self.fields["code"]


class MarkForm(forms.Form):
    """The measuring point that is used from a day on."""

    mark = _text(_("Name of the new mark"), note=_("Like M2."), required=True)
    what = _text(_("What it is and where"), note=_("Where the tape is held."), required=True)
    valid_from = _day(_("Used since"), required=True)
    level_m = _figure(_("Its level, m"), _("Or its height above the ground, below."))
    height_above_ground_m = _figure(_("Its height above the ground, m"))
    why_changed = _text(_("Why did it change?"))
    witness = _text(_("Second person who saw it"), note=_("Role or initials."))
    photo = forms.FileField(
        label=_("Photo of the mark"),
        required=False,
        widget=forms.ClearableFileInput(attrs={"accept": "image/*"}),
    )

    def values(self) -> dict[str, str]:
        said = {key: str(value or "").strip() for key, value in self.cleaned_data.items()}
        said.pop("photo", None)
        return {key: with_point(value) if key in NUMBERS else value for key, value in said.items()}


class ApartForm(forms.Form):
    """A neighbour that is another well, and why."""

    other = forms.CharField(widget=forms.HiddenInput)
    why = _text(_("Why are these two wells?"), required=True, maxlength="200")


class DecideForm(forms.Form):
    """What counts in the place of a doubted value."""

    decision = forms.ChoiceField(
        label=_("What counts?"),
        choices=(
            ("suggested", _("what is suggested")),
            ("raw", _("what was sent")),
            ("other", _("another value")),
            ("leave out", _("nothing: leave the reading out")),
        ),
        widget=forms.RadioSelect,
    )
    value = _text(_("The other value"), note=_("Depth in metres, a mark, or day and time."))
    why = forms.CharField(
        label=_("Why?"), widget=forms.Textarea(attrs={"rows": 2}), max_length=1000
    )
