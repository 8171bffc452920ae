"""Whether a backup can be restored: the last time that somebody tried."""

from __future__ import annotations

from structures.models import RestoreTrial


def last_restore_trial() -> RestoreTrial | None:
    return RestoreTrial.objects.first()
