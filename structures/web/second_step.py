"""One-time codes: the second step of signing in, setting it up, and agreeing to take one away."""

from __future__ import annotations

import segno
from axes.handlers.proxy import AxesProxyHandler
from django import forms
from django.contrib import messages
from django.contrib.auth.decorators import login_not_required
from django.contrib.auth.signals import user_login_failed
from django.http import Http404, HttpResponse
from django.shortcuts import redirect, render
from django.utils import timezone
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.cache import never_cache
from django.views.decorators.debug import sensitive_post_parameters
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from structures.actions import second_factor as acts
from structures.errors import Refused
from structures.queries.second_factor import (
    begun_factor_of,
    codes_left,
    factor_of,
    needs_factor,
    resets_to_agree,
)
from structures.web.refusals import STATUS, refuse
from structures.web.sessions import (
    finish_second_step,
    note_given,
    second_factor_given,
    who_waits,
)

QR_DOT = 5  # pixels a dot: 45 dots and the margin stay below 280 px
QR_MARGIN = 4  # dots, as the standard of the picture asks


class CodeForm(forms.Form):
    """Six digits of the telephone, or a code of the printed list."""

    code = forms.CharField(
        label=gettext_lazy("One-time code"),
        max_length=40,
        help_text=gettext_lazy("Six digits, as 123 456, or a code of your printed list."),
        widget=forms.TextInput(
            attrs={
                "autocomplete": "one-time-code",
                "autocapitalize": "none",
                "spellcheck": "false",
            }
        ),
    )


@sensitive_post_parameters()
@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
@login_not_required
def second_step(request):
    found = who_waits(request)
    if found is None:
        messages.warning(request, _("Sign in with name and password first."))
        return redirect("structures:sign-in")
    user, to = found
    form = CodeForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        if not _may_try(request, user):
            return HttpResponse()  # the lock-out puts its own page in its place
        if acts.take_code(user_id=user.pk, code=form.cleaned_data["code"], now=timezone.now()):
            finish_second_step(request, user)
            return redirect(to)
        _count_wrong(request, user, form)
    context = {"form": form, "person": user}
    return _answer(request, "registration/second_step.html", context, form)


@sensitive_post_parameters()
@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
def one_time_codes(request):
    """Whether the account has a second factor; a code given again for today's decisions."""
    factor = factor_of(request.user)
    form = CodeForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        if not _may_try(request, request.user):
            return HttpResponse()  # the lock-out puts its own page in its place
        now, code = timezone.now(), form.cleaned_data["code"]
        if acts.take_code(user_id=request.user.pk, code=code, now=now):
            note_given(request)
            messages.success(request, _("The code was taken: you may decide for 12 hours."))
            return redirect("structures:one-time-codes")
        _count_wrong(request, request.user, form)
    context = {
        "form": form,
        "factor": factor,
        "left": None if factor is None else codes_left(factor),
        "needed": needs_factor(request.user),
        "given": second_factor_given(request),
    }
    return _answer(request, "registration/one_time_codes.html", context, form)


@require_POST
def begin(request):
    acts.begin_factor(by=request.user)
    return redirect("structures:set-up-codes")


@sensitive_post_parameters()
@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
def set_up(request):
    """The picture and the key, until the first code puts them in force."""
    factor = begun_factor_of(request.user)
    if factor is None:
        return redirect("structures:one-time-codes")
    form = CodeForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            codes = acts.confirm_factor(
                by=request.user, code=form.cleaned_data["code"], now=timezone.now()
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            note_given(request)
            return _print_codes(request, codes)
    picture = segno.make(acts.provisioning_address(factor), error="m")
    context = {
        "form": form,
        "picture": picture.svg_data_uri(scale=QR_DOT, border=QR_MARGIN, light="#fff"),
        "key": " ".join(_in_fours(factor.secret)),
    }
    return _answer(request, "registration/set_up_codes.html", context, form)


@sensitive_post_parameters()
@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
def renew_list(request):
    if factor_of(request.user) is None:
        raise Http404
    form = CodeForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        if not _may_try(request, request.user):
            return HttpResponse()  # the lock-out puts its own page in its place
        try:
            codes = acts.renew_recovery_codes(
                by=request.user, code=form.cleaned_data["code"], now=timezone.now()
            )
        except Refused:
            _count_wrong(request, request.user, form)
        else:
            return _print_codes(request, codes)
    return _answer(request, "registration/renew_list.html", {"form": form}, form)


@require_safe
def resets(request):
    """Lost second factors that wait for another approver."""
    context = {"resets": resets_to_agree(request.user)}
    return render(request, "registration/factor_resets.html", context)


@require_POST
def agree(request, reset_id):
    if all(one.pk != reset_id for one in resets_to_agree(request.user)):
        raise Http404
    acts.agree_reset(reset_id=reset_id, by=request.user)
    messages.success(request, _("The second factor is taken away; the register says by whom."))
    return redirect("structures:factor-resets")


def _may_try(request, user):
    """Whether the lock-out of signing in lets another code be tried from here."""
    allowed = AxesProxyHandler.is_allowed(request, {"username": user.username})
    request.axes_locked_out = not allowed
    return allowed


def _count_wrong(request, user, form):
    """A wrong code counts like a wrong password."""
    user_login_failed.send(
        sender=__name__, credentials={"username": user.username}, request=request
    )
    words = _("%(what)s Wait for the next one and type that.") % {"what": acts.NO_FIT}
    form.add_error("code", words)


def _print_codes(request, codes):
    """Show the list in the answer itself: it is kept hashed and cannot be shown again."""
    return render(request, "registration/recovery_codes.html", {"codes": codes})


def _in_fours(text):
    return [text[start : start + 4] for start in range(0, len(text), 4)]


def _answer(request, template, context, form):
    wrong = form.is_bound and form.errors
    return render(request, template, context, status=STATUS if wrong else 200)
