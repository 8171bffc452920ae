"""The works in the office: strips and hold points of a wall, one strip, one hold point, two records."""

from __future__ import annotations

from typing import Final
from uuid import uuid4

from django.contrib import messages
from django.db import transaction
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions import strips as strip_actions
from structures.actions.alarms import lift_alarm, set_alarm
from structures.actions.clashes import decide_clash
from structures.actions.clay import enter_clay_source
from structures.actions.holds import see_hold
from structures.drawing.strips import draw_strips
from structures.errors import Refused
from structures.intake.field_records import HOLD_READINGS, KINDS, point_of
from structures.life.cautions import CLOSING_SENTENCE
from structures.life.holds import NINE
from structures.queries.settings import settings_in_force
from structures.queries.works import (
    hold_requests,
    looks_missing_today,
    open_clashes,
    photos_of_strip,
    strips_view,
    visible_clashes,
    visible_holds,
    works_of,
)
from structures.web.field_forms import ClashForm, ClaySourceForm, DayForm, ReasonForm, SeeForm
from structures.web.field_photos import PhotoForm
from structures.web.refusals import STATUS, refuse

METHODS: Final = ["GET", "HEAD", "POST"]
LOOKS_SHOWN: Final = 8  # of the whole trench; the sheet of a strip shows its own


@require_http_methods(METHODS)
def works(request, code):
    """Strips against hold points, the drawing of them, what is open and what went wrong."""
    found = _found(request, code)
    site, structure = found.structure.site, found.structure
    form = ReasonForm(request.POST if request.POST.get("act") in _ALARM else None)
    if request.method == "POST":
        answer = _change(request, structure, form)
        if answer is not None:
            return answer
    view = strips_view(found)
    context = {
        "site": site,
        "works": found,
        "form": form,
        "alarm": next((one for one in structure.alarms.all() if one.lifted_at is None), None),
        "nine": NINE,
        "incidents": structure.incidents.select_related("by", "strip"),
        "sheets": structure.day_sheets.select_related("by")[:10],
        "looks": structure.looks.select_related("by", "strip")[:LOOKS_SHOWN],
        "clay": structure.clay_tests.select_related("by", "strip")[:10],
        "clashes": open_clashes(request.user).filter(record__site=site),
        "may_cut": may(request.user, Act.DRAW, site),
        "may_record": may(request.user, Act.RECORD_WORKS, site),
        "may_set": may(request.user, Act.SET_ALARM, site),
        "may_lift": may(request.user, Act.LIFT_ALARM, site),
        "closing": CLOSING_SENTENCE,
    }
    if view is not None:
        context["wide"] = draw_strips(view)
        context["narrow"] = draw_strips(view, narrow=True)
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/works/works.html", context, status=status)


