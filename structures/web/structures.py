"""A structure on its way: where it stands, what it waits for, its papers, its questions."""

from __future__ import annotations

from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_POST, require_safe

from structures.access import Act, may, place_of, roles
from structures.actions import questions as question_actions
from structures.actions.stage import draw_wall
from structures.life.papers import PAPERS, WRITTEN_HERE
from structures.life.stages import ON_THE_LINE, STAGES
from structures.queries.evidence import papers_of
from structures.queries.photos import visible_photos
from structures.queries.questions import questions_of, visible_questions
from structures.queries.structures import moves_of, visible_structures
from structures.queries.works import unseen_strips

PHOTOS_SHOWN = 12


@require_safe
def structure(request, code):
    found = get_object_or_404(visible_structures(request.user), site__code=code)
    mine = roles(request.user, place_of(found))
    forms = [form for form in WRITTEN_HERE if not mine.isdisjoint(form.makers)]
    filed = papers_of(found)
    context = {
        "site": found.site,
        "unseen": unseen_strips(found),
        "structure": found,
        "stage_words": STAGES[found.stage],
        "line": line_of(found.stage),
        "design": found.designs.order_by("-version").first(),
        "papers": newest_first(filed),
        "forms": forms,
        "fillable": {form.kind for form in forms},
        "sees_money": may(request.user, Act.SEE_MONEY, found),
        "moves": moves_of(found),
        "photos": visible_photos(request.user).filter(site=found.site)[:PHOTOS_SHOWN],
        "may_draw": may(request.user, Act.DRAW, found),
        **question_context(request.user, found),
    }
    return render(request, "structures/structure.html", context)


def question_context(user, structure):
    """What the questions and answers of a page need."""
    return {
        "questions": questions_of(user, structure.site.code),
        "may_ask": may(user, Act.ASK, structure),
    }


def line_of(stage):
    """The stages of the line with where the structure stands on them."""
    passed = list(ON_THE_LINE)
    here = passed.index(stage) if stage in ON_THE_LINE else None
    return [
        {
            "name": name,
            "words": words,
            "here": name == stage,
            "passed": here is not None and at < here,
        }
        for at, (name, words) in enumerate(ON_THE_LINE.items())
    ]


def newest_first(papers):
    """The newest version of each paper with how many came before it."""
    seen = {}
    for paper in papers:
        seen.setdefault((paper.kind, paper.about), []).append(paper)
    return [
        {"title": PAPERS[kind].title, "newest": versions[0], "older": versions[1:]}
        for (kind, _about), versions in seen.items()
    ]


@require_POST
def draw(request, code):
    """Draw the wall on the newest survey and its settled line."""
    found = get_object_or_404(visible_structures(request.user), site__code=code)
    design = draw_wall(site_id=found.site_id, by=request.user)
    messages.success(request, _("Design %(version)d is drawn.") % {"version": design.version})
    return redirect("structures:structure", code)


@require_POST
def ask(request, code):
    found = get_object_or_404(visible_structures(request.user), site__code=code)
    question_actions.ask(
        structure_id=found.pk,
        about=request.POST.get("about", ""),
        text=request.POST.get("text", ""),
        by=request.user,
    )
    messages.success(request, _("Your question stands on the sheet."))
    return redirect("structures:structure", code)


@require_POST
def answer(request, question_id):
    asked = get_object_or_404(visible_questions(request.user), pk=question_id)
    question_actions.answer(
        question_id=asked.pk, text=request.POST.get("text", ""), by=request.user
    )
    messages.success(request, _("Your answer stands beside the question."))
    return redirect("structures:structure", asked.structure.site.code)
