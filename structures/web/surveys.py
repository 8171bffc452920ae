"""Surveys: hand one in with a preview, look at one, at two side by side, at one sounding."""

from __future__ import annotations

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions import surveys as survey_actions
from structures.actions.survey_reading import start_reading
from structures.documents.survey_changes import survey_changes
from structures.errors import Refused
from structures.life.cautions import CLOSING_SENTENCE
from structures.queries.sites import visible_sites
from structures.queries.survey_reading import reading_of
from structures.queries.surveys import pack_of, surveys_of, visible_soundings
from structures.web.figures import figure_rows
from structures.web.previews import FIELD, agreed, looked_at
from structures.web.readings import drawn_alone, reading_context
from structures.web.refusals import STATUS
from structures.web.site_forms import SurveyForm

PARTS = {
    "ground": gettext_lazy("points of the ground"),
    "rock": gettext_lazy("rock tests"),
    "probes": gettext_lazy("probes"),
    "soundings": gettext_lazy("soundings"),
    "refraction": gettext_lazy("refraction lines"),
}


@require_http_methods(["GET", "HEAD", "POST"])
def new_survey(request, code):
    """Read a file and show what was read; keep it only at the second, plain yes."""
    site = get_object_or_404(visible_sites(request.user), code=code)
    if request.method == "POST" and FIELD in request.POST:
        return _keep(request, site)
    form = SurveyForm(request.POST, request.FILES) if request.method == "POST" else SurveyForm()
    context = {"site": site, "form": form, "may": may(request.user, Act.ACCEPT_SURVEY, site)}
    if request.method == "POST" and form.is_valid():
        file = form.cleaned_data["pack"]
        data = file.read()
        try:
            context["read"] = survey_actions.preview_survey(
                site_id=site.pk, name=file.name, data=data, by=request.user
            )
        except Refused as refused:
            context["refused"] = refused
        else:
            context |= {
                "looked_at": looked_at(request, data, name=file.name, site=site.code),
                "name": file.name,
                "parts": _parts(context["read"].pack),
                "newest": surveys_of(request.user, code).first(),
                "drawn": drawn_alone(context["read"].pack),
            }
    wrong = request.method == "POST" and "read" not in context
    return render(request, "structures/survey_new.html", context, status=STATUS if wrong else 200)


def _keep(request, site):
    said, data = agreed(request)
    if said["site"] != site.code:
        raise Refused(_("Another survey was looked at."), remedy=_("Choose the file again."))
    survey = survey_actions.accept_survey(
        site_id=site.pk, name=said["name"], data=data, by=request.user
    )
    words = _("Survey %(version)d is kept; a worker reads it now.")
    messages.success(request, words % {"version": survey.version})
    return redirect("structures:site", site.code)


def _parts(pack):
    """How many rows of each table were read; tables without a row are left out."""
    counts = ((words, len(getattr(pack, part))) for part, words in PARTS.items())
    return [(words, count) for words, count in counts if count]


@require_http_methods(["GET", "HEAD", "POST"])
def survey(request, code, version):
    """One survey; a POST has it read again as it counts today."""
    found = _survey(request, code, version)
    if request.method == "POST":
        start_reading(survey=found, by=request.user)
        return redirect("structures:survey", code, version)
    run = reading_of(found)
    pack = pack_of(found)
    context = {
        "site": found.site,
        "survey": found,
        "run": run,
        "pack": pack,
        "parts": _parts(pack),
        "soundings": visible_soundings(request.user).filter(survey=found),
        "lines": found.rock_lines.select_related("by"),
        "others": surveys_of(request.user, code).exclude(pk=found.pk),
        "may_read": may(request.user, Act.ACCEPT_SURVEY, found),
        "closing": CLOSING_SENTENCE,
        **reading_context(run),
    }
    if context["appraisal"] is None:
        context["figures"] = drawn_alone(pack)
    return render(request, "structures/survey.html", context)


@require_safe
def against(request, code, version, other):
    """Two versions side by side: what was handed in otherwise, and what follows from it."""
    sides = [_survey(request, code, number) for number in sorted((version, other))]
    if version == other:
        raise Http404(_("A survey does not differ from itself."))
    runs = [reading_of(one) for one in sides]
    results = [(run and run.result) or {} for run in runs]
    context = {
        "site": sides[0].site,
        "old": sides[0],
        "new": sides[1],
        "changes": survey_changes(sides[0].pack, sides[1].pack),
        "drawings": [(result.get("figures") or {}).get("narrow") for result in results],
        "rows": figure_rows(*(result.get("appraisal") for result in results)),
    }
    return render(request, "structures/survey_against.html", context)


@require_safe
def sounding(request, code, version, order):
    """One sounding on log axes: layers, depth with its range, what fits as well."""
    found = get_object_or_404(
        visible_soundings(request.user),
        survey__site__code=code,
        survey__version=version,
        order=order,
    )
    run = reading_of(found.survey)
    result = None if run is None else run.result
    context = {"site": found.survey.site, "survey": found.survey, "sounding": found, "run": run}
    if result:
        context["drawn"] = result["figures"]["soundings"][order - 1]
        context["said"] = result["soundings"][order - 1]
    return render(request, "structures/sounding.html", context)


def _survey(request, code, version):
    surveys = surveys_of(request.user, code).select_related("site__watershed__district")
    return get_object_or_404(surveys, version=version)
