"""Photos and scans: kept once under the identifier that was made where they were taken."""

from __future__ import annotations

import hashlib
from typing import TYPE_CHECKING, Final, NamedTuple

from django.db import transaction

from structures.access import Act, insist
from structures.errors import Refused
from structures.intake.archive import MEGABYTE
from structures.intake.pictures import form_of, without_place
from structures.models import Photo, Site
from structures.runs.files import keep_bytes

if TYPE_CHECKING:
    from datetime import datetime
    from uuid import UUID

    from structures.models import User

PHOTO_MOST_BYTES: Final = 10 * MEGABYTE  # project choice; a phone makes photos smaller first


class Position(NamedTuple):
    """Where a photo was taken, as the device said it openly; `accuracy_m` None is not stated."""

    lat: float
    lon: float
    accuracy_m: float | None = None


@transaction.atomic
def keep_photo(
    *,
    site_id: int,
    photo_id: UUID,
    data: bytes,
    by: User,
    what: str = "",
    taken_at: datetime | None = None,
    position: Position | None = None,
) -> Photo:
    """Keep a photo or the scan of a signed sheet; sent again, it is the one that is there.

    A position inside the file is dropped: only the one that was said openly is kept.

    Raises
    ------
    Refused
        If it is no picture, too large or broken, or another one came under this identifier
        (PC-02).
    """
    site = Site.objects.select_for_update().get(pk=site_id)
    insist(by, Act.FILL_IN_PAPER, site)
    plain = _plain(data)
    digest = hashlib.sha256(plain).hexdigest()
    kept = Photo.objects.filter(pk=photo_id).first()
    if kept is not None:
        if (kept.site_id, kept.sha256) == (site.pk, digest):
            return kept
        raise Refused(
            "Another photo came under this identifier before. This one was not kept.",
            where="photo",
            remedy="Send it again from the page; it gets an identifier of its own.",
        )
    lat, lon, accuracy_m = position or (None, None, None)
    photo = Photo(
        id=photo_id,
        site=site,
        sha256=digest,
        size=len(plain),
        form=form_of(plain),
        what=what.strip()[:200],
        taken_at=taken_at,
        lat=lat,
        lon=lon,
        accuracy_m=accuracy_m,
        by=by,
    )
    keep_bytes(plain)
    photo.save()
    return photo


def _plain(data: bytes) -> bytes:
    if len(data) > PHOTO_MOST_BYTES:
        what = f"The photo has {len(data) / MEGABYTE:.0f} MB, limit {PHOTO_MOST_BYTES // MEGABYTE}."
        raise Refused(what, where="photo", remedy="Make it smaller and send it again.")
    if form_of(data) is None:
        raise Refused(
            "This file is no photo and no scan.",
            where="photo",
            remedy="Send JPEG, PNG, WebP or PDF.",
        )
    try:
        return without_place(data)
    except ValueError as error:
        what = f"This photo cannot be read: {error}."
        raise Refused(what, where="photo", remedy="Take it or scan it again.") from error
