"""Which account a name and a password open; asked again at every request of a session."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.contrib.auth.backends import ModelBackend

from structures.access import account_over

if TYPE_CHECKING:
    from structures.models import User


class AccountBackend(ModelBackend):
    """Accounts in force; one whose last day is over is signed out and stays out."""

    def user_can_authenticate(self, user: User) -> bool:
        return super().user_can_authenticate(user) and not account_over(user)
