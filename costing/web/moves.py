"""One move of a structure: what will happen in a sentence, what stands against it, then the act."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods

from costing.actions.moves import move as make_move
from costing.queries.ways import DECIDED, judged
from structures.errors import Refused
from structures.life.move_table import find_move
from structures.life.papers import PAPERS
from structures.life.stages import STAGES
from structures.queries.structures import visible_structures
from structures.web.refusals import STATUS

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse


@require_http_methods(["GET", "HEAD", "POST"])
def move(request: HttpRequest, code: str, to: str) -> HttpResponse:
    found = get_object_or_404(visible_structures(request.user), site__code=code)
    way = find_move(found.stage, to)
    if to not in STAGES or way is None:
        words = _("No way leads from %(stage)s to %(to)s.")
        raise Http404(words % {"stage": found.stage, "to": to})
    if to in DECIDED and way.name == to:
        return redirect("costing:decision", code)
    reason, refused = request.POST.get("reason", ""), None
    if request.method == "POST":
        try:
            make_move(structure_id=found.pk, to=to, by=request.user, reason=reason)
        except Refused as error:
            refused = error
        else:
            words = _("%(code)s is %(to)s.")
            messages.success(request, words % {"code": code, "to": to})
            return redirect("structures:structure", code)
    asked = judged(request.user, found, to, reason or "." * 10)
    context = {
        "site": found.site,
        "structure": found,
        "to": to,
        "words": STAGES[to],
        "backwards": way.name in ("send back", "take back"),
        "asks_reason": way.reason,
        "reason": reason,
        "against": asked.against if refused is None else (),
        "refused": refused,
        "attached": [
            {"title": PAPERS[one.kind].title, "by": one.by, "at": one.at, "digest": one.digest}
            for one in asked.evidence
            if one.kind in way.papers
        ],
    }
    return render(request, "costing/move.html", context, status=STATUS if refused else 200)
