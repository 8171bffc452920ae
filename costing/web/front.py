"""The first page: a survey pack in, its appraisal out. Nothing of it needs an account."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.contrib.auth.decorators import login_not_required
from django.http import Http404, HttpResponse, JsonResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from costing.actions.appraisals import APPRAISAL, start_appraisal
from costing.web.forms import AppraisalForm
from costing.web.handing import answer_with_file
from costing.web.notices import first_lines_of
from structures.errors import Refused
from structures.intake.pack_schema import pack_schema as schema_of_packs
from structures.life.cautions import ALWAYS, CLOSING_SENTENCE, caution
from structures.queries.runs import runs_of_kind
from structures.runs.book import ask_cancel
from structures.runs.health import readiness

if TYPE_CHECKING:
    from uuid import UUID

    from django.core.files.uploadedfile import UploadedFile
    from django.http import HttpRequest


@login_not_required
@require_http_methods(["GET", "HEAD", "POST"])
def front(request: HttpRequest) -> HttpResponse:
    sent = request.method == "POST"
    form = AppraisalForm(request.POST, request.FILES) if sent else AppraisalForm()
    findings = ()
    if sent and form.is_valid():
        try:
            run = start_appraisal(
                pack=_content(form.cleaned_data["pack"]), rates=_content(form.cleaned_data["rates"])
            )
        except Refused as refused:
            findings = refused.findings
        else:
            return redirect("costing:appraisal", run.pk)
    context = {
        "form": form,
        "findings": findings,
        "parts": readiness(),
        "waiting": first_lines_of(request.user),
        "cautions": [caution(code) for code in ("geophysics", "downstream", "raw-water")],
        "closing": CLOSING_SENTENCE,
    }
    return render(request, "costing/front.html", context, status=422 if sent else 200)


def _content(file: UploadedFile | None) -> tuple[str, bytes] | None:
    return None if file is None else (file.name, file.read())


@login_not_required
@require_GET
def appraisal(request: HttpRequest, run_id: UUID) -> HttpResponse:
    run = get_object_or_404(runs_of_kind(APPRAISAL), pk=run_id)
    context = {"run": run, "closing": CLOSING_SENTENCE, "title": run.subject}
    if run.result:
        context |= run.result
        cautions = run.result["appraisal"]["cautions"]
        context["doubts"] = [one for one in cautions if one["code"] not in ALWAYS]
        context["always"] = [one for one in cautions if one["code"] in ALWAYS]
    return render(request, "costing/appraisal.html", context)


@login_not_required
@require_POST
def cancel(request: HttpRequest, run_id: UUID) -> HttpResponse:
    run = get_object_or_404(runs_of_kind(APPRAISAL), pk=run_id)
    ask_cancel(run.pk)
    return redirect("costing:appraisal", run.pk)


@login_not_required
@require_GET
def document(request: HttpRequest, run_id: UUID, name: str) -> HttpResponse:
    run = get_object_or_404(runs_of_kind(APPRAISAL), pk=run_id)
    digest = ((run.result or {}).get("documents") or {}).get(name)
    if digest is None:
        raise Http404(_("This appraisal has no such document."))
    return answer_with_file(name, digest)


@login_not_required
@require_GET
def pack_schema(request: HttpRequest) -> JsonResponse:
    return JsonResponse(schema_of_packs(), content_type="application/schema+json")
