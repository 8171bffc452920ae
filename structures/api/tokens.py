"""What a device's token opens."""

from __future__ import annotations

from django.utils.crypto import constant_time_compare
from knox.auth import TokenAuthentication
from rest_framework import exceptions

from structures.access import account_over


class DeviceAuthentication(TokenAuthentication):
    """A token holds as long as a session would: not after a new password or a sign-out everywhere."""

    def validate_user(self, auth_token):
        user, token = super().validate_user(auth_token)
        same = constant_time_compare(token.session_hash, user.get_session_auth_hash())
        if not same or account_over(user):
            raise exceptions.AuthenticationFailed("This token has ended. Sign in again.")
        return user, token
