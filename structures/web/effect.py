"""What the wells say of a wall, and what people say of it: effect, rivals, complaints."""

from __future__ import annotations

from typing import Final

from django import forms
from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions.complaints import answer_complaint, take_complaint
from structures.documents.effect_result import SIGNED, effect_json
from structures.errors import Refused
from structures.life.verdict import judge
from structures.queries.complaints import complaints_of, look_into, visible_complaints
from structures.queries.districts import today_of
from structures.queries.sites import visible_sites
from structures.queries.wells_of_wall import wall_wells
from structures.web.refusals import STATUS, refuse

METHODS: Final = ["GET", "HEAD", "POST"]


class ComplaintForm(forms.Form):
    received_on = forms.DateField(
        label=gettext_lazy("When did it come?"),
        widget=forms.DateInput(format="%Y-%m-%d", attrs={"type": "date"}),
    )
    from_whom = forms.CharField(
        label=gettext_lazy("From what kind of person?"),
        max_length=120,
        help_text=gettext_lazy("Like farmer, or village committee. No names."),
    )
    well = forms.CharField(
        label=gettext_lazy("Which well, if one is named?"), required=False, max_length=40
    )
    text = forms.CharField(
        label=gettext_lazy("What do they say?"),
        widget=forms.Textarea(attrs={"rows": 5}),
        max_length=5000,
        help_text=gettext_lazy("In their words."),
    )


class AnswerForm(forms.Form):
    text = forms.CharField(
        label=gettext_lazy("Answer"),
        widget=forms.Textarea(attrs={"rows": 14}),
        max_length=10000,
        help_text=gettext_lazy("Drafted from the data. Read it, change it; it goes out as yours."),
    )
    closes = forms.BooleanField(label=gettext_lazy("This closes the complaint"), required=False)


class SinceForm(forms.Form):
    since = forms.DateField(
        label=gettext_lazy("Since when is it said to be so?"),
        widget=forms.DateInput(format="%Y-%m-%d", attrs={"type": "date"}),
    )


@require_safe
def effect(request, code):
    """The verdict's words first, then what they rest on, then what else could explain it."""
    site = get_object_or_404(visible_sites(request.user), code=code)
    found = wall_wells(site)
    context = {
        "site": site,
        "found": found,
        "today": today_of(site.watershed.district),
        "signed": SIGNED,
        "complaints": complaints_of(request.user, site),
        "may_hear": may(request.user, Act.HEAR_COMPLAINT, site),
        "verdicts": site.structure.verdicts.select_related("proposed_by", "reviewed_by")[:5],
    }
    if found.effect is not None:
        head = None if found.head is None else found.head.measured
        suggestion = judge(head, found.effect.measured, found.effect.limits)
        context["suggestion"] = suggestion
        context["whole"] = effect_json(found.effect, suggestion, found.completed)
        context["controls"] = [one for one in found.wells if one.role == "control"]
        context["affected"] = [
            one for one in found.wells if one.role == "upstream" and one.site_id == site.pk
        ]
        context["apart"] = [one for one in found.wells if one.role in ("downstream", "other")]
    return render(request, "structures/wells/effect.html", context)


@require_http_methods(METHODS)
def new_complaint(request, code):
    site = get_object_or_404(visible_sites(request.user), code=code)
    form = ComplaintForm(
        request.POST or None, initial={"received_on": today_of(site.watershed.district)}
    )
    if request.method == "POST" and form.is_valid():
        try:
            kept = take_complaint(site_id=site.pk, by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("%(code)s is written down.") % {"code": kept.code})
            return redirect("structures:complaint", kept.code)
    context = {
        "site": site,
        "form": form,
        "may_hear": may(request.user, Act.HEAR_COMPLAINT, site),
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/wells/complaint_new.html", context, status=status)


@require_http_methods(METHODS)
def complaint(request, code):
    """One complaint: what its well says since that day, and an answer drafted from it."""
    found = get_object_or_404(visible_complaints(request.user), code=code)
    asked = SinceForm(request.GET if "since" in request.GET else None)
    since = asked.cleaned_data["since"] if asked.is_bound and asked.is_valid() else None
    looked = look_into(found, since)
    form = AnswerForm(request.POST or None, initial={"text": looked.draft})
    if request.method == "POST" and form.is_valid():
        try:
            answer_complaint(
                complaint_id=found.pk, by=request.user, since=since, **form.cleaned_data
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("The answer is kept."))
            return redirect("structures:complaint", code)
    closed = any(one.closes for one in found.answers.all())
    context = {
        "complaint": found,
        "site": found.site,
        "looked": looked,
        "asked": asked if asked.is_bound else SinceForm(initial={"since": looked.since}),
        "form": form,
        "closed": closed,
        "may_hear": may(request.user, Act.HEAR_COMPLAINT, found.site) and not closed,
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/wells/complaint.html", context, status=status)
