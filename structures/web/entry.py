"""Many sites, watersheds or bed points from one file: looked at first, then kept."""

from __future__ import annotations

from django.contrib import messages
from django.shortcuts import redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods

from structures.access import may
from structures.actions.entry import KINDS, enter_file, preview_entry
from structures.actions.inbox import ACT
from structures.errors import Refused
from structures.queries.districts import visible_districts
from structures.web.previews import FIELD, agreed, looked_at
from structures.web.refusals import STATUS
from structures.web.site_forms import EntryForm

NAMES_SHOWN = 100  # of what a file adds; the count says how many there are


@require_http_methods(["GET", "HEAD", "POST"])
def entry(request):
    districts = list(visible_districts(request.user))
    kinds = [
        (kind, words)
        for kind, words in KINDS
        if any(may(request.user, ACT[kind], one) for one in districts)
    ]
    if request.method == "POST" and FIELD in request.POST:
        return _keep(request)
    sent = request.method == "POST"
    form = EntryForm(
        *((request.POST, request.FILES) if sent else ()), kinds=kinds, districts=districts
    )
    context = {"form": form, "kinds": kinds}
    if sent and form.is_valid():
        _look(request, form, districts, context)
    wrong = sent and "read" not in context
    return render(request, "structures/entry.html", context, status=STATUS if wrong else 200)


def _look(request, form, districts, context):
    said = form.cleaned_data
    district = next(one for one in districts if one.code == said["district"])
    data = said["file"].read()
    handed = {"kind": said["kind"], "district_id": district.pk, "name": said["file"].name}
    try:
        context["read"] = preview_entry(**handed, data=data, by=request.user)
    except Refused as refused:
        context["refused"] = refused
        return
    context |= {
        "looked_at": looked_at(request, data, **handed),
        "name": said["file"].name,
        "names": context["read"].names[:NAMES_SHOWN],
        "kind_words": dict(KINDS)[said["kind"]],
    }


def _keep(request):
    handed, data = agreed(request)
    kept = enter_file(**handed, data=data, by=request.user)
    messages.success(request, _("%(count)d rows are kept.") % {"count": kept.rows})
    return redirect(
        "structures:watersheds" if handed["kind"] == "watersheds" else "structures:sites"
    )
