"""What is noted of the upkeep: that a backup was restored, and whether it could be."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from django.db import transaction

from structures.models import RestoreTrial

if TYPE_CHECKING:
    from datetime import datetime
    from typing import Protocol

    class Copied(Protocol):
        """What a backup holds, as its reader says."""

        made_at: datetime
        rows: int
        files: int
        digest: str


@transaction.atomic
def note_trial(*, whole: bool, told: str, copied: Copied | None = None) -> RestoreTrial:
    """Note that a restore was tried; it is the operator's act at the machine's own shell."""
    said: dict[str, Any] = {}
    if copied is not None:
        said = {
            "backup_made_at": copied.made_at,
            "digest": copied.digest,
            "rows": copied.rows,
            "files": copied.files,
        }
    return RestoreTrial.objects.create(whole=whole, told=told, **said)
