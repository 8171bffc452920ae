"""Sites: the list with its map, one site's sheet, its edit, its rock line, other walls for it."""

from __future__ import annotations

import re
from dataclasses import replace

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions import rock as rock_actions
from structures.actions import sites as site_actions
from structures.documents.trial import try_wall
from structures.drawing.map import draw_map
from structures.errors import Refused
from structures.intake.practice import practice_of
from structures.life.cautions import CLOSING_SENTENCE
from structures.life.stages import STAGES
from structures.queries.districts import visible_districts, visible_watersheds
from structures.queries.history import changes_of
from structures.queries.map import outlines_of, runs_of, spots_of
from structures.queries.site_wells import wells_of
from structures.queries.sites import (
    newest_rock_line,
    newest_survey,
    search_sites,
    search_watersheds,
    visible_sites,
)
from structures.queries.survey_reading import reading_of, reading_params
from structures.queries.surveys import names_of_tests, pack_of, surveys_of, visible_rock_lines
from structures.queries.works import unseen_strips
from structures.web.figures import figure_rows
from structures.web.lists import sheet_of
from structures.web.readings import drawn_alone, reading_context
from structures.web.refusals import STATUS, refuse
from structures.web.site_forms import RockForm, SiteFilter, SiteForm, TryForm

SPARE_POINTS = 3  # blank rows for points that are not on the suggested line
READ_METHODS = ["GET", "HEAD", "POST"]


@require_safe
def sites(request):
    """The list and the map of one filter."""
    watersheds = list(visible_watersheds(request.user))
    form = SiteFilter(request.GET, watersheds=watersheds)
    chosen = form.cleaned_data if form.is_valid() else {"q": "", "watershed": "", "stage": ""}
    found = search_sites(request.user, chosen["q"])
    if chosen["watershed"]:
        found = found.filter(watershed__code=chosen["watershed"])
        watersheds = [one for one in watersheds if one.code == chosen["watershed"]]
    if chosen["stage"]:
        found = found.filter(structure__stage=chosen["stage"])
    shown = outlines_of(watersheds), spots_of(found), runs_of(watersheds)
    context = {
        "form": form,
        "page": sheet_of(request, found),
        "sheds": search_watersheds(request.user, chosen["q"])[:5] if chosen["q"] else (),
        "may_enter": any(may(request.user, Act.ENTER_SITE, one) for one in _districts(request)),
        "stages": STAGES,
    }
    if any(shown):
        context["map_wide"] = draw_map(*shown)
        context["map_narrow"] = draw_map(*shown, name="map-narrow", narrow=True)
    return render(request, "structures/sites.html", context)


@require_safe
def site(request, code):
    """One site's sheet; what a worker read of its newest survey is the heart of it."""
    found = get_object_or_404(visible_sites(request.user), code=code)
    survey = newest_survey(found)
    run = None if survey is None else reading_of(survey)
    line = None if survey is None else newest_rock_line(survey)
    user = request.user
    context = {
        "site": found,
        "survey": survey,
        "line": line,
        "run": run,
        "surveys": surveys_of(user, code),
        "lines": visible_rock_lines(user).filter(survey__site=found)[:3],
        "changes": changes_of(found),
        "wells": wells_of(user, found),
        "stage_words": STAGES[found.structure.stage],
        "unseen": unseen_strips(found.structure),
        "may_edit": may(user, Act.EDIT_SITE, found),
        "may_survey": may(user, Act.ACCEPT_SURVEY, found),
        "may_settle": may(user, Act.SETTLE_ROCK, found),
        "sees_money": may(user, Act.SEE_MONEY, found),
        "closing": CLOSING_SENTENCE,
    }
    context |= reading_context(run)
    if survey is not None and context["appraisal"] is None:
        context["alone"] = drawn_alone(pack_of(survey))
    return render(request, "structures/site.html", context)


@require_http_methods(READ_METHODS)
def edit(request, code):
    found = get_object_or_404(visible_sites(request.user), code=code)
    form = SiteForm(request.POST or None, site=found)
    if request.method == "POST" and form.is_valid():
        said = form.cleaned_data
        try:
            site_actions.edit_site(
                site_id=found.pk,
                seen_revision=said["revision"],
                changes=said["changes"],
                by=request.user,
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("%(code)s is changed.") % {"code": code})
            return redirect("structures:site", code)
    context = {"site": found, "form": form}
    return render(request, "structures/site_edit.html", context, status=_status(form))


