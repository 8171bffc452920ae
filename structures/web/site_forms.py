"""Forms of sites, surveys, rock lines and tried walls."""

from __future__ import annotations

from typing import Final

from django import forms
from django.utils.translation import gettext_lazy as _

from structures.actions.site_rows import read_site, row_of
from structures.actions.sites import EDITABLE
from structures.intake.defaults import WALL
from structures.intake.tree import Ledger
from structures.life.stages import STAGES
from structures.web.sent_files import SentFile
from structures.web.typed import NumberField, with_point

TEXTS: Final = ("name", "benchmark", "village_upstream", "village_downstream", "downstream_users")
LABELS: Final = {
    "name": _("Name of the place"),
    "lat": _("Latitude"),
    "lon": _("Longitude"),
    "accuracy_m": _("Accuracy of the position, m"),
    "benchmark": _("Where the bench mark is"),
    "benchmark_level_m": _("Level of the bench mark, m"),
    "bed_level_m": _("Level of the bed, m"),
    "bed_slope": _("Fall of the bed, m per m"),
    "catchment_km2": _("Catchment above the site, km²"),
    "water_level_m": _("Level of the ground water, m"),
    "village_upstream": _("Village upstream"),
    "village_downstream": _("Village downstream"),
    "downstream_users": _("Who uses the water below"),
}
HELP: Final = {
    "lat": _("Degrees like 15.7237, or degrees, minutes and seconds with N or S."),
    "lon": _("Degrees like 77.4424, or degrees, minutes and seconds with E or W."),
    "downstream_users": _("The list, or “none found within” so many km. Blank is “not answered”."),
}
# Settings that a tried wall may change; the others stay as they count at the site.
TRIED: Final = {
    "thickness_m": _("Wall thickness, m"),
    "crest_below_bed_m": _("Cover, crest below bed, m"),
    "key_m": _("Rock key, m"),
    "side_slope": _("Side slope of the trench, across per 1 up"),
    "bottom_margin_m": _("Trench margin each side, m"),
    "lift_m": _("Lift of excavation, m"),
    "film_faces": _("Film faces"),
}


