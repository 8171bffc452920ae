"""The sheet that a village takes over, to be printed: in plain words, in a language of the place."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.shortcuts import get_object_or_404, render
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_safe

from structures.access import place_of, roles
from structures.life.papers import PAPERS
from structures.life.stages import STAGES
from structures.queries.handover import handover_of
from structures.queries.structures import visible_structures
from structures.queries.verdicts import STANDING

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

# Languages for which the sheet has words and the pages have letters; pages themselves are English.
LANGUAGES: Final = (("en", "English"), ("hi", "हिन्दी"))
# What the sheet takes from records is translated with the sheet.
WORDS: Final = {
    "not known": gettext_lazy("not known"),
    "does not hold": gettext_lazy("does not hold water back"),
    "holds in part": gettext_lazy("holds water back in part"),
    "holds": gettext_lazy("holds water back"),
}
ROLES: Final = {
    "upstream": gettext_lazy("upstream of the wall"),
    "downstream": gettext_lazy("downstream of the wall"),
    "control": gettext_lazy("control well, far from the wall"),
    "other": gettext_lazy("other"),
}


@require_safe
def handover(request: HttpRequest, code: str) -> HttpResponse:
    structure = get_object_or_404(visible_structures(request.user), site__code=code)
    asked = request.GET.get("language", "")
    language = asked if asked in dict(LANGUAGES) else LANGUAGES[0][0]
    sheet = handover_of(structure)
    mine = roles(request.user, place_of(structure))
    context = {
        "site": structure.site,
        "sheet": sheet,
        "spoken": language,
        "languages": LANGUAGES,
        "word": WORDS[sheet.word],
        "rows": [(one, ROLES[one.well.role]) for one in sheet.wells],
        "stands": structure.stage in STANDING,
        "stage_words": STAGES[structure.stage],
        "may_file": not mine.isdisjoint(PAPERS["handover"].makers),
        "empty_rows": range(4),
    }
    return render(request, "structures/handover.html", context)