@require_http_methods(READ_METHODS)
def rock(request, code):
    """Settle the rock line: as the tests give it, or with moved points; always with the reason."""
    found, newest, run = _read_survey(request, code)
    # What was sent is judged on the survey that its page showed; the action tells of a newer one.
    survey = _seen_survey(request, newest)
    run = run if survey == newest else reading_of(survey)
    estimated = ((run and run.result) or {}).get("estimated") or []
    settled = newest_rock_line(survey)
    tests = names_of_tests(pack_of(survey))
    points = [*_points(run, settled, estimated, survey), *[(None, None)] * SPARE_POINTS]
    seen = (survey.version, settled.version if settled else 0)
    form = RockForm(request.POST or None, tests=tests, points=points, seen=seen)
    if request.method == "POST" and form.is_valid():
        as_estimated = request.POST.get("line") == "estimated"
        try:
            line = rock_actions.settle_rock_line(
                survey_id=survey.pk,
                points=estimated if as_estimated else form.cleaned_data["points"],
                reason=form.cleaned_data["reason"],
                rests_on=form.cleaned_data["rests_on"],
                by=request.user,
                seen_version=form.cleaned_data["seen_line"],
            )
        except Refused as refused:
            refuse(form, _named(refused, {"rests on": "rests_on"}))
        else:
            words = _("Rock line %(version)d is settled; the sheet is read anew.")
            messages.success(request, words % {"version": line.version})
            return redirect("structures:site", code)
    context = {
        "site": found,
        "survey": survey,
        "line": settled,
        "run": run,
        "form": form,
        "estimated": estimated,
        "may_settle": may(request.user, Act.SETTLE_ROCK, found),
        **reading_context(run),
    }
    return render(request, "structures/rock.html", context, status=_status(form))


def _seen_survey(request, newest):
    version = request.POST.get("seen_survey", "")
    if version == str(newest.version) or not re.fullmatch("[0-9]{1,6}", version):
        return newest
    return get_object_or_404(surveys_of(request.user, newest.site.code), version=version)


def _points(run, settled, estimated, survey):
    """Points to begin with: the line settled last or handed in, else the estimate at its tests."""
    given = survey.pack.get("rock_line") if settled is None else settled.points
    if given:
        return [(one["offset_m"], one["level_m"]) for one in given]
    if not estimated:
        return []
    at_tests = {one["offset_m"] for one in run.result["appraisal"]["rock"]["evidence"]}
    ends = {estimated[0]["offset_m"], estimated[-1]["offset_m"]}
    return [
        (round(one["offset_m"], 2), round(one["level_m"], 2))
        for one in estimated
        if one["offset_m"] in at_tests | ends
    ]


@require_safe
def try_other_wall(request, code):
    """Another wall on the line that was read: old and new figures side by side, nothing kept."""
    found, survey, run = _read_survey(request, code)
    context = {"site": found, "survey": survey, "run": run, **reading_context(run)}
    if context["appraisal"] is None or context["appraisal"]["wall"] is None:
        return render(request, "structures/try.html", context)
    params = reading_params(survey)
    form = TryForm(request.GET, wall=params["wall"])
    changed = {}
    if form.is_bound and form.is_valid():
        changed = form.chosen()
        try:
            points = context["appraisal"]["rock"]["line"] if params["rock_line"] else None
            pack = pack_of(survey, points=points, wall={**params["wall"], **changed})
            context["trial"] = try_wall(
                pack,
                run.result["appraisal"]["rock"],
                run.result["tests"],
                practice=practice_of(params["practice"]),
            )
        except Refused as refused:
            refuse(form, _named(refused, {f"wall.{key}": key for key in form.fields}))
    trial = context.get("trial")
    tried = trial and {"wall": trial.wall, "quantities": trial.quantities}
    context |= {
        "form": form,
        "changed": changed,
        "rows": figure_rows(context["appraisal"], tried),
        "closing": CLOSING_SENTENCE,
    }
    # A swapped part has to arrive even when it says what is wrong with a setting.
    status = 200 if request.headers.get("HX-Request") else _status(form)
    return render(request, "structures/try.html", context, status=status)


def _read_survey(request, code):
    found = get_object_or_404(visible_sites(request.user), code=code)
    survey = newest_survey(found)
    if survey is None:
        raise Http404(_("This site has no survey."))
    return found, survey, reading_of(survey)


def _named(refused, names):
    """Give a refusal whose findings name the fields of a form."""
    if not refused.findings:
        where = names.get(refused.where, refused.where)
        return Refused(refused.what, where=where, remedy=refused.remedy)
    findings = tuple(
        replace(one, field=names.get(one.field, names.get(one.where, one.field)))
        for one in refused.findings
    )
    return Refused(refused.what, where=refused.where, remedy=refused.remedy, findings=findings)


def _districts(request):
    return visible_districts(request.user)


def _status(form):
    return STATUS if form.is_bound and form.errors else 200
