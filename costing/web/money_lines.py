"""Money lines: what each gives, what is promised from it, and a new one."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods

from costing.actions.money_lines import LineTerms, change_money_line, enter_money_line
from costing.queries.money_lines import money_line_sheets, visible_money_lines
from costing.web.decision_forms import LineChangeForm, MoneyLineForm
from structures.access import Act, districts, may
from structures.errors import Refused
from structures.web.refusals import STATUS, refuse

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse


@require_http_methods(["GET", "HEAD", "POST"])
def money_lines(request: HttpRequest) -> HttpResponse:
    where = districts(request.user, Act.KEEP_MONEY_LINES).order_by("code")
    if not districts(request.user, Act.SEE_MONEY).exists():
        raise Http404
    form = MoneyLineForm(request.POST or None, districts=where)
    if request.method == "POST" and form.is_valid():
        said = dict(form.cleaned_data)
        district = said.pop("district")
        try:
            line = enter_money_line(
                district_id=district.pk, terms=LineTerms(**said), by=request.user
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("Line %(code)s is entered.") % {"code": line.code})
            return redirect("costing:money-lines")
    context = {"sheets": money_line_sheets(request.user), "form": form, "may_keep": where.exists()}
    return render(request, "costing/money_lines.html", context, status=_status(form))


@require_http_methods(["GET", "HEAD", "POST"])
def money_line(request: HttpRequest, pk: int) -> HttpResponse:
    line = get_object_or_404(visible_money_lines(request.user), pk=pk)
    initial = {"amount": line.amount, "valid_to": line.valid_to}
    form = LineChangeForm(request.POST or None, initial=initial)
    if request.method == "POST" and form.is_valid():
        try:
            change_money_line(line_id=line.pk, by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("Line %(code)s is changed.") % {"code": line.code})
            return redirect("costing:money-lines")
    sheet = next(one for one in money_line_sheets(request.user) if one.line.pk == line.pk)
    context = {
        "sheet": sheet,
        "line": line,
        "form": form,
        "may_keep": may(request.user, Act.KEEP_MONEY_LINES, line.district),
    }
    return render(request, "costing/money_line.html", context, status=_status(form))


def _status(form):
    return STATUS if form.is_bound and form.errors else 200
