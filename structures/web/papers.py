"""Papers: a short form for each kind, a filed paper to read and print, a blank sheet to be signed."""

from __future__ import annotations

from django.contrib import messages
from django.http import Http404
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_http_methods, require_safe

from structures.access import place_of, roles
from structures.actions.papers import file_paper
from structures.errors import Refused
from structures.life.paper_reader import from_form
from structures.life.papers import PAPERS
from structures.queries.photos import visible_photos
from structures.queries.register import entry_of_paper
from structures.queries.structures import visible_papers, visible_structures
from structures.web.paper_forms import boxes, told, typed_of
from structures.web.photos import keep_sent
from structures.web.refusals import STATUS

OWN_FIELDS = {"csrfmiddlewaretoken", "photo_id", "photo"}


@require_http_methods(["GET", "HEAD", "POST"])
def new_paper(request, code, kind):
    """Fill in a paper; the newest version of its kind stands in the boxes to begin with."""
    structure, form = _asked(request, code, kind)
    site, refused, photos = structure.site, None, []
    if request.method == "POST":
        typed = {key: value for key, value in request.POST.items() if key not in OWN_FIELDS}
        try:
            photos = keep_sent(request, site, form.title)
            paper = file_paper(
                structure_id=structure.pk,
                kind=kind,
                given=from_form(kind, typed),
                photos=photos,
                by=request.user,
            )
        except Refused as error:
            refused = error
        else:
            words = _("Filed: %(title)s, version %(version)d.")
            messages.success(request, words % {"title": form.title, "version": paper.version})
            return redirect("structures:structure", code)
    else:
        newest = structure.papers.filter(kind=kind).order_by("-at").first()
        typed = {} if newest is None else typed_of(newest.content)
    context = {
        "site": site,
        "structure": structure,
        "form": form,
        "boxes": boxes(form, typed, () if refused is None else refused.findings),
        "refused": refused,
        "photos": visible_photos(request.user).filter(pk__in=photos),
        "makes": not roles(request.user, place_of(structure)).isdisjoint(form.makers),
    }
    status = STATUS if refused else 200
    return render(request, "structures/paper_form.html", context, status=status)


@require_safe
def blank_sheet(request, code, kind):
    """The paper with empty lines, to be printed, filled in by hand and signed."""
    structure, form = _asked(request, code, kind)
    context = {"site": structure.site, "form": form, "empty_rows": range(4)}
    return render(request, "structures/paper_sheet.html", context)


@require_safe
def paper(request, paper_id):
    found = get_object_or_404(visible_papers(request.user), pk=paper_id)
    form = PAPERS[found.kind]
    others = visible_papers(request.user).filter(
        structure=found.structure, kind=found.kind, about=found.about
    )
    context = {
        "paper": found,
        "site": found.structure.site,
        "form": form,
        "lines": told(form, found.content),
        "others": others.exclude(pk=found.pk),
        "entry": entry_of_paper(request.user, found),
    }
    return render(request, "structures/paper.html", context)


def _asked(request, code, kind):
    structure = get_object_or_404(visible_structures(request.user), site__code=code)
    form = PAPERS.get(kind)
    if form is None or not form.fields:
        raise Http404(_("There is no form of this kind."))
    return structure, form
