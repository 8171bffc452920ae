"""Devices: signing in for a token, signing out, and what a token opens."""

from __future__ import annotations

from http import HTTPStatus

from django.conf import settings
from django.contrib.auth import authenticate
from django.contrib.auth.signals import user_login_failed
from django.utils import timezone
from drf_spectacular.extensions import OpenApiAuthenticationExtension
from drf_spectacular.utils import OpenApiExample, OpenApiResponse, extend_schema
from rest_framework import exceptions, serializers
from rest_framework.permissions import AllowAny
from rest_framework.response import Response
from rest_framework.throttling import AnonRateThrottle

from structures.actions.devices import end_token, give_token
from structures.actions.second_factor import take_code
from structures.api.tokens import DeviceAuthentication
from structures.api.views import OfficeView
from structures.queries.second_factor import factor_of


class DeviceScheme(OpenApiAuthenticationExtension):
    target_class = "structures.api.tokens.DeviceAuthentication"
    name = "token"

    def get_security_definition(self, auto_schema):
        words = "`Token` and what sign-in gave, as in `Authorization: Token 1f0c...`."
        return {"type": "apiKey", "in": "header", "name": "Authorization", "description": words}


class SignInThrottle(AnonRateThrottle):
    """Counts whoever asks, also one who is signed in."""

    scope = "sign-in"

    def get_cache_key(self, request, view):
        return self.cache_format % {"scope": self.scope, "ident": self.get_ident(request)}


class Locked(exceptions.Throttled):
    default_detail = "Too many wrong passwords for this name from here."


class Credentials(serializers.Serializer):
    username = serializers.CharField(max_length=150)
    password = serializers.CharField(trim_whitespace=False, max_length=4096)
    one_time_code = serializers.CharField(
        required=False,
        max_length=40,
        help_text="where the account has a second step: six digits, or a code of the printed list",
    )


class Token(serializers.Serializer):
    token = serializers.CharField(help_text="goes into the header `Authorization: Token ...`")
    expires = serializers.DateTimeField()


class SignIn(OfficeView):
    # No session counts here: signing in needs no token against forged forms.
    authentication_classes = ()
    permission_classes = (AllowAny,)
    throttle_classes = (SignInThrottle,)

    @extend_schema(
        summary="Sign a device in",
        request=Credentials,
        responses={
            200: Token,
            401: OpenApiResponse(
                description="name and password do not fit, or the one-time code is missing or wrong"
            ),
            429: OpenApiResponse(description="locked for a while, see Retry-After"),
        },
        auth=[],
        examples=[
            OpenApiExample(
                "A field phone",
                {"username": "field-1", "password": "puddle-clay-and-film"},
                request_only=True,
            ),
            OpenApiExample(
                "Signed in",
                {"token": "1f0c6a7be2d04c2f", "expires": "2026-12-15T09:30:00Z"},
                response_only=True,
            ),
        ],
    )
    def post(self, request):
        said = Credentials(data=request.data)
        said.is_valid(raise_exception=True)
        page = request._request
        code = said.validated_data.pop("one_time_code", "")
        user = authenticate(page, **said.validated_data)
        _stop_if_locked(page)
        if user is None:
            raise WrongPassword()
        if factor_of(user) is not None:
            if not code:
                raise CodeMissing()
            if not take_code(user_id=user.pk, code=code, now=timezone.now()):
                # A wrong code counts like a wrong password.
                known = {"username": user.username}
                user_login_failed.send(sender=__name__, credentials=known, request=page)
                _stop_if_locked(page)
                raise WrongCode()
        token, expires = give_token(user=user)
        return Response(Token({"token": token, "expires": expires}).data)


def _stop_if_locked(page):
    """Answer a device in its own words; the lock is that of the pages, its page is not."""
    if getattr(page, "axes_locked_out", False):
        page.axes_locked_out = False
        raise Locked(wait=settings.AXES_COOLOFF_TIME.total_seconds())


class WrongPassword(exceptions.APIException):
    status_code = HTTPStatus.UNAUTHORIZED
    default_detail = "Name and password do not fit, or the account has ended."
    auth_header = "Token"


class CodeMissing(WrongPassword):
    default_detail = "This account has a second step: send `one_time_code` as well."


class WrongCode(WrongPassword):
    default_detail = "That one-time code does not fit, or it was used before. Send the next one."


class SignOut(OfficeView):
    authentication_classes = (DeviceAuthentication,)

    @extend_schema(summary="Sign this device out", request=None, responses={204: None})
    def post(self, request):
        end_token(token=request.auth)
        return Response(status=HTTPStatus.NO_CONTENT)
