"""Wells: the list with its map, one well's sheet, entering and changing one, its measuring point."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final
from uuid import uuid4

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions import wells as well_actions
from structures.actions.marks import change_mark
from structures.actions.photos import keep_photo
from structures.drawing.map import draw_map
from structures.errors import Refused
from structures.queries.districts import visible_watersheds
from structures.queries.map import outlines_of, runs_of
from structures.queries.wells import places_of, search_wells, visible_wells, well_sheet
from structures.web.lists import sheet_of
from structures.web.refusals import STATUS, refuse
from structures.web.well_forms import ApartForm, EditWellForm, MarkForm, NewWellForm, WellFilter

if TYPE_CHECKING:
    from uuid import UUID

    from django.http import HttpRequest

METHODS: Final = ["GET", "HEAD", "POST"]


@require_safe
def wells(request):
    """The list and the map of one filter; wells that nobody reads any more stand out."""
    watersheds = list(visible_watersheds(request.user))
    form = WellFilter(request.GET, watersheds=watersheds)
    chosen = form.cleaned_data if form.is_valid() else {"q": "", "watershed": "", "role": ""}
    found = search_wells(
        request.user, chosen["q"], watershed=chosen["watershed"], role=chosen["role"]
    )
    if chosen["watershed"]:
        watersheds = [one for one in watersheds if one.code == chosen["watershed"]]
    shown = outlines_of(watersheds), places_of(found), runs_of(watersheds)
    context = {
        "form": form,
        "page": sheet_of(request, found),
        "may_enter": any(may(request.user, Act.ENTER_WELL, one) for one in watersheds),
    }
    if any(shown):
        context["map_wide"] = draw_map(*shown)
        context["map_narrow"] = draw_map(*shown, name="map-narrow", narrow=True)
    return render(request, "structures/wells/wells.html", context)


@require_http_methods(METHODS)
def new_well(request):
    watersheds = [
        one for one in visible_watersheds(request.user) if may(request.user, Act.ENTER_WELL, one)
    ]
    form = NewWellForm(
        request.POST or None, watersheds=watersheds, initial={"owner_consents": "not known"}
    )
    if request.method == "POST" and form.is_valid():
        said = form.values()
        shed = next(one for one in watersheds if one.code == said.pop("watershed"))
        try:
            entered = well_actions.enter_well(watershed_id=shed.pk, values=said, by=request.user)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("%(code)s is entered.") % {"code": entered.code})
            return redirect("structures:well", entered.code)
    context = {"form": form, "may_enter": bool(watersheds)}
    return render(request, "structures/wells/well_new.html", context, status=_status(form))


@require_safe
def well(request, code):
    """One well's sheet: its marks with their days, its last readings, what is doubted."""
    sheet = well_sheet(request.user, code)
    if sheet is None:
        raise Http404(_("There is no such well."))
    context = {
        "sheet": sheet,
        "well": sheet.well,
        "may_enter": may(request.user, Act.ENTER_WELL, sheet.well),
        "apart": ApartForm(),
    }
    return render(request, "structures/wells/well.html", context)


@require_http_methods(METHODS)
def edit_well(request, code):
    found = get_object_or_404(visible_wells(request.user), code=code)
    form = EditWellForm(request.POST or None, well=found)
    if request.method == "POST" and form.is_valid():
        said = form.values()
        try:
            well_actions.edit_well(
                well_id=found.pk, seen_at=said.pop("seen_at"), values=said, by=request.user
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("%(code)s is changed.") % {"code": code})
            return redirect("structures:well", code)
    context = {"well": found, "form": form}
    return render(request, "structures/wells/well_edit.html", context, status=_status(form))


@require_http_methods(METHODS)
def new_mark(request, code):
    """Another measuring point: what it changes is told reading by reading, on the sheet."""
    found = get_object_or_404(visible_wells(request.user), code=code)
    form = MarkForm(request.POST or None, request.FILES or None)
    if request.method == "POST" and form.is_valid():
        try:
            changed = change_mark(
                well_id=found.pk,
                values=form.values(),
                by=request.user,
                photo_id=_photo(request, found, form),
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            context = {"well": found, "changed": changed, "zone": found.watershed.district.zone}
            return render(request, "structures/wells/mark_changed.html", context)
    context = {
        "well": found,
        "form": form,
        "now": found.marks.filter(valid_to__isnull=True).first(),
        "may_enter": may(request.user, Act.ENTER_WELL, found),
    }
    return render(request, "structures/wells/mark.html", context, status=_status(form))


@require_http_methods(["POST"])
def keep_apart(request, code):
    found = get_object_or_404(visible_wells(request.user), code=code)
    form = ApartForm(request.POST)
    if not form.is_valid():
        raise Refused(_("The reason is missing."), where=code, remedy=_("Write why both stay."))
    well_actions.keep_apart(well_id=found.pk, by=request.user, **form.cleaned_data)
    messages.success(request, _("Both wells stay."))
    return redirect("structures:well", code)


def _photo(request: HttpRequest, found, form: MarkForm) -> UUID | None:
    """Keep the photo with the well's site; a well of no site has no place for one."""
    sent = form.cleaned_data.get("photo")
    if not sent or found.site is None:
        return None
    kept = keep_photo(
        site_id=found.site.pk,
        photo_id=uuid4(),
        data=sent.read(),
        by=request.user,
        what=f"{found.code}: {form.cleaned_data['mark']}",
    )
    return kept.pk


def _status(form) -> int:
    return STATUS if form.is_bound and form.errors else 200
