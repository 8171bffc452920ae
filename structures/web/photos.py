"""Photos and scans: shown to those who may see their site, never by a bare address of a file."""

from __future__ import annotations

import io
import uuid

from django.http import FileResponse, Http404
from django.shortcuts import get_object_or_404
from django.utils.translation import gettext as _
from django.views.decorators.http import require_safe

from structures.actions.photos import keep_photo
from structures.queries.photos import visible_photos
from structures.runs.files import kept_bytes

PDF = "application/pdf"


@require_safe
def photo(request, photo_id):
    """A photo as it is kept; a PDF is saved and never opened inside the page."""
    found = get_object_or_404(visible_photos(request.user), pk=photo_id)
    try:
        data = kept_bytes(found.sha256)
    except FileNotFoundError as error:
        raise Http404(_("The bytes of this photo are no longer kept.")) from error
    name = f"{found.site.code}-{str(found.pk)[:8]}.{found.form.rpartition('/')[2]}"
    return FileResponse(
        io.BytesIO(data),
        as_attachment=found.form == PDF,
        filename=name,
        content_type=found.form,
    )


def keep_sent(request, site, what):
    """Keep the photos of a form, and give them with those that it named already."""
    named = []
    for text in request.POST.getlist("photo_id"):
        try:
            named.append(uuid.UUID(text))
        except ValueError:
            continue
    kept = [
        keep_photo(
            site_id=site.pk, photo_id=uuid.uuid4(), data=file.read(), by=request.user, what=what
        ).pk
        for file in request.FILES.getlist("photo")
    ]
    mine = visible_photos(request.user).filter(site=site, pk__in=named)
    return [*mine.values_list("pk", flat=True), *kept]
