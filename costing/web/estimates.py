"""Estimates of a site: start one, read a frozen one, lay two side by side."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from costing.actions.estimate import FROZEN, PRICE, request_estimate
from costing.queries.changes import line_changes, sum_changes
from costing.queries.estimates import (
    estimate_of_run,
    estimates_of,
    stale_reasons,
    visible_estimates,
)
from costing.web.handing import answer_with_file
from structures.access import Act, may
from structures.errors import Refused
from structures.life.cautions import ALWAYS, CLOSING_SENTENCE
from structures.queries.register import entry_naming
from structures.queries.runs import runs_of_site
from structures.queries.sites import visible_sites
from structures.web.lists import sheet_of
from structures.web.refusals import STATUS

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse


@require_http_methods(["GET", "HEAD", "POST"])
def estimates(request: HttpRequest, code: str) -> HttpResponse:
    site = get_object_or_404(visible_sites(request.user), code=code)
    if not may(request.user, Act.SEE_MONEY, site):
        raise Http404
    refused = None
    if request.method == "POST":
        try:
            run = request_estimate(site_id=site.pk, by=request.user)
        except Refused as error:
            refused = error
        else:
            return _where_it_stands(request, run.pk, code)
    context = {
        "site": site,
        "page": sheet_of(request, estimates_of(request.user, code)),
        "runs": runs_of_site(request.user, code).filter(kind=PRICE)[:5],
        "may_ask": may(request.user, Act.REQUEST_ESTIMATE, site),
        "refused": refused,
    }
    return render(request, "costing/estimates.html", context, status=STATUS if refused else 200)


def _where_it_stands(request, run_id, code):
    """Lead to the estimate if these inputs were priced before, else to the run."""
    found = estimate_of_run(request.user, run_id)
    if found is not None:
        return redirect("costing:estimate", found.pk)
    return redirect("structures:run", run_id)


@require_safe
def estimate(request: HttpRequest, pk: int) -> HttpResponse:
    found = _whole(request, pk)
    others = estimates_of(request.user, found.site.code).exclude(pk=found.pk)
    cautions = found.result["cautions"]
    context = {
        "estimate": found,
        "site": found.site,
        "appraisal": found.result,
        "figures": found.run.result["figures"],
        "documents": sorted(found.run.result["documents"]),
        "stale": stale_reasons(found),
        "others": others[:12],
        "doubts": [one for one in cautions if one["code"] not in ALWAYS],
        "always": [one for one in cautions if one["code"] in ALWAYS],
        "closing": CLOSING_SENTENCE,
        "may_ask": may(request.user, Act.REQUEST_ESTIMATE, found.site),
        "entry": entry_naming(request.user, FROZEN, "estimate", found.input_digest),
    }
    return render(request, "costing/estimate.html", context)


@require_safe
def estimate_against(request: HttpRequest, pk: int, other: int) -> HttpResponse:
    new = _whole(request, pk)
    old = get_object_or_404(estimates_of(request.user, new.site.code), pk=other)
    context = {
        "new": new,
        "old": old,
        "site": new.site,
        "lines": line_changes(old, new),
        "sums": sum_changes(old, new),
        "one_currency": old.currency == new.currency,
    }
    return render(request, "costing/estimate_against.html", context)


@require_safe
def estimate_document(request: HttpRequest, pk: int, name: str) -> HttpResponse:
    digest = _whole(request, pk).run.result["documents"].get(name)
    if digest is None:
        raise Http404(_("This estimate has no such document."))
    return answer_with_file(name, digest)


def _whole(request, pk):
    found = visible_estimates(request.user).defer(None).select_related("run")
    return get_object_or_404(found, pk=pk)
