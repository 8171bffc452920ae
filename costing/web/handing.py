"""Handing out files that were kept by their digest."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.http import HttpResponse

from structures.runs.files import kept_bytes

if TYPE_CHECKING:
    from collections.abc import Mapping

TYPES: Final[Mapping[str, str]] = {
    ".svg": "image/svg+xml",
    ".pdf": "application/pdf",
    ".xlsx": "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
}


def answer_with_file(name: str, digest: str) -> HttpResponse:
    answer = HttpResponse(kept_bytes(digest), content_type=TYPES[name[name.rindex(".") :]])
    answer["Content-Disposition"] = f'attachment; filename="{name}"'
    return answer
