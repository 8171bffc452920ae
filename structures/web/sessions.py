"""Sessions: how one begins, with a second step where the account has one, and how one is over."""

from __future__ import annotations

from datetime import datetime, timedelta
from typing import TYPE_CHECKING, Final

from django.contrib import messages
from django.contrib.auth import login
from django.contrib.auth.middleware import LoginRequiredMiddleware
from django.shortcuts import redirect
from django.utils import timezone
from django.utils.translation import gettext as _

from structures.queries.accounts import account_that_waits
from structures.queries.second_factor import factor_of, needs_factor

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

    from structures.models import User

BACKEND: Final = "structures.queries.accounts.AccountBackend"
WAITING: Final = "second_step"  # who gave the right password and owes the code
GIVEN: Final = "second_factor_at"
PATIENCE: Final = timedelta(minutes=10)  # between the two steps


class SessionMiddleware(LoginRequiredMiddleware):
    """Ask for an account everywhere, and tell those whose form came too late."""

    def handle_no_permission(self, request, view_func):
        if request.method == "POST":
            words = _(
                "Your session had ended before this was sent. Nothing of it was kept: sign in, and "
                "send it again."
            )
            messages.warning(request, words)
        return super().handle_no_permission(request, view_func)


def come_in(request: HttpRequest, user: User, to: str) -> HttpResponse:
    """Sign in whoever gave the right password or word; with a second factor, ask for its code."""
    if factor_of(user) is not None:
        request.session.cycle_key()
        request.session[WAITING] = {
            "user": user.pk,
            "hash": user.get_session_auth_hash(),
            "since": timezone.now().isoformat(),
            "to": to,
        }
        return redirect("structures:second-step")
    login(request, user, backend=BACKEND)
    if needs_factor(user):
        words = _(
            "Decisions of your district ask for a one-time code. Set it up under your name, "
            "'One-time codes', before you decide."
        )
        messages.warning(request, words)
    return redirect(to)


def who_waits(request: HttpRequest) -> tuple[User, str] | None:
    """Whose code is asked for in this session, and where they wanted to go."""
    kept = request.session.get(WAITING)
    if kept is None or timezone.now() - datetime.fromisoformat(kept["since"]) > PATIENCE:
        return None
    user = account_that_waits(kept["user"], kept["hash"])
    return None if user is None else (user, kept["to"])


def finish_second_step(request: HttpRequest, user: User) -> None:
    """Sign in after the code, and keep in the session when it was given."""
    login(request, user, backend=BACKEND)
    request.session.pop(WAITING, None)
    note_given(request)


def note_given(request: HttpRequest) -> None:
    request.session[GIVEN] = timezone.now().isoformat()


def second_factor_given(request: HttpRequest) -> datetime | None:
    """When a code was last given in this session; None without one, and for a device's token."""
    text = None if "HTTP_AUTHORIZATION" in request.META else request.session.get(GIVEN)
    return None if text is None else datetime.fromisoformat(text)