class SiteFilter(forms.Form):
    """One filter for the list and the map."""

    q = forms.CharField(
        label=_("Code, name or village"),
        required=False,
        widget=forms.TextInput(attrs={"type": "search"}),
    )
    watershed = forms.ChoiceField(label=_("Watershed"), required=False)
    stage = forms.ChoiceField(
        label=_("Stage"), required=False, choices=[("", _("all")), *((one, one) for one in STAGES)]
    )

    def __init__(self, *args, watersheds, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["watershed"].choices = [
            ("", _("all")),
            *((one.code, f"{one.name} {one.code}") for one in watersheds),
        ]


class SiteForm(forms.Form):
    """Fields of a site as they are typed; read by the rules of a list of sites."""

    revision = forms.IntegerField(widget=forms.HiddenInput)

    def __init__(self, *args, site, **kwargs):
        initial = {key: getattr(site, key) for key in EDITABLE} | {"revision": site.revision}
        super().__init__(*args, initial=initial, **kwargs)
        self.site = site
        for key in EDITABLE:
            long = key == "downstream_users"
            widget = forms.Textarea if long else forms.TextInput
            attrs = {} if key in TEXTS else {"class": "figure"}
            self.fields[key] = forms.CharField(
                label=LABELS[key],
                required=False,
                help_text=HELP.get(key, ""),
                widget=widget(attrs={"rows": 3} if long else attrs),
            )

    def clean(self):
        cleaned = super().clean()
        typed = {key: cleaned.get(key, "") for key in EDITABLE}
        typed |= {key: with_point(typed[key]) for key in EDITABLE if key not in TEXTS}
        code, watershed = self.site.code, self.site.watershed.code
        ledger = Ledger()
        row = row_of({**typed, "code": code, "watershed": watershed}, code)
        values = read_site(row, ledger) or {}
        for finding in ledger.findings:
            named = finding.field if finding.field in self.fields else None
            self.add_error(named, f"{finding.what} {finding.remedy}".strip())
        cleaned["changes"] = {
            key: values.get(key, "" if key in TEXTS else None) for key in EDITABLE
        }
        return cleaned


class SurveyForm(forms.Form):
    """A survey pack of one site."""

    pack = SentFile(
        label=_("Survey pack"),
        missing=_("No survey pack was chosen. Choose one file."),
        endings=".json,.zip,.xlsx",
        help_text=_("JSON, a zip of CSV files, or XLSX; one site, 20 MB at most."),
    )


class RockForm(forms.Form):
    """A rock line point by point, with the reason and the tests it rests on.

    The hidden fields say which survey and which settled line (0: none) the page showed.
    """

    seen_survey = forms.IntegerField(required=False, widget=forms.HiddenInput)
    seen_line = forms.IntegerField(required=False, widget=forms.HiddenInput)
    reason = forms.CharField(
        label=_("Why the rock is so"),
        required=False,
        help_text=_("For example: rock met in pits at 26 and 52 m, soundings agree between."),
        widget=forms.Textarea(attrs={"rows": 3}),
    )
    rests_on = forms.MultipleChoiceField(
        label=_("Tests it rests on"), required=False, widget=forms.CheckboxSelectMultiple
    )

    def __init__(self, *args, tests, points, seen, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["seen_survey"].initial, self.fields["seen_line"].initial = seen
        self.fields["rests_on"].choices = [(test, test) for test in tests]
        self.rows = []
        for place, (offset_m, level_m) in enumerate(points):
            for name, value in (("offset", offset_m), ("level", level_m)):
                self.fields[f"{name}_{place}"] = NumberField(
                    label=_("Offset, m") if name == "offset" else _("Level, m"), initial=value
                )
            self.rows.append((f"offset_{place}", f"level_{place}"))

    @property
    def pairs(self):
        return [(self[offset], self[level]) for offset, level in self.rows]

    def clean(self):
        cleaned = super().clean()
        points = []
        for offset, level in self.rows:
            given = cleaned.get(offset), cleaned.get(level)
            if None not in given:
                points.append({"offset_m": given[0], "level_m": given[1]})
            elif given != (None, None):
                blank = offset if given[0] is None else level
                if blank not in self.errors:
                    self.add_error(blank, _("A point has an offset and a level, or neither."))
        cleaned["points"] = points
        return cleaned


class TryForm(forms.Form):
    """Settings of a wall to try; a blank field keeps what counts at the site."""

    def __init__(self, sent, *, wall):
        initial = {key: wall.get(key, WALL[key].value) for key in TRIED}
        if isinstance(initial["side_slope"], list):
            initial["side_slope"] = ""
        # An address that names some settings only is filled with those that count.
        data = {**initial, **sent.dict()} if sent else None
        super().__init__(data, initial=initial)
        for key, label in TRIED.items():
            default = WALL[key]
            self.fields[key] = NumberField(
                label=label,
                low=default.low,
                high=default.high,
                help_text=_("%(low)g to %(high)g") % {"low": default.low, "high": default.high},
            )

    def chosen(self):
        """What differs from the settings that count, by key."""
        changed = {}
        for key in TRIED:
            value = self.cleaned_data.get(key)
            if value is not None and value != self.initial[key]:
                changed[key] = int(value) if WALL[key].whole and value == int(value) else value
        return changed


class EntryForm(forms.Form):
    """One file of many sites, outlines or bed points."""

    kind = forms.ChoiceField(label=_("What is in the file"))
    district = forms.ChoiceField(label=_("District"))
    file = SentFile(
        label=_("File"),
        missing=_("No file was chosen. Choose one."),
        endings=".csv,.xlsx,.geojson,.json",
        help_text=_("CSV or XLSX of sites or of bed points, GeoJSON of watersheds; 20 MB at most."),
    )

    def __init__(self, *args, kinds, districts, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["kind"].choices = kinds
        self.fields["district"].choices = [(one.code, str(one)) for one in districts]
