"""The verdict paper: all evidence on one page, the proposal of one person, the review of another."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django import forms
from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods

from structures.access import Act, may
from structures.actions.verdicts import propose_verdict, review_verdict
from structures.errors import Refused
from structures.life.verdict import VERDICTS
from structures.queries.structures import visible_structures
from structures.queries.verdicts import (
    STANDING,
    evidence_of,
    open_proposal,
    standing_verdict,
    visible_verdicts,
    year_words,
)
from structures.web.refusals import STATUS, refuse

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

METHODS: Final = ["GET", "HEAD", "POST"]
WORDS: Final = {
    "not known": gettext_lazy("not known"),
    "does not hold": gettext_lazy("does not hold"),
    "holds in part": gettext_lazy("holds in part"),
    "holds": gettext_lazy("holds"),
}
LONGEST: Final = 2000


class ProposalForm(forms.Form):
    """What an engineer proposes; "not known" is chosen until something else is."""

    word = forms.ChoiceField(
        label=gettext_lazy("What does the wall do?"),
        choices=[(word, WORDS[word]) for word in VERDICTS],
        initial=VERDICTS[0],
        widget=forms.RadioSelect,
    )
    why = forms.CharField(
        label=gettext_lazy("Why below what the evidence bears"),
        required=False,
        max_length=LONGEST,
        widget=forms.Textarea(attrs={"rows": 2}),
        help_text=gettext_lazy("Only where you go below it."),
    )
    rain_allowed_for = forms.CharField(
        label=gettext_lazy("How unlike rain was allowed for"),
        required=False,
        max_length=LONGEST,
        widget=forms.Textarea(attrs={"rows": 2}),
    )
    remarks = forms.CharField(
        label=gettext_lazy("What else is not known"),
        required=False,
        max_length=LONGEST,
        widget=forms.Textarea(attrs={"rows": 3}),
    )


class ReviewForm(forms.Form):
    agrees = forms.ChoiceField(
        label=gettext_lazy("Does it stand?"),
        choices=[
            ("yes", gettext_lazy("it stands as proposed")),
            ("no", gettext_lazy("it goes back, with the reason")),
        ],
        widget=forms.RadioSelect,
    )
    why = forms.CharField(
        label=gettext_lazy("Reason"),
        required=False,
        max_length=LONGEST,
        widget=forms.Textarea(attrs={"rows": 2}),
    )


@require_http_methods(METHODS)
def verdict(request: HttpRequest, code: str) -> HttpResponse:
    structure = get_object_or_404(visible_structures(request.user), site__code=code)
    act = request.POST.get("act", "")
    form = ProposalForm(request.POST if act == "propose" else None)
    review = ReviewForm(request.POST if act == "review" else None, prefix="review")
    waiting = open_proposal(structure)
    if request.method == "POST":
        told = _carry_out(request, structure, waiting, form, review)
        if told:
            messages.success(request, told)
            return redirect("structures:verdict", code)
    found = evidence_of(structure)
    stands = structure.stage in STANDING
    newest = standing_verdict(structure)
    own = waiting is not None and waiting.proposed_by_id == request.user.pk
    context = {
        "site": structure.site,
        "structure": structure,
        "stands": stands,
        "found": found,
        "year": year_words(found.water_year),
        "newest": newest,
        "newest_year": "" if newest is None else year_words(newest.water_year),
        "renew": stands and (newest is None or newest.water_year < found.water_year),
        "word": _word(stands, newest),
        "waiting": waiting,
        "waiting_year": "" if waiting is None else year_words(waiting.water_year),
        "own": own,
        "rows": [(year_words(one.water_year), one) for one in _history(request, structure)],
        "form": form,
        "review": review,
        "may_propose": stands
        and waiting is None
        and may(request.user, Act.PROPOSE_VERDICT, structure),
        "may_review": waiting is not None
        and not own
        and may(request.user, Act.REVIEW_VERDICT, structure),
    }
    wrong = form.errors or review.errors
    return render(request, "structures/verdict.html", context, status=STATUS if wrong else 200)


def _carry_out(request, structure, waiting, form, review):
    """Do what was asked; gives what was done, or "" with the refusal at its form."""
    try:
        if form.is_bound and form.is_valid():
            propose_verdict(structure_id=structure.pk, by=request.user, **form.cleaned_data)
            return _("The verdict is proposed and waits to be reviewed by another person.")
        if review.is_bound and review.is_valid() and waiting is not None:
            agrees = review.cleaned_data["agrees"] == "yes"
            why = review.cleaned_data["why"]
            review_verdict(verdict_id=waiting.pk, by=request.user, agrees=agrees, why=why)
            return _("The verdict stands.") if agrees else _("The proposal is sent back.")
    except Refused as refused:
        refuse(form if form.is_bound else review, refused)
    return ""


def _history(request, structure):
    return visible_verdicts(request.user).filter(structure=structure)


def _word(stands, newest):
    if not stands:
        return _("no wall stands yet")
    return WORDS["not known"] if newest is None else WORDS[newest.word]
