"""Which account a name and a password open; asked again at every request of a session."""

from __future__ import annotations

from django.contrib.auth.backends import ModelBackend
from django.contrib.auth.hashers import UNUSABLE_PASSWORD_PREFIX
from django.utils.crypto import constant_time_compare

from structures.access import account_over
from structures.models import User


class AccountBackend(ModelBackend):
    """Accounts in force; one whose last day is over is signed out and stays out."""

    def user_can_authenticate(self, user: User) -> bool:
        return super().user_can_authenticate(user) and not account_over(user)


def anyone_has_a_password() -> bool:
    """Whether any account can be signed in to without a one-time word."""
    return User.objects.exclude(password__startswith=UNUSABLE_PASSWORD_PREFIX).exists()


def account_that_waits(user_id: int, session_hash: str) -> User | None:
    """The account of which the password was right, if it is in force and its password the same."""
    user = User.objects.filter(pk=user_id, is_active=True).first()
    if user is None or account_over(user):
        return None
    return user if constant_time_compare(user.get_session_auth_hash(), session_hash) else None
