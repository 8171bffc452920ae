"""Rate schedules: what holds, what one says, what a new one would change."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from costing.actions.schedule import import_schedule, preview_schedule
from costing.queries.schedules import differences, schedule_record, visible_schedules
from costing.web.forms import ScheduleForm
from structures.access import Act, districts
from structures.errors import Refused
from structures.queries.districts import today_of
from structures.web.lists import sheet_of
from structures.web.previews import FIELD, agreed, looked_at
from structures.web.refusals import STATUS

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse


@require_safe
def rates(request: HttpRequest) -> HttpResponse:
    page = sheet_of(request, visible_schedules(request.user).order_by("district__code", "-at"))
    for schedule in page:
        schedule.holds = _holds(schedule)
    may_bring = districts(request.user, Act.IMPORT_SCHEDULE).exists()
    return render(request, "costing/rates.html", {"page": page, "may_bring": may_bring})


def _holds(schedule):
    """Whether a schedule holds on its district's day."""
    day = today_of(schedule.district)
    begun = schedule.valid_from is None or schedule.valid_from <= day
    return begun and (schedule.valid_to is None or day <= schedule.valid_to)


@require_safe
def schedule(request: HttpRequest, pk: int) -> HttpResponse:
    found = get_object_or_404(visible_schedules(request.user), pk=pk)
    others = visible_schedules(request.user).filter(district=found.district).exclude(pk=found.pk)
    context = {
        "schedule": found,
        "holds": _holds(found),
        "rates": found.rates.prefetch_related("components").order_by("order"),
        "others": others[:12],
    }
    return render(request, "costing/schedule.html", context)


@require_safe
def schedule_against(request: HttpRequest, pk: int, other: int) -> HttpResponse:
    new = get_object_or_404(visible_schedules(request.user).prefetch_related("rates"), pk=pk)
    old = get_object_or_404(
        visible_schedules(request.user).filter(district=new.district).prefetch_related("rates"),
        pk=other,
    )
    changes = differences(schedule_record(old), schedule_record(new))
    context = {"new": new, "old": old, "changes": changes}
    return render(request, "costing/schedule_against.html", context)


@require_http_methods(["GET", "HEAD", "POST"])
def new_schedule(request: HttpRequest) -> HttpResponse:
    """Read a schedule and show what it changes; keep it only at the second, plain yes."""
    if request.method == "POST" and FIELD in request.POST:
        return _keep(request)
    where = districts(request.user, Act.IMPORT_SCHEDULE)
    sent = request.method == "POST"
    form = ScheduleForm(where, request.POST, request.FILES) if sent else ScheduleForm(where)
    context = {"form": form, "may_bring": where.exists()}
    if sent and form.is_valid():
        file, district = form.cleaned_data["rates"], form.cleaned_data["district"]
        data = file.read()
        try:
            context["read"] = preview_schedule(
                district_id=district.pk, name=file.name, data=data, by=request.user
            )
        except Refused as refused:
            context["refused"] = refused
        else:
            context |= {
                "looked_at": looked_at(request, data, district=district.pk, name=file.name),
                "name": file.name,
                "district": district,
            }
    wrong = sent and "read" not in context
    return render(request, "costing/schedule_new.html", context, status=STATUS if wrong else 200)


def _keep(request):
    said, data = agreed(request)
    kept = import_schedule(
        district_id=said["district"], name=said["name"], data=data, by=request.user
    )
    words = _("%(schedule)s is kept. Open estimates priced at other rates are stale now.")
    messages.success(request, words % {"schedule": kept})
    return redirect("costing:schedule", kept.pk)
