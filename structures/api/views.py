"""What all views of the API share: the limit on a body, rights in words, one reading of files."""

from __future__ import annotations

import hashlib
from typing import TYPE_CHECKING, Any, Final, NamedTuple

from django.utils.cache import patch_cache_control
from django.utils.http import parse_header_parameters
from rest_framework import exceptions
from rest_framework.generics import get_object_or_404
from rest_framework.parsers import BaseParser, MultiPartParser
from rest_framework.views import APIView

from structures import access
from structures.api.problems import TooLarge
from structures.errors import Refused
from structures.intake.archive import FILE_MOST_BYTES, MEGABYTE
from structures.queries.districts import visible_districts
from structures.runs.book import input_digest

if TYPE_CHECKING:
    from rest_framework.request import Request

ENVELOPE_BYTES: Final = 100_000  # headings around a file that is sent as a form (project choice)
NULL: Final = "\0"
BODY_MOST_BYTES: Final = FILE_MOST_BYTES + ENVELOPE_BYTES


class Handed(NamedTuple):
    """A file as it came."""

    name: str
    data: bytes


class Guarded:
    """Turns away what no view could use before any of it is read; keeps answers out of caches."""

    def initial(self, request: Request, *args: Any, **kwargs: Any) -> None:
        if int(request.META.get("CONTENT_LENGTH") or 0) > BODY_MOST_BYTES:
            limit = FILE_MOST_BYTES // MEGABYTE
            raise TooLarge(f"More than {limit} MB came. Nothing was read. Split it.")
        # PostgreSQL has no text with a null character in it.
        if any(NULL in text for text in (request.path, *request.GET.keys(), *request.GET.values())):
            raise exceptions.ParseError("The address holds a null character.")
        super().initial(request, *args, **kwargs)

    def finalize_response(self, request: Request, response: Any, *args: Any, **kwargs: Any) -> Any:
        answer = super().finalize_response(request, response, *args, **kwargs)
        patch_cache_control(answer, private=True, no_store=True)
        return answer


class OfficeView(Guarded, APIView):
    pass


class JsonFile(BaseParser):
    """Keeps a body as the file it is, to its last byte, under the name its sender gives it."""

    media_type = "application/json"
    ending = "json"

    def parse(self, stream, media_type=None, parser_context=None):
        said = parser_context["request"].META.get("HTTP_CONTENT_DISPOSITION", "")
        _, parts = parse_header_parameters(said)
        return Handed(parts.get("filename") or f"body.{self.ending}", stream.read())


class ZipFile(JsonFile):
    media_type = "application/zip"
    ending = "zip"


class Workbook(JsonFile):
    media_type = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"
    ending = "xlsx"


class CsvFile(JsonFile):
    media_type = "text/csv"
    ending = "csv"


class GeoJsonFile(JsonFile):
    media_type = "application/geo+json"
    ending = "geojson"


SURVEY_FILES: Final = (JsonFile, MultiPartParser, ZipFile, Workbook)
RATE_FILES: Final = (CsvFile, JsonFile, MultiPartParser)
OUTLINE_FILES: Final = (GeoJsonFile, JsonFile, MultiPartParser)


def handed_in(request: Request) -> Handed:
    """Give the file of a request: its body, or the one file of its form."""
    if isinstance(request.data, Handed):
        return request.data
    files = list(request.FILES.values())
    if len(files) != 1:
        words = f"One file is expected in the form, {len(files)} came."
        raise exceptions.ValidationError({"file": [words]})
    return Handed(files[0].name, files[0].read())


def body_digest(request: Request) -> str:
    """Digest of method, address and contents, however JSON was spaced or a form was packed."""
    data = request.data
    if isinstance(data, Handed):
        contents: object = _file_digest(data.data)
    elif request.FILES:
        contents = {key: _file_digest(file.read()) for key, file in request.FILES.items()}
        for file in request.FILES.values():
            file.seek(0)
    else:
        contents = data
    return input_digest({"at": [request.method, request.get_full_path()], "body": contents})


def _file_digest(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()


def named_district(request: Request, act: access.Act) -> Any:
    """Give the district that the address names, or the only one where the user may do that."""
    code = request.query_params.get("district")
    if code:
        district = get_object_or_404(visible_districts(request.user), code=code)
        insist(request.user, act, district)
        return district
    found = list(access.districts(request.user, act)[:2])
    if not found:
        insist(request.user, act)
    if len(found) != 1:
        raise exceptions.ValidationError({"district": ["Name the district in the address."]})
    return found[0]


def insist(user: Any, act: access.Act, thing: Any = None) -> None:
    """Answer 403 with the words of the rule where the user may see a thing but not do that."""
    try:
        access.insist(user, act, thing)
    except Refused as refused:
        raise exceptions.PermissionDenied(refused.sentence()) from refused
