"""What is sent after a session has ended: the way to sign in, and the word that nothing was kept."""

from __future__ import annotations

from django.contrib import messages
from django.contrib.auth.middleware import LoginRequiredMiddleware
from django.utils.translation import gettext as _


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
