"""The measurement book of a structure, a new entry, and the check by another person."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions.measurements import (
    Work,
    check_measurement,
    correct_measurement,
    enter_measurement,
    send_back_measurement,
)
from structures.errors import Refused
from structures.queries.districts import today_of
from structures.queries.measurements import (
    book_of,
    holds_seen,
    line_of,
    offered,
    visible_measurements,
)
from structures.web.measurement_forms import CorrectionForm, MeasurementForm, ReasonForm
from structures.web.refusals import STATUS, refuse

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

METHODS: Final = ["GET", "HEAD", "POST"]


@require_safe
def measurements(request: HttpRequest, code: str) -> HttpResponse:
    book = _book(request, code)
    may_measure = may(request.user, Act.MEASURE, book.structure)
    to_measure, why_none = (), ""
    if may_measure:
        try:
            to_measure = offered(book.structure)
        except Refused as refused:
            why_none = refused.sentence()
    mine = [line for line in book.waiting if line.entry.measured_by_id == request.user.pk]
    context = {
        "site": book.structure.site,
        "book": book,
        "may_measure": may_measure,
        "for_me": [line for line in book.waiting if may_measure and line not in mine],
        "offered": to_measure,
        "why_none": why_none,
    }
    return render(request, "structures/measurements.html", context)


@require_http_methods(METHODS)
def new_measurement(request: HttpRequest, code: str) -> HttpResponse:
    book = _book(request, code)
    structure = book.structure
    if not may(request.user, Act.MEASURE, structure):
        raise Http404
    strips = structure.strips.filter(opened_on__isnull=False).order_by("number")
    initial = {"measured_on": today_of(structure.site.watershed.district), **request.GET.dict()}
    form = MeasurementForm(request.POST or None, initial=initial, strips=strips)
    if request.method == "POST" and form.is_valid():
        said = dict(form.cleaned_data)
        work = Work(strip_id=said.pop("strip"), **said)
        try:
            entry = enter_measurement(structure_id=structure.pk, work=work, by=request.user)
        except Refused as refused:
            refuse(form, refused)
        else:
            words = _("Entry %(code)s is entered and waits to be checked by another person.")
            messages.success(request, words % {"code": entry.code})
            return redirect("structures:measurements", code)
    context = {"site": structure.site, "form": form}
    return render(request, "structures/measurement_new.html", context, status=_status(form))


@require_http_methods(METHODS)
def measurement(request: HttpRequest, entry_id) -> HttpResponse:
    """One entry: accept it, send it back, or correct it."""
    entry = get_object_or_404(visible_measurements(request.user), pk=entry_id)
    site, act = entry.structure.site, request.POST.get("act", "")
    forms = {
        "send-back": ReasonForm(request.POST if act == "send-back" else None, prefix="back"),
        "correct": CorrectionForm(
            request.POST if act == "correct" else None,
            initial={"measured_on": today_of(site.watershed.district)},
            prefix="correct",
        ),
    }
    refused = None
    if request.method == "POST":
        form = forms.get(act)
        if act == "check" or (form is not None and form.is_valid()):
            try:
                told = _carry_out(entry, act, form.cleaned_data if form else {}, request.user)
            except Refused as error:
                refused = error
            else:
                messages.success(request, told)
                return redirect("structures:measurements", site.code)
        elif form is None:
            raise Http404
    line = line_of(entry, holds_seen(entry.structure))
    may_measure = may(request.user, Act.MEASURE, entry.structure)
    own = entry.measured_by_id == request.user.pk
    context = {
        "site": site,
        "line": line,
        "entry": entry,
        "corrections": entry.corrections.select_related("measured_by", "checked_by"),
        "may_check": may_measure and line.state == "waiting" and not own,
        "own": may_measure and line.state == "waiting" and own,
        "may_correct": may_measure and line.state == "accepted" and entry.corrects_id is None,
        "back": forms["send-back"],
        "correct": forms["correct"],
        "refused": refused,
    }
    wrong = refused or any(form.errors for form in forms.values())
    return render(request, "structures/measurement.html", context, status=STATUS if wrong else 200)


def _carry_out(entry, act, said, by):
    if act == "check":
        line = check_measurement(entry_id=entry.pk, by=by)
        if line.holds:
            return _("Entry %(code)s is accepted; its line will be held.") % {"code": entry.code}
        return _("Entry %(code)s is accepted.") % {"code": entry.code}
    if act == "send-back":
        send_back_measurement(entry_id=entry.pk, why=said["why"], by=by)
        return _("Entry %(code)s is sent back, with your reason.") % {"code": entry.code}
    row = correct_measurement(entry_id=entry.pk, by=by, **said)
    return _("Correction %(code)s waits to be checked by another person.") % {"code": row.code}


def _book(request, code):
    book = book_of(request.user, code)
    if book is None:
        raise Http404
    return book


def _status(form):
    return STATUS if form.is_bound and form.errors else 200