@require_http_methods(METHODS)
def strip(request, code, number):
    """One strip: where it stands, its nine points, what was found and written down of it."""
    found = _found(request, code)
    line = found.line(number)
    if line is None:
        raise Http404(_("There is no such strip."))
    form = DayForm(request.POST or None, initial={"on": found.today})
    if request.method == "POST" and form.is_valid():
        try:
            told = _move_strip(request, line.strip, form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, told)
            return redirect("structures:strip", code, number)
    kept = line.strip
    context = {
        "site": found.structure.site,
        "works": found,
        "line": line,
        "strip": kept,
        "form": form,
        "holds": visible_holds(request.user).filter(strip=kept),
        "found": kept.found.select_related("by", "corrects"),
        "looks": kept.looks.select_related("by")[:20],
        "clay": kept.clay_tests.select_related("by"),
        "incidents": kept.incidents.select_related("by"),
        "photos": photos_of_strip(kept),
        "nine": NINE,
        "may_record": may(request.user, Act.RECORD_WORKS, found.structure),
        "closing": CLOSING_SENTENCE,
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/works/strip.html", context, status=status)


@require_http_methods(METHODS)
def clay(request, code):
    """Where the clay comes from: pits with what is proven, and every test."""
    found = _found(request, code)
    structure = found.structure
    site = structure.site
    form = ClaySourceForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            _enter_pit(request, site, form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("The pit is entered."))
            return redirect("structures:clay", code)
    context = {
        "site": site,
        "works": found,
        "form": form,
        "sources": site.clay_sources.select_related("by", "consent"),
        "tests": structure.clay_tests.select_related("by", "strip"),
        "least_m": settings_in_force(site.watershed.district)["clay_pit_from_bund_m"].value,
        "may_record": may(request.user, Act.RECORD_WORKS, site),
        "closing": CLOSING_SENTENCE,
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/works/clay.html", context, status=status)


@require_safe
def desk(request):
    """What waits for an engineer: hold points to be seen, records of which two forms came."""
    context = {
        "requests": hold_requests(request.user),
        "clashes": open_clashes(request.user),
        "missing": looks_missing_today(request.user),
        "kinds": KINDS,
        "nine": NINE,
    }
    return render(request, "structures/works/desk.html", context)


@require_http_methods(METHODS)
def hold(request, hold_id):
    """One hold point as it was asked for; an engineer who did not ask says what was seen."""
    found = get_object_or_404(visible_holds(request.user), pk=hold_id)
    structure = found.strip.structure
    site = structure.site
    form = SeeForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            _see(request, found, site, form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("%(hold)s is seen.") % {"hold": found.hold})
            return redirect("structures:works", site.code)
    point = point_of(found.hold)
    asked = {field.key: field for field in HOLD_READINGS[point]}
    context = {
        "site": site,
        "hold": found,
        "point": NINE[point],
        "readings": [_reading(asked.get(key), key, value) for key, value in found.readings.items()],
        "form": form,
        "may_see": may(request.user, Act.SEE_HOLD, site) and found.asked_by_id != request.user.pk,
        "clashes": open_clashes(request.user).filter(record=found.pk),
        "closing": CLOSING_SENTENCE,
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/works/hold.html", context, status=status)


@require_http_methods(METHODS)
def clash(request, clash_id):
    """Two forms of one record side by side; which counts, and why."""
    found = get_object_or_404(visible_clashes(request.user), pk=clash_id)
    form = ClashForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            decide_clash(clash_id=found.pk, by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("It is decided; both stay where they are."))
            return redirect("structures:desk")
    first, second = found.record.content, found.content
    kind = KINDS.get(found.record.kind)
    words = {} if kind is None else {field.key: field.asks for field in kind.fields}
    keys = [*words, *(key for key in {**first, **second} if key not in words)]
    context = {
        "site": found.record.site,
        "clash": found,
        "kind": kind,
        "rows": [
            (
                words.get(key, key),
                first.get(key),
                second.get(key),
                first.get(key) != second.get(key),
            )
            for key in keys
            if key != "id" and (key in first or key in second)
        ],
        "form": form,
        "may_settle": may(request.user, Act.SETTLE_CLASH, found.record.site),
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/works/clash.html", context, status=status)


_ALARM: Final = ("alarm", "lift")


def _reading(field, key, value):
    """Give one reading of a hold point as a page prints it: what was asked, what was read, unit."""
    if isinstance(value, bool):
        value = _("yes") if value else _("no")
    elif isinstance(value, float):
        value = f"{value:.3f}".rstrip("0").rstrip(".")
    return (key, value, "") if field is None else (field.asks, value, field.unit)


@transaction.atomic
def _see(request, found, site, said):
    """Say what was seen, and keep the seer's own photo with it, or neither."""
    what = f"{found.hold} of strip {found.strip.number}"
    photo = PhotoForm(request.POST, request.FILES).keep(
        site=site, photo_id=uuid4(), what=what, by=request.user
    )
    photos = [] if photo is None else [photo.pk]
    see_hold(hold_id=found.pk, by=request.user, photos=photos, **said)


@transaction.atomic
def _enter_pit(request, site, said):
    """Enter a pit with the scan of the consent, or neither."""
    consent = PhotoForm(request.POST, request.FILES).keep(
        site=site, photo_id=uuid4(), what=f"consent for {said['name']}", by=request.user
    )
    enter_clay_source(site_id=site.pk, by=request.user, consent=consent, **said)


def _found(request, code):
    found = works_of(request.user, code)
    if found is None:
        raise Http404(_("There is no such site."))
    return found


def _change(request, structure, form):
    """Carry out what the page of the works asks for; None where it asked for nothing or was refused."""
    act = request.POST.get("act")
    code = structure.site.code
    if act == "cut":
        cut = strip_actions.cut_wall(structure_id=structure.pk, by=request.user)
        messages.success(request, _("The wall is cut into %(count)d strips.") % {"count": len(cut)})
        return redirect("structures:works", code)
    if act in _ALARM and form.is_valid():
        change = set_alarm if act == "alarm" else lift_alarm
        try:
            change(structure_id=structure.pk, by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
            return None
        told = _("The alarm is set.") if act == "alarm" else _("The alarm is lifted.")
        messages.success(request, told)
        return redirect("structures:works", code)
    return None


def _move_strip(request, kept, said):
    number = {"number": kept.number}
    if kept.opened_on is None:
        strip_actions.open_strip(strip_id=kept.pk, on=said["on"], by=request.user)
        return _("Strip %(number)d is open.") % number
    strip_actions.cover_strip(
        strip_id=kept.pk, on=said["on"], by=request.user, knows_unseen=said["knows_unseen"]
    )
    return _("Strip %(number)d is covered.") % number
