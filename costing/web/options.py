"""What the wall will cost with the rock as found, and the paper that asks how it goes on."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django import forms
from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods

from costing.actions.option import Asked, decide_option, request_forecast, resume_strips
from costing.queries.forecasts import forecast_run, visible_forecasts, visible_papers
from costing.queries.standing import standing_of
from costing.web.seen import priced_structure, signed_in_at
from structures.access import Act, may
from structures.errors import Refused
from structures.web.measurement_forms import NumberField
from structures.web.refusals import STATUS
from structures.web.sessions import second_factor_given

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

WAYS = ("go on", "step", "shift", "close")
LEVEL_MOST_M = 10_000
REACH_MOST_M = 5_000


class AskedForm(forms.Form):
    """What the engineer gives so that more ways can be weighed."""

    shelf_m = NumberField(
        label=gettext_lazy("Level of a shelf (m above the bench mark)"),
        low=-LEVEL_MOST_M,
        high=LEVEL_MOST_M,
        help_text=gettext_lazy("For the way step: where the wall would end higher."),
    )
    reach_m = NumberField(
        label=gettext_lazy("Length along the flow over which the water drops (m)"),
        low=1,
        high=REACH_MOST_M,
        help_text=gettext_lazy("For the leak of the step."),
    )
    licensed_design = forms.CharField(
        label=gettext_lazy("Signed design of a licensed engineer for the new depth"),
        max_length=120,
        required=False,
        help_text=gettext_lazy("Its number and the licence; blank where there is none."),
    )
    other_survey = forms.ChoiceField(label=gettext_lazy("Survey of another line"), required=False)

    def __init__(self, *args, surveys, **options):
        super().__init__(*args, **options)
        none = [("", gettext_lazy("none"))]
        self.fields["other_survey"].choices = none + [(str(one), str(one)) for one in surveys]

    def asked(self):
        said = self.cleaned_data
        other = said["other_survey"]
        return Asked(
            said["shelf_m"],
            said["reach_m"],
            said["licensed_design"].strip(),
            int(other) if other else None,
        )


class DecisionForm(forms.Form):
    way = forms.ChoiceField(
        label=gettext_lazy("Way"),
        choices=[(one, one) for one in WAYS],
        widget=forms.RadioSelect,
    )
    why = forms.CharField(label=gettext_lazy("Reason"), widget=forms.Textarea(attrs={"rows": 3}))


@require_http_methods(["GET", "HEAD", "POST"])
def forecast(request: HttpRequest, code: str) -> HttpResponse:
    structure = priced_structure(request.user, code)
    may_ask, refused = may(request.user, Act.REQUEST_ESTIMATE, structure), None
    if request.method == "POST":
        try:
            request_forecast(structure_id=structure.pk, by=request.user)
        except Refused as error:
            refused = error
        else:
            messages.success(request, _("The forecast is being computed."))
            return redirect("costing:forecast", code)
    found = list(visible_forecasts(request.user).filter(structure=structure)[:20])
    context = {
        "site": structure.site,
        "structure": structure,
        "forecast": found[0] if found else None,
        "earlier": found[1:],
        "papers": visible_papers(request.user).filter(structure=structure),
        "run": forecast_run(structure),
        "may_ask": may_ask,
        "refused": refused,
    }
    return render(request, "costing/forecast.html", context, status=STATUS if refused else 200)


@require_http_methods(["GET", "HEAD", "POST"])
def option(request: HttpRequest, pk: int) -> HttpResponse:
    """The four ways side by side; the engineer has them weighed again, the office decides."""
    paper = get_object_or_404(visible_papers(request.user), pk=pk)
    structure, act = paper.structure, request.POST.get("act", "")
    drawn = structure.designs.filter(frozen=True).order_by("-version").values("survey")[:1]
    others = structure.site.surveys.exclude(pk__in=drawn).order_by("-version")
    surveys = others.values_list("version", flat=True)
    sent = request.POST if request.method == "POST" else None
    ask = AskedForm(
        sent if act == "weigh" else None, surveys=surveys, initial=(paper.ways or {}).get("asked")
    )
    decide = DecisionForm(sent if act == "decide" else None)
    refused = None
    if request.method == "POST":
        form = {"weigh": ask, "decide": decide}.get(act)
        if act == "resume" or (form is not None and form.is_valid()):
            try:
                messages.success(request, _carry_out(request, paper, act, form))
            except Refused as error:
                refused = error
            else:
                return redirect("costing:option", pk)
        elif form is None:
            raise Http404
    missing = standing_of(structure).facts["revisions_missing"]
    may_decide = may(request.user, Act.DECIDE_OPTIONS, structure)
    document = paper.ways or {}
    context = {
        "site": structure.site,
        "structure": structure,
        "paper": paper,
        "ways": document.get("ways", ()),
        "reasons": document.get("reasons", ()),
        "asked": document.get("asked", {}),
        "days_left": document.get("days_left"),
        "why_no_clock": document.get("why_no_clock", ""),
        "weighed_on": document.get("on", ""),
        "strips": paper.strips.order_by("number"),
        "going_on": paper.way in ("go on", "step"),
        "missing": missing,
        "waiting": [one for one in paper.strips.all() if one.halted],
        "run": forecast_run(structure),
        "ask": ask,
        "decide": decide,
        "may_weigh": not paper.way and may(request.user, Act.REQUEST_ESTIMATE, structure),
        "may_decide": not paper.way and may_decide and paper.opened_by_id != request.user.pk,
        "may_resume": may_decide,
        "refused": refused,
    }
    wrong = refused or ask.errors or decide.errors
    return render(request, "costing/option.html", context, status=STATUS if wrong else 200)


def _carry_out(request, paper, act, form):
    if act == "weigh":
        request_forecast(structure_id=paper.structure_id, by=request.user, asked=form.asked())
        return _("The ways are being weighed again.")
    if act == "resume":
        strips = resume_strips(paper_id=paper.pk, by=request.user)
        numbers = ", ".join(str(one.number) for one in strips)
        return _("Work goes on at strip %(strips)s.") % {"strips": numbers or _("none")}
    decide_option(
        paper_id=paper.pk,
        way=form.cleaned_data["way"],
        why=form.cleaned_data["why"],
        seen=request.POST.get("seen", ""),
        by=request.user,
        signed_in_at=signed_in_at(request),
        factor_given_at=second_factor_given(request),
    )
    return _("It is decided: %(way)s.") % {"way": form.cleaned_data["way"]}
