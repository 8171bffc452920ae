"""What goes wrong, as problem documents (RFC 9457); a refusal brings all its findings."""

from __future__ import annotations

from http import HTTPStatus
from typing import TYPE_CHECKING, Any, Final

from django.core.exceptions import ObjectDoesNotExist, PermissionDenied
from django.http import Http404, JsonResponse
from rest_framework import exceptions
from rest_framework.response import Response
from rest_framework.views import set_rollback

from structures.actions.refusals import as_documents
from structures.errors import Finding, Refused

if TYPE_CHECKING:
    from django.http import HttpRequest

TYPE: Final = "application/problem+json"
HEADERS: Final = {"auth_header": "WWW-Authenticate", "wait": "Retry-After"}


class Conflict(exceptions.APIException):
    status_code = HTTPStatus.CONFLICT
    default_detail = "This key named another write before. Take a new key for a new write."


class ChangedSince(exceptions.APIException):
    status_code = HTTPStatus.PRECONDITION_FAILED
    default_detail = "It was changed since you read it. Read it again and enter your change anew."


class NotSaidWhichSeen(exceptions.APIException):
    status_code = HTTPStatus.PRECONDITION_REQUIRED
    default_detail = "Send If-Match with the ETag of what you read."


class TooLarge(exceptions.APIException):
    status_code = HTTPStatus.REQUEST_ENTITY_TOO_LARGE


def answer(error: Exception, context: dict[str, Any]) -> Response | None:
    """Answer what a view raised; None leaves a defect to be logged as one."""
    set_rollback()
    path = context["request"].path
    if isinstance(error, Refused):
        return _response(_refused(error, path))
    if isinstance(error, Http404 | ObjectDoesNotExist):
        error = exceptions.NotFound("There is nothing here, or nothing that you may see.")
    elif isinstance(error, PermissionDenied):
        error = exceptions.PermissionDenied()
    if not isinstance(error, exceptions.APIException):
        return None
    headers = {
        name: str(getattr(error, key))
        for key, name in HEADERS.items()
        if getattr(error, key, None) is not None
    }
    if isinstance(error, exceptions.ValidationError):
        found = _field_findings(error.detail)
        words = " ".join(one.sentence() for one in found)
        return _response(problem(error.status_code, words, path, found))
    return _response(problem(error.status_code, str(error.detail), path), headers)


def problem(
    status: int, detail: str, path: str, findings: tuple[Finding, ...] = ()
) -> dict[str, Any]:
    """Give a problem document; its title is the status in words, as `about:blank` has it."""
    return {
        "type": "about:blank",
        "title": HTTPStatus(status).phrase,
        "status": int(status),
        "detail": detail,
        "instance": path,
        "findings": as_documents(findings),
    }


def nowhere(request: HttpRequest) -> JsonResponse:
    """Answer an address below the API at which there is nothing."""
    words = "There is nothing at this address. The schema names those there are."
    document = problem(HTTPStatus.NOT_FOUND, words, request.path)
    return JsonResponse(document, status=HTTPStatus.NOT_FOUND, content_type=TYPE)


def broken(request: HttpRequest) -> JsonResponse:
    """Answer a defect, which the log has with its cause."""
    words = "An internal error; it was written to the log of the server."
    document = problem(HTTPStatus.INTERNAL_SERVER_ERROR, words, request.path)
    return JsonResponse(document, status=HTTPStatus.INTERNAL_SERVER_ERROR, content_type=TYPE)


def _refused(refused: Refused, path: str) -> dict[str, Any]:
    findings = refused.findings or (Finding(refused.where, "", refused.what, refused.remedy),)
    return problem(HTTPStatus.UNPROCESSABLE_ENTITY, refused.sentence(), path, findings)


def _response(document: dict[str, Any], headers: dict[str, str] | None = None) -> Response:
    return Response(document, status=document["status"], headers=headers, content_type=TYPE)


def _field_findings(detail: Any, field: str = "") -> tuple[Finding, ...]:
    """Give what is wrong with the fields of a body or a filter, one finding a message."""
    if isinstance(detail, dict):
        return tuple(
            one
            for key, inner in detail.items()
            for one in _field_findings(inner, f"{field}.{key}" if field else str(key))
        )
    if isinstance(detail, list):
        return tuple(one for inner in detail for one in _field_findings(inner, field))
    return (Finding("request", field, str(detail), "Put it right and send it again."),)
