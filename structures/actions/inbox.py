"""Files as they come in: kept whole under their digest, once, with what became of them."""

from __future__ import annotations

import hashlib
from contextlib import contextmanager
from pathlib import PurePosixPath
from typing import TYPE_CHECKING, Final

from django.db import transaction
from django.utils import timezone

from structures.access import Act, insist, may
from structures.actions.refusals import as_documents
from structures.errors import Finding, Refused
from structures.intake.archive import too_large
from structures.models import District, Upload, Watershed
from structures.runs.files import keep_bytes

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from structures.models import User

NAME_MOST: Final = 200  # characters of a file's name that are kept
ACT: Final[dict[str, Act]] = {
    Upload.Kind.SURVEY: Act.ACCEPT_SURVEY,
    Upload.Kind.SITES: Act.ENTER_SITE,
    Upload.Kind.WATERSHEDS: Act.ENTER_WATERSHED,
    Upload.Kind.PROFILES: Act.ENTER_PROFILE,
    Upload.Kind.RATES: Act.IMPORT_SCHEDULE,
    Upload.Kind.READINGS: Act.SEND_READINGS,
    Upload.Kind.RAIN: Act.SEND_READINGS,
}


def receive_file(
    *, kind: str, name: str, data: bytes, owner: District | Watershed, by: User
) -> Upload:
    """Keep a file as it came, before anybody reads it.

    Raises
    ------
    Refused
        If the user may not hand in such a file there, it is too large (FI-02), or this very file
        was kept before (FI-01).
    """
    insist(by, ACT[kind], owner)
    plain = PurePosixPath(name.replace("\\", "/")).name[-NAME_MOST:] or kind
    if what := too_large(len(data)):
        raise _single(plain, what, "Split it.", "FI-02")
    watershed = owner if isinstance(owner, Watershed) else None
    district = owner if watershed is None else watershed.district
    refuse_same_file(kind=kind, name=plain, data=data, district=district, by=by)
    with transaction.atomic():
        return Upload.objects.create(
            district=district,
            watershed=watershed,
            kind=kind,
            name=plain,
            size=len(data),
            sha256=keep_bytes(data),
            by=by,
        )


def refuse_same_file(*, kind: str, name: str, data: bytes, district: District, by: User) -> None:
    """Refuse a file that was kept before, whatever it was called then.

    Raises
    ------
    Refused
        With the day and the sender where the user may see that file (FI-01).
    """
    digest = hashlib.sha256(data).hexdigest()
    kept = Upload.objects.filter(
        district=district, kind=kind, sha256=digest, outcome=Upload.Outcome.KEPT
    )
    same = kept.select_related("by", "watershed", "district").first()
    if same is None:
        return
    on = timezone.localtime(same.at).strftime("%Y-%m-%d")
    known = f"on {on} from {same.by.username}" if may(by, Act.SEE, same) else "before"
    what = f"This very file came {known}. Nothing was added."
    raise _single(name, what, "Send the file that is new.", "FI-01")


@contextmanager
def told_of(upload: Upload) -> Iterator[None]:
    """Write down at the file that it was refused, and why; the refusal goes on to the sender."""
    try:
        yield
    except Refused as refused:
        blocked = {one.where for one in refused.findings if one.level == "block"}
        Upload.objects.filter(pk=upload.pk).update(
            outcome=Upload.Outcome.REFUSED,
            findings=as_documents(refused.findings) or [_words(refused)],
            rows_refused=len(blocked) or None,
        )
        raise


def mark_kept(upload: Upload, *, rows: int, findings: Iterable[Finding]) -> None:
    """Write down that a file was kept: how many rows, and how many of them wait for a decision."""
    findings = tuple(findings)
    held = min(rows, len({one.where for one in findings if one.level == "hold"}))
    upload.outcome = Upload.Outcome.KEPT
    upload.rows_in, upload.rows_held, upload.rows_refused = rows, held, 0
    upload.rows_kept = rows - held
    upload.findings = as_documents(findings)
    upload.save()


def _single(where: str, what: str, remedy: str, rule: str) -> Refused:
    finding = Finding(where, "", what, remedy, rule=rule)
    return Refused(what, where=where, remedy=remedy, findings=(finding,))


def _words(refused: Refused) -> dict[str, str]:
    return as_documents([Finding(refused.where, "", refused.what, refused.remedy)])[0]
