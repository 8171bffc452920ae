"""Hydrographs: several wells on one axis of time with the rain, as drawing, numbers and files."""

from __future__ import annotations

import csv
import io
from typing import TYPE_CHECKING, Final

from django.http import Http404, HttpResponse
from django.shortcuts import render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_safe

from structures.documents.hydrograph_sheet import hydrograph_pdf
from structures.drawing.hydrograph import draw_hydrograph
from structures.drawing.standalone import standalone
from structures.queries.districts import today_of
from structures.queries.hydrograph import WELLS_MOST, Hydrograph, hydrograph_of
from structures.queries.wells import visible_wells

if TYPE_CHECKING:
    from django.http import HttpRequest

ROWS_SHOWN: Final = 500  # of the numbers on the page; the CSV has them all
HEADINGS: Final = ("well", "read_at", "depth_m", "level_m", "state", "dry", "counts")


@require_safe
def hydrograph(request):
    found = _asked(request)
    context = {
        "found": found,
        "choices": visible_wells(request.user).values_list("code", "name", "role"),
        "chosen": [one.code for one in found.wells],
        "most": WELLS_MOST,
        "query": request.GET.urlencode(),
        "rows": found.rows[-ROWS_SHOWN:],
        "zone": found.wells[0].watershed.district.zone if found.wells else "UTC",
    }
    if found.tracks:
        context["wide"] = _drawn(found)
        context["narrow"] = _drawn(found, name="hydrograph-narrow", narrow=True)
    return render(request, "structures/wells/hydrograph.html", context)


@require_safe
def drawing_svg(request):
    answer = HttpResponse(standalone(_drawn(_some(request))), content_type="image/svg+xml")
    return _named(answer, "hydrograph.svg")


@require_safe
def drawing_pdf(request):
    found = _some(request)
    title = _("Water levels of %(wells)s") % {"wells": ", ".join(one.code for one in found.wells)}
    lines = [_("Raw water. Levels in metres above the datum of the district.")]
    day = today_of(found.wells[0].watershed.district)
    data = hydrograph_pdf(_drawn(found), title, lines, made_on=day)
    return _named(HttpResponse(data, content_type="application/pdf"), "hydrograph.pdf")


@require_safe
def readings_csv(request):
    """The readings drawn; of a dry well the depth and level are those of its bottom."""
    text = io.StringIO()
    writer = csv.writer(text)
    writer.writerow(HEADINGS)
    for code, read_at, depth, level, state, dry, standing in _some(request).rows:
        day = read_at.isoformat(timespec="minutes")
        writer.writerow([code, day, depth, level, state, "yes" if dry else "no", standing])
    answer = HttpResponse(text.getvalue(), content_type="text/csv; charset=utf-8")
    return _named(answer, "levels.csv")


def _asked(request: HttpRequest) -> Hydrograph:
    return hydrograph_of(request.user, request.GET.getlist("well"))


def _some(request: HttpRequest) -> Hydrograph:
    found = _asked(request)
    if not found.wells:
        raise Http404(_("There is no such well."))
    return found


def _drawn(found: Hydrograph, **how) -> str:
    return draw_hydrograph(found.tracks, rain=found.rain, completed=found.completed, **how)


def _named(answer: HttpResponse, name: str) -> HttpResponse:
    answer["Content-Disposition"] = f'attachment; filename="{name}"'
    return answer
