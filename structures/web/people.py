"""People whom an administrator keeps: who they are, where they serve, how they come in."""

from __future__ import annotations

from functools import wraps

from django.contrib import messages
from django.http import Http404
from django.shortcuts import redirect, render
from django.utils.translation import gettext as _
from django.views.decorators.cache import never_cache
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from structures.actions import people as acts
from structures.actions.enrolment import enrol
from structures.actions.second_factor import ask_reset
from structures.errors import Refused
from structures.queries.frame import frame_of
from structures.queries.people_review import people_to_review, person_to_review
from structures.queries.second_factor import factor_of, open_reset_of
from structures.queries.upkeep import last_restore_trial
from structures.web.lists import sheet_of
from structures.web.people_forms import AccountForm, NewPersonForm, PostingForm
from structures.web.refusals import STATUS, refuse

ACCOUNT = ("licence_number", "email", "account_ends_on")


def keepers_only(view):
    """For anybody else there is no such page."""

    @wraps(view)
    def kept(request, *args, **kwargs):
        if not frame_of(request.user).keeps_people:
            raise Http404
        return view(request, *args, **kwargs)

    return kept


@require_GET
@keepers_only
def people(request):
    text = request.GET.get("q", "")
    lines = people_to_review(request.user, text)
    context = {
        "page": sheet_of(request, lines),
        "doubtful": sum(bool(line.doubts) for line in lines),
        "trial": last_restore_trial(),
        "text": text,
    }
    return render(request, "structures/people.html", context)


@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
@keepers_only
def new_person(request):
    form = NewPersonForm(request.POST or None, by=request.user)
    if request.method == "POST" and form.is_valid():
        try:
            user, word = enrol(login=form.cleaned_data["login"], by=request.user, **form.said)
        except Refused as refused:
            refuse(form, refused)
        else:
            return _tell_word(request, user, word)
    return _answer(request, "structures/new_person.html", {"form": form}, form)


@require_http_methods(["GET", "HEAD", "POST"])
@keepers_only
def person(request, user_id):
    line = _line(request, user_id)
    account = {key: getattr(line.person, key) for key in ACCOUNT}
    form = AccountForm(request.POST or None, initial=account)
    if request.method == "POST" and form.is_valid():
        try:
            acts.edit_person(user_id=user_id, by=request.user, **form.cleaned_data)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("Kept."))
            return redirect("structures:person", user_id)
    context = {
        "form": form,
        "line": line,
        "factor": factor_of(line.person),
        "reset": open_reset_of(line.person),
    }
    return _answer(request, "structures/person.html", context, form)


@require_http_methods(["GET", "HEAD", "POST"])
@keepers_only
def posting(request, user_id, posting_id=None):
    line = _line(request, user_id)
    kept = next((one for one in line.postings if one.pk == posting_id), None)
    if posting_id is not None and kept is None:
        raise Http404
    form = PostingForm(request.POST or None, by=request.user, initial=_said(kept))
    if request.method == "POST" and form.is_valid():
        try:
            acts.set_posting(user_id=user_id, posting_id=posting_id, by=request.user, **form.said)
        except Refused as refused:
            refuse(form, refused)
        else:
            messages.success(request, _("Kept."))
            return redirect("structures:person", user_id)
    context = {"form": form, "line": line, "posting": kept}
    return _answer(request, "structures/posting.html", context, form)


@never_cache
@require_POST
@keepers_only
def another_word(request, user_id):
    line = _line(request, user_id)
    word = acts.renew_word(user_id=user_id, by=request.user)
    return _tell_word(request, line.person, word)


@require_POST
@keepers_only
def end_sessions(request, user_id):
    _line(request, user_id)
    acts.end_sessions(user_id=user_id, by=request.user)
    messages.success(request, _("Every session of this account has ended."))
    return redirect("structures:person", user_id)


@require_POST
@keepers_only
def ask_factor_reset(request, user_id):
    _line(request, user_id)
    ask_reset(user_id=user_id, reason=request.POST.get("reason", ""), by=request.user)
    messages.success(request, _("Asked. An approver of the district must agree to it."))
    return redirect("structures:person", user_id)


def _line(request, user_id):
    line = person_to_review(request.user, user_id)
    if line is None:
        raise Http404
    return line


def _said(kept):
    if kept is None:
        return {}
    return {
        "role": kept.role,
        "district": kept.district,
        "watersheds": kept.watersheds.all(),
        "valid_from": kept.valid_from,
        "valid_to": kept.valid_to,
    }


def _tell_word(request, user, word):
    """Show the word in the answer itself: it is kept nowhere, so it cannot be read again."""
    context = {"person": user, "word": word, "hours": acts.WORD_HOURS}
    return render(request, "structures/one_time_word.html", context)


def _answer(request, template, context, form):
    wrong = form.is_bound and form.errors
    return render(request, template, context, status=STATUS if wrong else 200)
