"""The phone's pages: today's round, one record a form, the parcel box; and what keeps them offline."""

from __future__ import annotations

import json
from pathlib import Path
from typing import TYPE_CHECKING, Final
from uuid import UUID, uuid5

from django.contrib import messages
from django.contrib.staticfiles import finders
from django.http import Http404, HttpResponse, JsonResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.templatetags.static import static
from django.utils import timezone
from django.utils.translation import gettext as _
from django.views.decorators.cache import never_cache
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import Act, may
from structures.actions.alarms import set_alarm
from structures.actions.parcels import HELD, REFUSED, Times, take_record
from structures.errors import Refused
from structures.intake.field_records import HOLD, KINDS
from structures.intake.parcel import Sent
from structures.life.cautions import CLOSING_SENTENCE
from structures.life.holds import LAST, NINE
from structures.queries.sites import visible_sites
from structures.queries.trench_day import moment_in
from structures.queries.works import LAST_RECORDS, hold_requests, records_of, round_of, works_of
from structures.web.field_forms import ReasonForm, RecordForm
from structures.web.field_photos import PhotoForm
from structures.web.refusals import STATUS, refuse

if TYPE_CHECKING:
    from django.http import HttpRequest

    from structures.queries.works import Works

METHODS: Final = ["GET", "HEAD", "POST"]
# What a page of the phone needs besides itself, in the order in which scripts are run.
SCRIPTS: Final = tuple(
    f"underbund/field/{name}.js"
    for name in ("store", "shell", "photo", "send", "form", "well", "box")
)
SHEETS: Final = tuple(
    f"underbund/{name}.css" for name in ("tokens", "page", "forms", "drawing", "field/field")
)
_NAMES: Final = UUID("6b1b7f9e-3f0c-4c5a-9a54-0c1d5f2a7e31")  # of this program's editions
PICTURES: Final = (
    "underbund/icon.svg",
    "underbund/fonts/noto-sans-latin-wght-normal.woff2",
)


@require_safe
def today(request):
    """Today's round: every trench where this person makes records, down the stream."""
    works = round_of(request.user)
    context = {
        "works": works,
        "requests": hold_requests(request.user)[:20],
        "closing": CLOSING_SENTENCE,
        **_shell(),
    }
    return render(request, "structures/field/round.html", context)


@require_http_methods(METHODS)
def record(request, code, kind, number=None):
    """One record: a form here, taken by the same act as a record in a phone's parcel."""
    asked = KINDS.get(kind)
    found = works_of(request.user, code)
    if asked is None or found is None:
        raise Http404(_("There is no such form or site."))
    line = None if number is None else found.line(number)
    if (number is not None and line is None) or (asked.strip == "must" and line is None):
        raise Http404(_("There is no such strip."))
    site = found.structure.site
    hold = _hold_of(request, line) if kind == "hold-asked" else ""
    form = RecordForm(
        request.POST or None,
        request.FILES or None,
        kind=asked,
        hold=hold,
        initial=_begins_with(found, hold),
    )
    if request.method == "POST" and form.is_valid():
        told = _keep(request, found, number, form)
        if told is not None:
            messages.success(request, told)
            return redirect("structures:today")
    context = {
        "site": site,
        "kind": asked,
        "line": line,
        "form": form,
        "hold": NINE.get(hold.partition(".")[0]),
        "hold_code": hold,
        "last": _last(found, line, kind),
        "still": site.watershed.district.as_of is not None,
        "may_record": may(request.user, Act.RECORD_WORKS, site),
        "closing": CLOSING_SENTENCE,
        **_shell(),
    }
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/field/record.html", context, status=status)


@require_http_methods(METHODS)
def alarm(request, code):
    """Everybody out: rain, or a word from the watch upstream."""
    site = get_object_or_404(visible_sites(request.user), code=code)
    form = ReasonForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            set_alarm(structure_id=site.structure.pk, by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("The alarm of %(code)s is set.") % {"code": code})
            return redirect("structures:today")
    context = {"site": site, "form": form, "closing": CLOSING_SENTENCE, **_shell()}
    status = STATUS if form.is_bound and form.errors else 200
    return render(request, "structures/field/alarm.html", context, status=status)


