"""Writes that are harmless to send twice: named by a key, and by what the sender saw."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any, Final
from uuid import UUID

from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import OpenApiParameter
from rest_framework import exceptions
from rest_framework.renderers import JSONRenderer
from rest_framework.response import Response

from structures.actions.devices import Answered, KeyUsed, carry_out_once
from structures.api.problems import ChangedSince, Conflict, NotSaidWhichSeen
from structures.api.views import body_digest

if TYPE_CHECKING:
    from collections.abc import Callable

    from rest_framework.request import Request

KEY_MOST: Final = 200  # characters of a key
KEY: Final = OpenApiParameter(
    "Idempotency-Key",
    str,
    OpenApiParameter.HEADER,
    description=(
        "A name that the sender gives this write, best a UUID. Sent again with the same contents, "
        "it is answered as the first time and changes nothing; with other contents it is a 409. "
        "A body of JSON may carry it as `id` instead."
    ),
)
IF_MATCH: Final = OpenApiParameter(
    "If-Match",
    str,
    OpenApiParameter.HEADER,
    required=True,
    description="The ETag of the site as it was read; another one now is a 412.",
)
DISTRICT: Final = OpenApiParameter(
    "district", str, description="Code; may be left out by who serves in one district only."
)
PREVIEW: Final = OpenApiParameter(
    "preview", OpenApiTypes.BOOL, description="Read and judge it, and keep nothing."
)
YES: Final = ("true", "1", "yes")


def once(request: Request, write: Callable[[], Answered]) -> Response:
    """Carry a write out once a key; without a key, each time it is sent."""
    key = _key(request)
    if key is None:
        answered = write()
    else:
        try:
            answered = carry_out_once(
                by=request.user,
                key=key,
                digest=body_digest(request),
                write=lambda: _plain(write()),
            )
        except KeyUsed as used:
            raise Conflict from used
    headers = dict(answered.headers)
    if answered.again:
        headers["Idempotency-Replayed"] = "true"
    return Response(answered.body, status=answered.status, headers=headers)


def is_preview(request: Request) -> bool:
    return request.query_params.get("preview", "").lower() in YES


def seen_revision(request: Request, revision: int) -> int:
    """Give the revision that the sender saw, or answer that there is another one by now."""
    sent = request.headers.get("If-Match", "").strip()
    if not sent:
        raise NotSaidWhichSeen
    if sent == "*":
        return revision
    if etag(revision) not in [one.strip() for one in sent.split(",")]:
        raise ChangedSince
    return revision


def etag(revision: int) -> str:
    return f'"{revision}"'


def _key(request: Request) -> str | None:
    key = request.headers.get("Idempotency-Key", "").strip()
    if not key and isinstance(request.data, dict):
        key = str(request.data.get("id") or "")
        try:
            key = key and str(UUID(key))
        except ValueError as error:
            raise exceptions.ValidationError({"id": ["This is no UUID."]}) from error
    if len(key) > KEY_MOST:
        raise exceptions.ValidationError({"Idempotency-Key": [f"More than {KEY_MOST} characters."]})
    return key or None


def _plain(answered: Answered) -> Answered:
    """Give the answer as it will be read, so that the table keeps just that."""
    body: Any = json.loads(JSONRenderer().render(answered.body))
    return Answered(answered.status, body, answered.headers)
