"""A file of readings or rain: what it says row by row, what has to be answered, kept as one step."""

from __future__ import annotations

from typing import Final

from django import forms
from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods, require_POST

from structures.access import Act, may
from structures.actions.reading_files import keep_file, preview_file, take_back
from structures.errors import Refused
from structures.intake.sheet_columns import ROLES
from structures.queries.districts import visible_districts
from structures.queries.received import received_files
from structures.web.previews import FIELD, agreed, looked_at
from structures.web.refusals import STATUS
from structures.web.sent_files import SentFile

METHODS: Final = ["GET", "HEAD", "POST"]
ROWS_SHOWN: Final = 200  # of a file; the counts speak of all
ANSWER, COLUMN = "answer-", "column-"
FATES: Final = ("refused", "held", "already here", "kept")


class ReadingsFileForm(forms.Form):
    district = forms.ChoiceField(label=gettext_lazy("District"))
    file = SentFile(
        label=gettext_lazy("File of readings or rain"),
        missing=gettext_lazy("No file was chosen."),
        endings=".csv,.txt,.tsv,.xlsx,.zip",
        help_text=gettext_lazy("CSV, text with tabs, XLSX, or a zip of them; 20 MB at most."),
    )

    def __init__(self, *args, districts, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["district"].choices = [(one.code, one.name) for one in districts]


@require_http_methods(METHODS)
def readings_file(request):
    """Look at a file first; nothing is kept before somebody says yes to what is shown."""
    districts = [
        one for one in visible_districts(request.user) if may(request.user, Act.SEND_READINGS, one)
    ]
    if request.method == "POST" and FIELD in request.POST:
        return _again(request, districts)
    sent = request.method == "POST"
    form = ReadingsFileForm(*((request.POST, request.FILES) if sent else ()), districts=districts)
    context = {"form": form, "may_send": bool(districts)}
    if sent and form.is_valid():
        said = form.cleaned_data
        district = next(one for one in districts if one.code == said["district"])
        data = said["file"].read()
        handed = {"district_id": district.pk, "name": said["file"].name}
        _look(request, context, data, handed, {}, {})
    return _answer(request, context, wrong=sent and "read" not in context)


def _again(request, districts):
    """Look once more with what was answered, or keep what was looked at."""
    handed, data = agreed(request)
    answers, columns = (_named(request, prefix) for prefix in (ANSWER, COLUMN))
    context = {"form": ReadingsFileForm(districts=districts), "may_send": bool(districts)}
    if request.POST.get("do") == "keep":
        try:
            kept = keep_file(**handed, data=data, columns=columns, answers=answers, by=request.user)
        except Refused as refused:
            context["refused"] = refused
        else:
            words = _("%(kept)d rows are kept, %(held)d of them wait for a decision.")
            counts = {"kept": kept.rows_kept + kept.rows_held, "held": kept.rows_held}
            messages.success(request, words % counts)
            return redirect("structures:file", kept.pk)
    _look(request, context, data, handed, columns, answers)
    return _answer(request, context, wrong="refused" in context)


def _look(request, context, data, handed, columns, answers):
    try:
        read = preview_file(**handed, data=data, columns=columns, answers=answers, by=request.user)
    except Refused as refused:
        context["refused"] = refused
        return
    rows = read.answers or [
        {
            "where": one.where,
            "result": "refused" if one.blocked else "kept",
            "findings": one.findings,
        }
        for one in read.rain
        if one.findings
    ]
    order = {fate: place for place, fate in enumerate(FATES)}
    shown = sorted(rows, key=lambda one: order[_fate(one)])[:ROWS_SHOWN]
    context |= {
        "read": read,
        "name": handed["name"],
        "looked_at": looked_at(request, data, **handed),
        "rows": shown,
        "more": max(0, len(rows) - len(shown)),
        "counts": [(fate, read.counts[fate]) for fate in FATES if read.counts[fate]],
        "answers": answers,
        "columns": columns,
        "headings": _headings(read),
        "roles": [
            ("", _("leave out")),
            *((role, words) for role, (words, _names) in ROLES.items()),
        ],
        "blocked": any(one.level == "block" for one in read.findings),
    }


def _headings(read):
    """Every heading of the tables once, with what it is taken for and a first value."""
    seen = {}
    for sheet in read.sheet.sheets if read.sheet else ():
        columns = sheet.columns
        line = sheet.grid.lines[columns.first] if columns.first < len(sheet.grid.lines) else None
        for place, name in enumerate(columns.headings):
            wide = place in columns.months or (len(columns.wells) > 1 and place in columns.wells)
            if name and not wide and name.lower() not in seen:
                example = "" if line is None else str(line.cell(place))[:40]
                seen[name.lower()] = (name, columns.roles[place], example)
    return list(seen.values())


def _fate(one):
    return one["result"] if isinstance(one, dict) else one.result


def _named(request, prefix):
    return {
        key.removeprefix(prefix): value
        for key, value in request.POST.items()
        if key.startswith(prefix) and (value or prefix == COLUMN)
    }


def _answer(request, context, *, wrong):
    return render(
        request, "structures/wells/readings_file.html", context, status=STATUS if wrong else 200
    )


@require_POST
def back(request, file_id):
    """Take a file back as one step."""
    found = get_object_or_404(received_files(request.user), pk=file_id)
    take_back(upload_id=found.pk, by=request.user)
    words = _("%(name)s is taken back: what it added is there no more.")
    messages.success(request, words % {"name": found.name})
    return redirect("structures:file", file_id)
