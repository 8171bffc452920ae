"""Defaults and what counts in their place, by district; districts themselves."""

from __future__ import annotations

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.utils.translation import gettext as _
from django.views.decorators.http import require_GET, require_http_methods

from structures.access import Act, keeps_office, may
from structures.actions import settings as acts
from structures.errors import Refused
from structures.queries.districts import administered_districts
from structures.queries.settings import settings_in_force
from structures.queries.settings_sheet import (
    FIGURES,
    changeable_default,
    setting_history,
    setting_of,
    settings_by_group,
    settings_districts,
)
from structures.web.refusals import STATUS, refuse
from structures.web.settings_forms import DistrictForm, SettingForm

DISTRICT_FIELDS = ("name", "zone", "currency", "water_year_month", "water_year_day")


@require_GET
def settings(request):
    """One district's sheet; an office without a district has its defaults to read."""
    districts = list(settings_districts(request.user))
    code = request.GET.get("district", districts[0].code if districts else "")
    district = next((one for one in districts if one.code == code), None)
    if code and district is None:
        raise Http404
    context = {
        "districts": districts,
        "district": district,
        "groups": settings_by_group(district) if district else {},
        "allowed": _allowed(request.user, district),
        "fixed": FIGURES,
        "keeps": administered_districts(request.user),
        "keeps_office": keeps_office(request.user),
    }
    return render(request, "structures/settings.html", context)


@require_http_methods(["GET", "HEAD", "POST"])
def setting(request, key):
    default = changeable_default(key)
    code = request.GET.get("district", "")
    district = get_object_or_404(settings_districts(request.user), code=code) if code else None
    if default is None or (district is None and not keeps_office(request.user)):
        raise Http404
    allowed = default.owner in _allowed(request.user, district)
    form = SettingForm(
        request.POST or None,
        default=default,
        on_behalf=may(request.user, Act.MANAGE_PEOPLE, district),
    )
    if request.method == "POST" and form.is_valid():
        try:
            kept = acts.change_setting(
                key=key,
                value=form.cleaned_data["value"],
                district=district,
                reason=form.cleaned_data["reason"],
                by=request.user,
                decided=form.decided,
            )
        except Refused as refused:
            refuse(form, refused, fields={key: "value"})
        else:
            value = default.unset if kept is None else default.written(kept.value)
            told = {"words": default.words, "value": value}
            messages.success(request, _("%(words)s: %(value)s holds now.") % told)
            return redirect(request.get_full_path())
    context = {
        "default": default,
        "district": district,
        "value": _in_force(default, district),
        "history": setting_history(key, district),
        "allowed": allowed,
        "keeps_office": keeps_office(request.user),
        "form": form,
    }
    return _answer(request, "structures/setting.html", context, form)


@require_http_methods(["GET", "HEAD", "POST"])
def new_district(request):
    if not keeps_office(request.user):
        raise Http404
    form = DistrictForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            district = acts.enter_district(by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("The district is open."))
            return redirect(f"{reverse('structures:settings')}?district={district.code}")
    return _answer(request, "structures/district.html", {"form": form}, form)


@require_http_methods(["GET", "HEAD", "POST"])
def district(request, code):
    kept = get_object_or_404(administered_districts(request.user), code=code)
    form = DistrictForm(
        request.POST or None, initial={key: getattr(kept, key) for key in DISTRICT_FIELDS}
    )
    del form.fields["code"]  # what others point to stays
    if request.method == "POST" and form.is_valid():
        try:
            acts.edit_district(district_id=kept.pk, by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("Kept."))
            return redirect("structures:district", code)
    context = {"form": form, "district": kept}
    return _answer(request, "structures/district.html", context, form)


def _allowed(user, district):
    """Owners whose defaults the user may change there."""
    return [owner for owner, act in acts.ACT.items() if may(user, act, district)]


def _in_force(default, district):
    """What counts in a district, its own word before the office's; or in the office."""
    if district is not None:
        return settings_in_force(district)[default.key].value
    kept = setting_of(default.key, None)
    return default.value if kept is None else kept.value


def _answer(request, template, context, form):
    wrong = form.is_bound and form.errors
    return render(request, template, context, status=STATUS if wrong else 200)
