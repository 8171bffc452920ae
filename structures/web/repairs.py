"""Repairs: what was sent beside what is suggested, and who decided what for which reason."""

from __future__ import annotations

from typing import Final

from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import ngettext
from django.views.decorators.http import require_http_methods

from structures.access import Act, may
from structures.actions.repairs import decide_repairs, reverse_repair
from structures.errors import Refused
from structures.queries.repairs import (
    decided_repairs,
    decides_anywhere,
    visible_repairs,
    waiting_repairs,
)
from structures.web.lists import sheet_of
from structures.web.refusals import STATUS, refuse
from structures.web.well_forms import DecideForm

METHODS: Final = ["GET", "HEAD", "POST"]
LAST_DECIDED: Final = 20


@require_http_methods(METHODS)
def repairs(request):
    """What waits, raw beside suggestion; several are decided with one reason."""
    well, rule = request.GET.get("well", ""), request.GET.get("rule", "")
    found = waiting_repairs(request.user, well=well, rule=rule)
    form = DecideForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            rows = decide_repairs(repair_ids=_chosen(request), by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            words = ngettext("%(n)d doubt is decided.", "%(n)d doubts are decided.", len(rows))
            messages.success(request, words % {"n": len(rows)})
            return redirect(request.get_full_path())
    context = {
        "page": sheet_of(request, found),
        "form": form,
        "well": well,
        "rule": rule,
        "decided": decided_repairs(request.user)[:LAST_DECIDED],
        "may_decide": decides_anywhere(request.user),
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/wells/repairs.html", context, status=status)


@require_http_methods(METHODS)
def repair(request, repair_id):
    """One doubt with all that was decided on its reading; a decision is reversed here."""
    found = get_object_or_404(visible_repairs(request.user), pk=repair_id)
    form = DecideForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        said = form.cleaned_data
        try:
            if found.decision:
                reverse_repair(repair_id=found.pk, by=request.user, **said)
            else:
                decide_repairs(repair_ids=[found.pk], by=request.user, **said)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("Decided. Levels that depend on it are worked out anew."))
            return redirect("structures:well", found.reading.well.code)
    context = {
        "repair": found,
        "reading": found.reading,
        "well": found.reading.well,
        "all": visible_repairs(request.user).filter(reading=found.reading).order_by("at", "pk"),
        "form": form,
        "may_decide": may(request.user, Act.DECIDE_REPAIR, found.reading.well)
        and found.reading.by_id != request.user.pk
        and not hasattr(found, "reversed_by"),
        "own": found.reading.by_id == request.user.pk,
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/wells/repair.html", context, status=status)


def _chosen(request) -> list[int]:
    return [int(one) for one in request.POST.getlist("repairs") if one.isascii() and one.isdigit()]
