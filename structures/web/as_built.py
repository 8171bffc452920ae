"""The wall as built beside the wall as drawn: page, drawing and paper."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.http import Http404, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.utils.dateformat import format as written
from django.utils.translation import gettext as _
from django.utils.translation import ngettext
from django.views.decorators.http import require_safe

from structures.documents.as_built import AsBuiltWords, as_built_pdf, item_words, metres, unit_words
from structures.drawing.section import draw_section
from structures.drawing.standalone import standalone
from structures.life.cautions import CLOSING_SENTENCE
from structures.queries.as_built import as_built_of
from structures.queries.structures import visible_structures

if TYPE_CHECKING:
    from django.http import HttpRequest

    from structures.queries.as_built import AsBuiltSheet


@require_safe
def as_built(request: HttpRequest, code: str) -> HttpResponse:
    sheet = _sheet(request, code)
    context = {
        "sheet": sheet,
        "site": sheet.structure.site,
        "answer": _answer(sheet),
        "closing": CLOSING_SENTENCE,
    }
    if sheet.view is not None:
        context["wide"] = draw_section(sheet.view, name="as-built")
        context["narrow"] = draw_section(sheet.view, name="as-built", narrow=True)
    return render(request, "structures/as_built.html", context)


@require_safe
def as_built_file(request: HttpRequest, code: str, form: str) -> HttpResponse:
    """The same sheet as a file: the drawing alone, or all of it on paper."""
    sheet = _sheet(request, code)
    if sheet.view is None or form not in ("svg", "pdf"):
        raise Http404(_("There is no such sheet."))
    if form == "svg":
        data = standalone(draw_section(sheet.view, name="as-built")).encode()
        kind = "image/svg+xml"
    else:
        data = as_built_pdf(sheet.view, _words(sheet), made_on=sheet.today)
        kind = "application/pdf"
    answer = HttpResponse(data, content_type=kind)
    answer["Content-Disposition"] = f'attachment; filename="{code}-as-built.{form}"'
    return answer


def _sheet(request: HttpRequest, code: str) -> AsBuiltSheet:
    return as_built_of(get_object_or_404(visible_structures(request.user), site__code=code))


def _answer(sheet: AsBuiltSheet) -> str:
    """What differs, in one sentence: how far rock lay from the drawing."""
    known = [row for row in sheet.rows if row.difference_m is not None]
    if not known:
        return _("Nothing that was found can be held against the drawing.")
    deepest = min(known, key=lambda row: row.difference_m)
    highest = max(known, key=lambda row: row.difference_m)
    return _(
        "Lowest rock of %(count)d strips, found less drawn: from %(low)s m (strip %(deep)d) "
        "to %(high)s m (strip %(shallow)d)."
    ) % {
        "count": len(known),
        "low": f"{round(deepest.difference_m, 2) + 0.0:+.2f}",
        "deep": deepest.strip.number,
        "high": f"{round(highest.difference_m, 2) + 0.0:+.2f}",
        "shallow": highest.strip.number,
    }


def _words(sheet: AsBuiltSheet) -> AsBuiltWords:
    site = sheet.structure.site
    return AsBuiltWords(
        site=f"{site.code} {site.name}".strip(),
        stream="" if site.stream is None else site.stream.name,
        revision=_("no drawing kept") if sheet.design is None else f"design {sheet.design}",
        answer=_answer(sheet),
        unknown=tuple(_unknown(sheet)),
        strips=tuple(_strip_row(row) for row in sheet.rows),
        quantities=(
            *(
                (
                    _item(one),
                    unit_words(one.unit),
                    metres(one.drawn),
                    metres(one.drawn_there),
                    metres(one.built),
                    metres(one.difference),
                )
                for one in sheet.quantities
            ),
            *(
                (
                    item_words(one.item),
                    unit_words(one.unit),
                    metres(one.drawn),
                    "",
                    metres(one.built),
                    "",
                )
                for one in sheet.counted
            ),
        ),
        note=_(
            "Quantities along measured stretches only; what nobody measured is in none of them."
        ),
    )


def _unknown(sheet: AsBuiltSheet) -> list[str]:
    said = [
        _("Strip %(number)d was covered unseen, for ever: %(what)s.")
        % {"number": one.number, "what": one.unseen_what}
        for one in sheet.unseen
    ]
    said += [
        _("Not measured: strip %(number)d, %(start).2f to %(stop).2f m.")
        % {"number": one.strip, "start": one.from_m, "stop": one.to_m}
        for one in sheet.missed
    ]
    if sheet.uncovered:
        words = ngettext(
            "Strip %s is not covered.", "Strips %s are not covered.", len(sheet.uncovered)
        )
        said.append(words % ", ".join(str(one.number) for one in sheet.uncovered))
    if sheet.design is None:
        said.append(
            _("No drawing was frozen here: of it only the lowest rock of each strip is known.")
        )
    return said


def _strip_row(row) -> tuple[str, ...]:
    strip = row.strip
    covered = "" if strip.covered_on is None else written(strip.covered_on, "j M Y")
    told = [_("covered unseen: %s") % strip.unseen_what] if strip.covered_unseen else []
    if row.missed:
        told.append(_("not measured") if row.missed[0].whole else _("measured in part"))
    return (
        str(strip.number),
        metres(strip.from_m),
        metres(strip.to_m),
        metres(row.drawn_m),
        metres(row.found_m),
        metres(row.difference_m),
        covered,
        "; ".join(told),
    )


def _item(one) -> str:
    word = item_words(one.item)
    return word if one.to_m is None else f"{word} {one.from_m:g} to {one.to_m:g} m"
