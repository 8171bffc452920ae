"""Bills of a structure: what is held and why, what is payable and how that comes about."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from costing.actions.bill_decisions import decide_bill, decide_held_line, mark_paid
from costing.actions.bills import BillGiven, drop_draft, hand_in_bill, send_bill_back, write_bill
from costing.price.bill_file import read_bill
from costing.queries.bills import (
    Said,
    draft_of,
    is_released,
    judged_now,
    lines_of,
    released_lines,
    steps_in,
    visible_bills,
    visible_lines,
)
from costing.queries.contracts import contract_in_force, index_of
from costing.web.bill_forms import BillForm, IndexNowForm, LineForm, PaidForm, WhyForm
from costing.web.seen import priced_structure, signed_in_at
from structures.access import Act, may
from structures.errors import Refused
from structures.queries.districts import today_of
from structures.web.refusals import STATUS, refuse
from structures.web.sessions import second_factor_given

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

ACTS: Final = ("hand-in", "decide", "send-back", "pay", "drop")


@require_safe
def bills(request: HttpRequest, code: str) -> HttpResponse:
    structure = priced_structure(request.user, code)
    context = {
        "site": structure.site,
        "bills": visible_bills(request.user).filter(structure=structure),
        "contract": contract_in_force(structure),
        "draft": draft_of(structure),
        "released": released_lines(structure),
        "may_write": may(request.user, Act.WRITE_BILL, structure),
        "may_sign": may(request.user, Act.SIGN_CONTRACT, structure),
    }
    return render(request, "costing/bills.html", context)


@require_http_methods(["GET", "HEAD", "POST"])
def new_bill(request: HttpRequest, code: str) -> HttpResponse:
    structure = priced_structure(request.user, code)
    if not may(request.user, Act.WRITE_BILL, structure):
        raise Http404
    initial = {"billed_on": today_of(structure.site.watershed.district)}
    data = (request.POST, request.FILES) if request.method == "POST" else (None, None)
    form = BillForm(*data, initial=initial)
    refused = None
    if request.method == "POST" and form.is_valid():
        try:
            bill = write_bill(
                structure_id=structure.pk, given=_given(form.cleaned_data), by=request.user
            )
        except Refused as error:
            refused = error
        else:
            return redirect("costing:bill", bill.pk)
    context = {
        "site": structure.site,
        "form": form,
        "draft": draft_of(structure),
        "contract": contract_in_force(structure),
        "refused": refused,
    }
    status = STATUS if refused or form.errors else 200
    return render(request, "costing/bill_new.html", context, status=status)


@require_safe
def bill(request: HttpRequest, pk: int) -> HttpResponse:
    return _sheet(request, get_object_or_404(visible_bills(request.user), pk=pk))


@require_POST
def bill_act(request: HttpRequest, pk: int, act: str) -> HttpResponse:
    """Do one thing with a bill; the sheet comes back with what stands against it."""
    found = get_object_or_404(visible_bills(request.user), pk=pk)
    if act not in ACTS:
        raise Http404
    forms = _forms(found, act, request.POST)
    if not all(form.is_valid() for form in forms.values()):
        return _sheet(request, found, forms=forms)
    try:
        told = _carry_out(request, found, act, forms)
    except Refused as refused:
        return _sheet(request, found, forms=forms, refused=refused)
    messages.success(request, told)
    if act == "drop":
        return redirect("costing:bills", found.structure.site.code)
    return redirect("costing:bill", pk)


@require_POST
def held_line(request: HttpRequest, line: int) -> HttpResponse:
    """Release a held line, or refuse it for good."""
    found = get_object_or_404(visible_lines(request.user), pk=line)
    form = WhyForm(request.POST)
    if form.is_valid():
        try:
            decide_held_line(
                line_id=line,
                state=request.POST.get("state", ""),
                why=form.cleaned_data["why"],
                by=request.user,
                signed_in_at=signed_in_at(request),
                factor_given_at=second_factor_given(request),
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            words = _("Line %(line)d is decided. A released line is paid with the next bill.")
            messages.success(request, words % {"line": found.order})
            return redirect("costing:bill", found.bill_id)
    bill = get_object_or_404(visible_bills(request.user), pk=found.bill_id)
    return _sheet(request, bill, line_forms={line: form})


def _given(said):
    lines, number = None, said["number"]
    if said["file"]:
        read = read_bill(said["file"].name, said["file"].read())
        lines, number = read.lines, number or read.number
    return BillGiven(number, said["kind"], said["billed_on"], lines, said["total"])


def _forms(bill, act="", data=None):
    """The forms of a bill, the one of an act bound to what was sent."""
    own = lambda name: data if act == name else None  # noqa: E731 -- which form was sent
    names = () if bill.contract is None else _index_names(bill.contract)
    rows = bill.lines.order_by("order").values_list("order", flat=True)
    if act == "decide":
        return {
            "indices": IndexNowForm(data, names=names, prefix="now"),
            **{f"line-{order}": LineForm(data, prefix=f"line-{order}") for order in rows},
        }
    if act in ("send-back", "pay"):
        kind = WhyForm if act == "send-back" else PaidForm
        return {act: kind(own(act), prefix=act)}
    if act:
        return {}
    return {
        "indices": IndexNowForm(None, names=names, prefix="now"),
        "send-back": WhyForm(None, prefix="send-back"),
        "pay": PaidForm(
            None,
            prefix="pay",
            initial={"paid_on": today_of(bill.structure.site.watershed.district)},
        ),
        **{f"line-{order}": LineForm(None, prefix=f"line-{order}") for order in rows},
    }


def _index_names(contract):
    index = index_of(contract.price_index)
    return () if index is None else tuple(part.words for part in index.parts)


def _carry_out(request, bill, act, forms):
    by, told = request.user, {"number": bill.number}
    if act == "hand-in":
        hand_in_bill(bill_id=bill.pk, by=by)
        return _("Bill %(number)s is handed in.") % told
    if act == "drop":
        drop_draft(bill_id=bill.pk, by=by)
        return _("The draft %(number)s is given up; its entries can be billed again.") % told
    if act == "send-back":
        send_bill_back(bill_id=bill.pk, why=forms[act].cleaned_data["why"], by=by)
        return _("Bill %(number)s is sent back, with your reason.") % told
    if act == "pay":
        mark_paid(
            bill_id=bill.pk, by=by, signed_in_at=signed_in_at(request), **forms[act].cleaned_data
        )
        return _("Bill %(number)s is noted as paid out.") % told
    said = {
        int(name.removeprefix("line-")): Said(**form.cleaned_data)
        for name, form in forms.items()
        if name.startswith("line-")
    }
    decide_bill(
        bill_id=bill.pk,
        said=said,
        by=by,
        signed_in_at=signed_in_at(request),
        factor_given_at=second_factor_given(request),
        indices=forms["indices"].values(),
    )
    return _("Bill %(number)s is decided.") % told


def _sheet(request, bill, *, forms=None, refused=None, line_forms=None):
    user, structure = request.user, bill.structure
    shown = {**_forms(bill), **(forms or {})}
    may_decide = may(user, Act.DECIDE_BILL, structure)
    going = bill.state != "decided"
    judged = judged_now(bill) if going else None
    now = {} if judged is None else {line.asked.line_no: line for line in judged.lines}
    lines = [
        {
            "row": row,
            "now": now.get(row.order),
            "state": now[row.order].status if row.order in now else row.state,
            "released": is_released(row),
            "form": shown[f"line-{row.order}"],
            "why_form": (line_forms or {}).get(row.pk) or WhyForm(prefix=None),
        }
        for row in lines_of(bill)
    ]
    order = {"held": 0, "refused": 1}
    lines.sort(key=lambda one: (order.get(one["state"], 2), one["row"].order))
    wrong = next((form for form in {**shown, **(line_forms or {})}.values() if form.errors), None)
    account = bill.account if isinstance(bill.account, dict) else {}
    context = {
        "site": structure.site,
        "bill": bill,
        "lines": lines,
        "held": [one for one in lines if one["state"] == "held"],
        "judged": judged,
        "steps": judged.payable.steps if judged else list(steps_in(bill.account)),
        "payable": judged.payable.amount if judged else bill.payable,
        "why_not_known": judged.payable.why if judged else "",
        "unsettled": account.get("unsettled", ()),
        "forms": {name.replace("-", "_"): form for name, form in shown.items()},
        "may_hand_in": bill.state == "draft" and may(user, Act.WRITE_BILL, structure),
        "may_decide": bill.state == "handed in" and may_decide and bill.made_by_id != user.pk,
        "may_release": bill.state == "decided" and may_decide,
        "may_pay": bill.state == "decided" and bill.paid_on is None and may_decide,
        "refused": refused,
        "wrong": wrong,
    }
    status = STATUS if refused or wrong else 200
    return render(request, "costing/bill.html", context, status=status)
