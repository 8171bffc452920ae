"""A structure's contract: what was agreed, entered as signed, varied with a reason."""

from __future__ import annotations

import uuid
from typing import TYPE_CHECKING, Final

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from costing.actions.contracts import AgreedRate, Deal, enter_contract, vary_contract
from costing.queries.contracts import (
    contract_in_force,
    offered_rates,
    value_of,
    visible_contracts,
)
from costing.web.contract_forms import ContractForm, Deductions, Parts, Rates
from costing.web.seen import priced_structure
from structures.access import Act, may
from structures.actions.photos import keep_photo
from structures.errors import Refused
from structures.web.refusals import STATUS, refuse

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

PLAIN: Final = (
    *("number", "contractor", "currency", "signed_on", "starts_on", "ends_on", "safety_terms"),
    *("signatories", "retention_percent", "advance", "advance_recovery_percent"),
)


@require_safe
def contract(request: HttpRequest, code: str) -> HttpResponse:
    structure = priced_structure(request.user, code)
    versions = list(visible_contracts(request.user).filter(structure=structure))
    return _sheet(request, structure, versions[0] if versions else None, versions)


@require_safe
def contract_version(request: HttpRequest, pk: int) -> HttpResponse:
    found = get_object_or_404(visible_contracts(request.user), pk=pk)
    versions = list(visible_contracts(request.user).filter(structure=found.structure))
    return _sheet(request, found.structure, found, versions)


@require_http_methods(["GET", "HEAD", "POST"])
def new_contract(request: HttpRequest, code: str) -> HttpResponse:
    """Enter the contract, or another version of it."""
    structure = priced_structure(request.user, code)
    if not may(request.user, Act.SIGN_CONTRACT, structure):
        raise Http404
    before = contract_in_force(structure)
    data = (request.POST, request.FILES) if request.method == "POST" else (None, None)
    form = ContractForm(*data, varied=before is not None, initial=_initial(structure, before))
    rows = {
        "rates": Rates(data[0], prefix="rates", initial=_rates(structure)),
        "deductions": Deductions(data[0], prefix="deductions", initial=_deductions(before)),
        "parts": Parts(data[0], prefix="parts", initial=_parts(before)),
    }
    if (
        request.method == "POST"
        and form.is_valid()
        and all(one.is_valid() for one in rows.values())
    ):
        try:
            kept = _keep(request, structure, before, form.cleaned_data, rows)
        except Refused as refused:
            refuse(form, refused, fields={"price_index": "fixed"})
        else:
            words = _("Contract %(number)s, version %(version)d, is entered.")
            messages.success(request, words % {"number": kept.number, "version": kept.version})
            return redirect("costing:contract", code)
    wrong = form.errors or any(one.is_bound and not one.is_valid() for one in rows.values())
    context = {
        "site": structure.site,
        "form": form,
        "before": before,
        **rows,
        "offered": zip(offered_rates(structure), rows["rates"], strict=False),
    }
    status = STATUS if request.method == "POST" and wrong else 200
    return render(request, "costing/contract_new.html", context, status=status)


def _sheet(request, structure, found, versions):
    context = {
        "site": structure.site,
        "structure": structure,
        "contract": found,
        "versions": versions,
        "value": found and value_of(found),
        "may_sign": may(request.user, Act.SIGN_CONTRACT, structure),
        "may_bill": may(request.user, Act.WRITE_BILL, structure),
    }
    return render(request, "costing/contract.html", context)


def _keep(request, structure, before, said, rows):
    photos = {
        key: _photo(request, structure, said.get(key), key)
        for key in ("authority_paper", "signed_sheet")
    }
    if before is not None:  # a scan that is not sent again stays the one that was signed
        for key, kept in photos.items():
            photos[key] = kept or getattr(before, f"{key}_id")
    deal = Deal(
        **{key: said[key] for key in PLAIN},
        rates=tuple(
            AgreedRate(one["item"], one["unit"], one["rate"], one["from_m"], one["quantity"])
            for one in rows["rates"].cleaned_data
            if one and one["rate"] is not None
        ),
        deductions=tuple(
            _stated(one) for one in rows["deductions"].cleaned_data if one and one.get("what")
        ),
        price_index=_index(said["fixed"], rows["parts"].cleaned_data),
        **photos,
    )
    if before is None:
        return enter_contract(structure_id=structure.pk, deal=deal, by=request.user)
    return vary_contract(contract_id=before.pk, deal=deal, why=said["why"], by=request.user)


def _photo(request, structure, file, what):
    if not file:
        return None
    kept = keep_photo(
        site_id=structure.site_id,
        photo_id=uuid.uuid4(),
        data=file.read(),
        by=request.user,
        what=what.replace("_", " "),
    )
    return kept.pk


def _stated(row):
    return {"what": row["what"].strip()} | {
        key: f"{row[key]:f}" for key in ("percent", "amount") if row[key] is not None
    }


def _index(fixed, parts):
    stated = [
        {key: row[key].strip() for key in ("what", "share", "base")}
        for row in parts
        if row and row.get("what")
    ]
    return {"fixed": fixed.strip() or "0", "parts": stated} if fixed.strip() or stated else None


def _initial(structure, before):
    if before is None:
        return {"currency": structure.site.watershed.district.currency}
    values = {key: getattr(before, key) for key in PLAIN}
    return values | {"fixed": (before.price_index or {}).get("fixed", "")}


def _rates(structure):
    return [
        {
            "item": one.item,
            "unit": one.unit,
            "from_m": one.from_m,
            "quantity": one.quantity,
            "rate": one.rate,
        }
        for one in offered_rates(structure)
    ]


def _deductions(before):
    return [] if before is None else before.deductions


def _parts(before):
    return [] if before is None or before.price_index is None else before.price_index["parts"]
