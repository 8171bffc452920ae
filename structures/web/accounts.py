"""A person's own account: sign in and out, the one-time word, the password."""

from __future__ import annotations

from datetime import timedelta

from django.conf import settings
from django.contrib import messages
from django.contrib.auth import logout, update_session_auth_hash
from django.contrib.auth.decorators import login_not_required
from django.contrib.auth.views import LoginView
from django.shortcuts import redirect, render, resolve_url
from django.utils.translation import gettext as _
from django.views.decorators.cache import never_cache
from django.views.decorators.debug import sensitive_post_parameters
from django.views.decorators.http import require_http_methods, require_POST

from structures.actions import people
from structures.errors import Refused
from structures.queries.people import own_postings
from structures.web.account_forms import PasswordForm, SignInForm, WelcomeForm
from structures.web.refusals import STATUS, refuse
from structures.web.sessions import come_in

TOO_MANY = 429  # too many requests (RFC 6585, 4)


class SignIn(LoginView):
    template_name = "registration/sign_in.html"
    authentication_form = SignInForm
    redirect_authenticated_user = True

    def form_valid(self, form):
        return come_in(self.request, form.get_user(), self.get_success_url())

    def form_invalid(self, form):
        return self.render_to_response(self.get_context_data(form=form), status=STATUS)


def locked(request, answer, credentials):
    """What the lock-out answers in place of a page after too many wrong passwords."""
    context = {
        "failure_limit": settings.AXES_FAILURE_LIMIT,
        "lockout_minutes": settings.AXES_COOLOFF_TIME // timedelta(minutes=1),
    }
    return render(request, "registration/locked.html", context, status=TOO_MANY)


@require_POST
def sign_out(request):
    logout(request)
    return redirect("structures:sign-in")


@require_http_methods(["GET", "HEAD", "POST"])
def sign_out_everywhere(request):
    if request.method == "POST":
        people.end_sessions(user_id=request.user.pk, by=request.user)
        logout(request)
        messages.success(request, _("Every session of this account has ended."))
        return redirect("structures:sign-in")
    return render(request, "registration/sign_out_everywhere.html")


@sensitive_post_parameters()
@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
@login_not_required
def welcome(request):
    form = WelcomeForm(request.POST or None, initial={"login": request.GET.get("name", "")})
    if request.method == "POST" and form.is_valid():
        said = form.cleaned_data
        try:
            user = people.redeem_invite(
                login=said["login"], word=said["word"], password=said["password"]
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            return come_in(request, user, resolve_url(settings.LOGIN_REDIRECT_URL))
    context = {"form": form}
    return render(request, "registration/welcome.html", context, status=_status(form))


@sensitive_post_parameters()
@never_cache
@require_http_methods(["GET", "HEAD", "POST"])
def password(request):
    form = PasswordForm(request.POST or None, user=request.user)
    if request.method == "POST" and form.is_valid():
        try:
            people.set_password(user_id=request.user.pk, password=form.cleaned_data["password"])
        except Refused as refused:
            refuse(form, refused)
        else:
            request.user.refresh_from_db()
            update_session_auth_hash(request, request.user)
            messages.success(request, _("The new password holds; other sessions have ended."))
            return redirect("structures:password")
    context = {"form": form, "postings": own_postings(request.user)}
    return render(request, "registration/password.html", context, status=_status(form))


def _status(form):
    return STATUS if form.is_bound and form.errors else 200
