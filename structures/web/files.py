"""Files received: what came, from whom, what became of it, and the file itself."""

from __future__ import annotations

import io

from django.http import FileResponse
from django.shortcuts import get_object_or_404, render
from django.utils.translation import gettext as _
from django.views.decorators.http import require_safe

from structures.errors import Refused
from structures.queries.received import files_to_hand_back, received_files
from structures.runs.files import kept_bytes
from structures.web.lists import sheet_of


@require_safe
def files(request):
    context = {"page": sheet_of(request, received_files(request.user))}
    return render(request, "structures/files.html", context)


@require_safe
def file(request, file_id):
    found = get_object_or_404(received_files(request.user), pk=file_id)
    handed = files_to_hand_back(request.user).filter(pk=file_id).exists()
    return render(request, "structures/file.html", {"file": found, "handed_back": handed})


@require_safe
def as_received(request, file_id):
    """The bytes as they came, to be saved: never shown, never run by the browser."""
    found = get_object_or_404(files_to_hand_back(request.user), pk=file_id)
    try:
        data = kept_bytes(found.sha256)
    except FileNotFoundError as error:
        raise Refused(
            _("The bytes of this file are no longer kept."),
            where=found.name,
            remedy=_("Ask its sender for it; the digest on its page tells whether it is the same."),
        ) from error
    # A header has no room for line ends, whatever a sender called the file.
    name = "".join(sign for sign in found.name if sign.isprintable())
    answer = FileResponse(io.BytesIO(data), as_attachment=True, filename=name)
    answer["Content-Type"] = "application/octet-stream"
    return answer