@require_safe
def box(request):
    """The parcel box: what waits on this phone, and what the office has had of this person."""
    context = {"records": records_of(request.user)[:LAST_RECORDS], "kinds": KINDS, **_shell()}
    return render(request, "structures/field/box.html", context)


@never_cache
@require_safe
def worker(request):
    """The service worker, with the names of the files that this edition of the pages needs."""
    shell = [static(name) for name in (*SHEETS, *SCRIPTS, *PICTURES)]
    script = Path(finders.find("underbund/field/worker.js")).read_text(encoding="utf-8")
    edition = uuid5(_NAMES, "".join(shell) + script).hex[:12]
    head = f"const SHELL = {json.dumps(shell)}, EDITION = {json.dumps(edition)};\n"
    return HttpResponse(head + script, content_type="text/javascript; charset=utf-8")


@require_safe
def manifest(request):
    """What a phone's home screen is told."""
    return JsonResponse(
        {
            "name": "Underbund, today's round",
            "short_name": "Underbund",
            "start_url": "/today/",
            "scope": "/today/",
            "display": "standalone",
            "background_color": "#fcfbf8",
            "theme_color": "#fcfbf8",
            "icons": [
                {"src": static("underbund/icon.svg"), "sizes": "any", "type": "image/svg+xml"}
            ],
        },
        content_type="application/manifest+json",
    )


def _keep(request: HttpRequest, found: Works, number: int | None, form: RecordForm) -> str | None:
    """Take what was typed; gives the words of the answer, or None with the form told what is wrong."""
    site, name = found.structure.site, form.record_id
    now = timezone.now()
    try:
        photo = PhotoForm(request.POST, request.FILES).keep(
            site=site, photo_id=uuid5(name, "photo"), what=form.kind.title, by=request.user
        )
    except Refused as refused:
        refuse(form, refused)
        return None
    said = form.said()
    photos = {} if photo is None else {"photos": [str(photo.pk)]}
    sent = Sent(
        place=1,
        id=name,
        kind=form.kind.name,
        site=site.code,
        strip=number,
        photos=() if photo is None else (photo.pk,),
        made_at=now,
        content={"type": form.kind.name, "site": site.code, "strip": number, **photos, **said},
        values=said,
    )
    answer = take_record(sent=sent, by=request.user, times=Times(now, now))
    if answer.result == REFUSED:
        told = Refused(_("Nothing was kept."), findings=answer.findings)
        refuse(form, told)
        return None
    words = " ".join(f"{one.what} {one.remedy}".strip() for one in answer.findings)
    kept = _("Held for an engineer.") if answer.result == HELD else _("Kept.")
    return f"{form.kind.title}: {kept} {words}".strip()


def _hold_of(request: HttpRequest, line) -> str:
    """Give the hold point asked about: named in the address or the form, else the next one."""
    first = line.asks[0] if line.asks else LAST
    named = request.POST.get("hold") or request.GET.get("hold") or first
    return named if HOLD.fullmatch(named) else first


def _begins_with(found: Works, hold: str) -> dict[str, object]:
    now = moment_in(found.structure, timezone.now())
    return {"day": found.today.isoformat(), "looked_at": f"{now:%H:%M}", "hold": hold}


def _last(found: Works, line, kind: str):
    """Give what was written down last of this kind, shown as a check beside the form."""
    strip = None if line is None else line.strip
    if kind == "look":
        return found.structure.looks.filter(strip=strip).first()
    if kind == "day-sheet":
        return found.structure.day_sheets.first()
    if kind == "clay-test":
        return found.structure.clay_tests.filter(strip=strip).first()
    if kind == "found-level" and strip is not None:
        return strip.found.order_by("-at").first()
    return None


def _shell() -> dict[str, object]:
    return {"scripts": SCRIPTS}
