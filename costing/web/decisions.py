"""What must be decided: the list in the order of the season, and one sheet for each decision."""

from __future__ import annotations

import uuid
from typing import TYPE_CHECKING

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_POST, require_safe

from costing.actions import approval
from costing.actions.approval import Funding, Terms
from costing.queries.decision_sheet import decision_sheet, visible_sanctions
from costing.queries.decisions import waiting
from costing.web.decision_forms import ApprovalForm, ReasonForm, TermsForm
from costing.web.seen import priced_structure, signed_in_at
from structures.access import Act, may
from structures.actions.photos import keep_photo
from structures.errors import Refused
from structures.life.cautions import ALWAYS, CLOSING_SENTENCE
from structures.queries.delegation import delegations_held
from structures.queries.questions import questions_of
from structures.web.refusals import STATUS, refuse
from structures.web.sessions import second_factor_given

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

SANCTION, APPROVE = "sanction", "approve"


@require_safe
def decisions(request: HttpRequest) -> HttpResponse:
    lines = waiting(request.user)
    context = {
        "mine": [one for one in lines if one.mine],
        "others": [one for one in lines if not one.mine],
        "held": delegations_held(request.user),
    }
    return render(request, "costing/decisions.html", context)


@require_safe
def decision(request: HttpRequest, code: str) -> HttpResponse:
    return _sheet(request, priced_structure(request.user, code))


@require_POST
def decide(request: HttpRequest, code: str, act: str) -> HttpResponse:
    """Give one of the four answers; the sheet comes back with what stands against it."""
    acts = {"sanction": _sanction, "approve": _approve, "send-back": _send_back, "refuse": _refuse}
    if act not in acts:
        raise Http404
    structure = priced_structure(request.user, code)
    sheet = decision_sheet(request.user, structure)
    form = _form(request, act, sheet, request.POST)
    if form.is_valid():
        try:
            told = acts[act](request, sheet, form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, told)
            return redirect("structures:structure", code)
    return _sheet(request, structure, {act: form})


@require_safe
def sanction_order(request: HttpRequest, pk: int) -> HttpResponse:
    """A sanction or an approval on one page, to be printed."""
    given = get_object_or_404(visible_sanctions(request.user), pk=pk)
    context = {
        "given": given,
        "site": given.structure.site,
        "content": given.entry and given.entry.content,
    }
    return render(request, "costing/sanction_order.html", context)


def _sheet(request, structure, bound=None):
    sheet, bound = decision_sheet(request.user, structure), bound or {}
    cautions = [] if sheet.estimate is None else sheet.estimate.result["cautions"]
    forms = {act: bound.get(act) or _form(request, act, sheet, None) for act in sheet.acts}
    context = {
        "site": structure.site,
        "structure": structure,
        "sheet": sheet,
        "estimate": sheet.estimate,
        "appraisal": sheet.estimate and sheet.estimate.result,
        "figures": sheet.estimate and sheet.estimate.run.result["figures"],
        "doubts": [one for one in cautions if one["code"] not in ALWAYS],
        "always": [one for one in cautions if one["code"] in ALWAYS],
        "closing": CLOSING_SENTENCE,
        "forms": {act.replace("-", "_"): form for act, form in forms.items()},
        "wrong": next((form for form in bound.values() if form.errors), None),
        "questions": questions_of(request.user, structure.site.code),
        "may_ask": may(request.user, Act.ASK, structure),
    }
    return render(request, "costing/decision.html", context, status=STATUS if bound else 200)


def _form(request, act, sheet, data):
    if act == SANCTION:
        return TermsForm(data, revised=sheet.technical is not None and sheet.revises, prefix=act)
    if act == APPROVE:
        return ApprovalForm(
            data,
            request.FILES if data is not None else None,
            by=request.user,
            district=sheet.structure.site.watershed.district,
            revised=sheet.administrative is not None and sheet.revises,
            initial={"amount": sheet.technical and sheet.technical.amount},
            prefix=act,
        )
    stages = sheet.earlier if act == "send-back" else ()
    return ReasonForm(data, stages=stages, prefix=act)


def _terms(said):
    keys = ("number", "valid_to", "conditions", "why")
    return Terms(**{key: said[key] for key in keys if key in said})


def _sanction(request, sheet, said):
    if sheet.estimate is None:
        raise Refused(_("There is no estimate to sanction."), remedy=_("Have it priced first."))
    given = approval.sanction(
        structure_id=sheet.structure.pk,
        estimate_id=_seen(request, sheet.estimate.pk),
        terms=_terms(said),
        by=request.user,
        signed_in_at=signed_in_at(request),
        factor_given_at=second_factor_given(request),
    )
    return _("Technical sanction %(number)s is given.") % {"number": given.number}


def _approve(request, sheet, said):
    if sheet.technical is None:
        raise Refused(_("There is no technical sanction."), remedy=_("It comes first."))
    photo = keep_photo(
        site_id=sheet.structure.site_id,
        photo_id=uuid.uuid4(),
        data=said["photo"].read(),
        by=request.user,
        what=_("sheet signed by the funder"),
    )
    given = approval.approve(
        structure_id=sheet.structure.pk,
        sanction_id=_seen(request, sheet.technical.pk),
        funding=Funding(said["money_line"].pk, said["amount"], photo.pk),
        terms=_terms(said),
        by=request.user,
        signed_in_at=signed_in_at(request),
        factor_given_at=second_factor_given(request),
    )
    return _("Administrative approval %(number)s is given.") % {"number": given.number}


def _send_back(request, sheet, said):
    approval.send_back(
        structure_id=sheet.structure.pk,
        to=said["to"],
        reason=said["reason"],
        by=request.user,
        signed_in_at=signed_in_at(request),
    )
    return _("It is sent back, with your reason.")


def _refuse(request, sheet, said):
    if sheet.estimate is None:
        raise Refused(_("There is no estimate to refuse."), remedy=_("Send it back instead."))
    approval.refuse(
        structure_id=sheet.structure.pk,
        estimate_id=_seen(request, sheet.estimate.pk),
        reason=said["reason"],
        by=request.user,
        signed_in_at=signed_in_at(request),
        factor_given_at=second_factor_given(request),
    )
    return _("The estimate is refused, with your reason.")


def _seen(request, newest):
    """The record that the reader had before their eyes; the newest where the form does not say."""
    text = request.POST.get("seen", "")
    return int(text) if text.isdigit() else newest
