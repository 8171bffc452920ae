"""The phone's round of wells: last readings and the range to expect, one page a well, kept offline."""

from __future__ import annotations

from typing import Final
from uuid import uuid4, uuid5

from django import forms
from django.contrib import messages
from django.http import Http404
from django.shortcuts import redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions.readings import HELD, REFUSED, take_readings
from structures.errors import Refused
from structures.intake.level_records import read_level_record, row_of
from structures.queries.well_round import WellToday, round_of_wells, well_today
from structures.web.field import SCRIPTS
from structures.web.field_photos import PhotoForm
from structures.web.refusals import STATUS, refuse
from structures.web.typed import with_point

METHODS: Final = ["GET", "HEAD", "POST"]
UNITS: Final = {"m": 1.0, "cm": 0.01}  # exact
STATES: Final = (
    ("static", gettext_lazy("pump off, water at rest")),
    ("pumping", gettext_lazy("pump running")),
    ("recovering", gettext_lazy("pump just stopped")),
    ("not known", gettext_lazy("not known")),
    ("obstructed", gettext_lazy("the tape does not go down")),
    ("flowing", gettext_lazy("water flows over the mark")),
    ("flooded", gettext_lazy("the well stands under water")),
)
NAMES: Final = {
    "depth_m": "depth",
    "again_m": "again",
    "hold_m": "hold",
    "wet_m": "wet",
    "read_at": "day",
}
WITHOUT_DEPTH: Final = ("obstructed", "flowing", "flooded")


def _figure(label: str, note: str = "") -> forms.CharField:
    attrs = {"class": "figure", "inputmode": "decimal", "autocomplete": "off"}
    return forms.CharField(
        label=label, required=False, help_text=note, max_length=20, widget=forms.TextInput(attrs)
    )


class LevelForm(forms.Form):
    """One reading as it is made: the mark is the well's, the time the phone's."""

    record_id = forms.UUIDField(widget=forms.HiddenInput, required=False, initial=uuid4)
    depth = _figure(gettext_lazy("Depth below the mark"))
    unit = forms.ChoiceField(
        label=gettext_lazy("Unit"),
        choices=(("m", gettext_lazy("metres")), ("cm", gettext_lazy("centimetres"))),
        initial="m",
    )
    again = _figure(gettext_lazy("Read a second time"), gettext_lazy("In the same unit."))
    hold = _figure(gettext_lazy("Tape held at the mark, m"))
    wet = _figure(gettext_lazy("Tape wet, m"))
    dry = forms.ChoiceField(
        label=gettext_lazy("Is the well dry?"),
        choices=(("no", gettext_lazy("no")), ("yes", gettext_lazy("yes, dry to the bottom"))),
        initial="no",
    )
    state = forms.ChoiceField(
        label=gettext_lazy("How is the well?"), choices=STATES, initial="static"
    )
    note = forms.CharField(label=gettext_lazy("Remark"), required=False, max_length=300)
    day = forms.CharField(
        label=gettext_lazy("Day"), max_length=10, widget=forms.TextInput({"type": "date"})
    )
    hour = forms.CharField(
        label=gettext_lazy("Time"), max_length=5, widget=forms.TextInput({"type": "time"})
    )
    photo = forms.FileField(
        label=gettext_lazy("Photo"),
        required=False,
        widget=forms.ClearableFileInput({"accept": "image/*", "capture": "environment"}),
    )

    def values(self, place: WellToday) -> dict[str, str]:
        """Give the reading under the names of the interface, in metres.

        Raises
        ------
        Refused
            If what stands for a number is none.
        """
        said = self.cleaned_data
        name = said.get("record_id") or uuid4()
        found = {
            "id": str(name),
            "well": place.well.code,
            "mark": place.mark.mark if place.mark else "",
            "read_at": f"{said['day']}T{said['hour']}{place.offset}",
            "state": said["state"],
            "dry": said["dry"],
            "note": said["note"],
        }
        if said["dry"] == "yes" or said["state"] in WITHOUT_DEPTH:
            return found
        if said["hold"].strip() and said["wet"].strip():
            return found | {"hold_m": with_point(said["hold"]), "wet_m": with_point(said["wet"])}
        unit = UNITS[said["unit"]]
        for key, field in (("depth", "depth_m"), ("again", "again_m")):
            if said[key].strip():
                found[field] = f"{_number(key, said[key]) * unit:g}"
        return found


@require_safe
def round_of_today(request):
    """Which wells are read today, in walking order, with when each was read last."""
    context = {"wells": round_of_wells(request.user), "scripts": SCRIPTS}
    return render(request, "structures/wells/round.html", context)


@require_http_methods(METHODS)
def read_well(request, code):
    """One well: where to hold the tape, what it read last, what to expect, and the reading."""
    place = well_today(request.user, code)
    if place is None:
        raise Http404(_("There is no such well."))
    now = place.now
    form = LevelForm(
        request.POST or None,
        request.FILES or None,
        initial={"day": f"{now:%Y-%m-%d}", "hour": f"{now:%H:%M}"},
    )
    if request.method == "POST" and form.is_valid():
        told = _keep(request, place, form)
        if told is not None:
            messages.success(request, told)
            return redirect("structures:well-round")
    context = {
        "place": place,
        "well": place.well,
        "form": form,
        "may_send": may(request.user, Act.SEND_READINGS, place.well),
        "still": place.well.watershed.district.as_of is not None,
        "scripts": SCRIPTS,
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/wells/read.html", context, status=status)


def _keep(request, place: WellToday, form: LevelForm) -> str | None:
    """Keep the reading; None, with the form told, where it has to be looked at once more."""
    try:
        values = form.values(place)
        record = read_level_record(row_of(values, place.well.code), place.zone, told=set())
        depth = record.depth_m
        if depth is not None and record.again_m is None and not place.expects(depth):
            raise Refused(
                _("%(depth).2f m is far from what is expected.") % {"depth": depth},
                where="again",
                remedy=_("Wait, read again, and write the second reading."),
            )
        photo = None
        if place.well.site is not None:
            photo = PhotoForm(request.POST, request.FILES).keep(
                site=place.well.site,
                photo_id=uuid5(record.id, "photo"),
                what=place.well.code,
                by=request.user,
            )
        if photo is not None:
            values["photo"] = str(photo.pk)
            record = read_level_record(row_of(values, place.well.code), place.zone, told=set())
        (answer,) = take_readings(records=[record], by=request.user)
    except Refused as refused:
        refuse(form, refused)
        return None
    if answer.result == REFUSED:
        refuse(form, Refused(_("Nothing was kept."), findings=answer.findings), fields=NAMES)
        return None
    words = " ".join(f"{one.what} {one.remedy}".strip() for one in answer.findings)
    kept = _("Held for an engineer.") if answer.result == HELD else _("Kept.")
    return f"{place.well.code}: {kept} {words}".strip()


def _number(key: str, text: str) -> float:
    try:
        return float(with_point(text))
    except ValueError as error:
        what = _("%(text)s is not a number.") % {"text": text[:20]}
        raise Refused(what, where=key, remedy=_("Type the number.")) from error
