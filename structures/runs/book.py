"""The book of runs: every write to a Run, each one conditional on who holds it."""

from __future__ import annotations

import hashlib
import json
from dataclasses import dataclass
from datetime import timedelta
from typing import TYPE_CHECKING, Any

from django.conf import settings
from django.db import IntegrityError, transaction
from django.db.models import F, Q
from django.utils import timezone

from structures.models.run import Run

if TYPE_CHECKING:
    from collections.abc import Callable
    from uuid import UUID

    from structures.models.people import User


class Superseded(Exception):  # noqa: N818 -- says what happened, not that something broke
    """Another worker has taken this run over, or somebody ended it; what we found is dropped."""


class CancelAsked(Exception):  # noqa: N818 -- a wish of a person
    """Somebody asked for this run to stop."""


@dataclass(frozen=True, slots=True)
class Claim:
    """The right to write to a run as long as nobody else has claimed it since."""

    run_id: UUID
    fence: int
    kind: str
    params: dict[str, Any]

    def rows(self) -> Any:
        return Run.objects.filter(pk=self.run_id, fence=self.fence, state=Run.State.RUNNING)


def input_digest(params: dict[str, Any]) -> str:
    text = json.dumps(params, sort_keys=True, ensure_ascii=False, allow_nan=False)
    return hashlib.sha256(text.encode()).hexdigest()


def open_run(
    *, kind: str, version: str, params: dict[str, Any], subject: str, asked_by: User | None
) -> tuple[Run, bool]:
    """Open a run, or give the one that computes or has computed the same."""
    same = {"kind": kind, "version": version, "digest": input_digest(params)}
    counted = Run.objects.filter(**same, state__in=(*Run.GOING, Run.State.DONE))
    found = counted.first()
    if found is not None:
        return found, False
    try:
        with transaction.atomic():
            return Run.objects.create(
                **same, params=params, subject=subject, asked_by=asked_by
            ), True
    except IntegrityError:  # asked twice at the same moment
        return counted.get(), False


def claim(run_id: UUID) -> Claim | None:
    """Take a run that waits, or whose worker went silent; None where another has it."""
    now = timezone.now()
    free = Q(state=Run.State.QUEUED) | Q(state=Run.State.RUNNING, lease_until__lt=now)
    with transaction.atomic():
        taken = Run.objects.filter(free, pk=run_id, attempts__lt=settings.RUN_ATTEMPTS).update(
            state=Run.State.RUNNING,
            attempts=F("attempts") + 1,
            fence=F("fence") + 1,
            lease_until=now + _lease(),
            started_at=now,
            message="",
        )
        if not taken:
            return None
        run = Run.objects.only("fence", "kind", "params").get(pk=run_id)
        return Claim(run.pk, run.fence, run.kind, run.params)


def renew(held: Claim) -> bool:
    return bool(held.rows().update(lease_until=timezone.now() + _lease()))


def note_progress(held: Claim, share: float, message: str) -> None:
    """Write how far the run is, and learn whether it is still wanted.

    Raises
    ------
    Superseded
        If another worker has taken the run over.
    CancelAsked
        If somebody asked for it to stop.
    """
    written = held.rows().update(
        progress=min(max(share, 0.0), 1.0), message=message, lease_until=timezone.now() + _lease()
    )
    if not written:
        raise Superseded
    if held.rows().filter(cancel_asked=True).exists():
        raise CancelAsked


def finish(held: Claim, result: dict[str, Any], effect: Callable[[], None] | None) -> None:
    """Write result and effect in one transaction, or neither.

    Raises
    ------
    Superseded
        If another worker has taken the run over; the effect is not done.
    """
    with transaction.atomic():
        written = held.rows().update(
            state=Run.State.DONE,
            result=result,
            progress=1.0,
            message="",
            lease_until=None,
            finished_at=timezone.now(),
        )
        if not written:
            raise Superseded
        if effect is not None:
            effect()


def fail(held: Claim, message: str) -> None:
    _end(held, Run.State.FAILED, message)


def stop(held: Claim) -> None:
    _end(held, Run.State.CANCELLED, "Stopped as asked; nothing was kept.")


def ask_cancel(run_id: UUID) -> None:
    """Ask a run to stop: one that waits ends at once, one at work at its next step."""
    waiting = Run.objects.filter(pk=run_id, state=Run.State.QUEUED)
    ended = waiting.update(
        state=Run.State.CANCELLED, message="Cancelled before it began.", finished_at=timezone.now()
    )
    if not ended:
        Run.objects.filter(pk=run_id, state=Run.State.RUNNING).update(cancel_asked=True)


def waiting_too_long() -> list[UUID]:
    """Runs whose message or worker was lost; each is given to one caller only."""
    now = timezone.now()
    overdue = now - timedelta(seconds=settings.RUN_RESEND_SECONDS)
    unsent = Q(sent_at__isnull=True, created_at__lt=overdue) | Q(sent_at__lt=overdue)
    lost = Q(state=Run.State.QUEUED) & unsent
    silent = Q(state=Run.State.RUNNING, lease_until__lt=now) & unsent
    found = Run.objects.filter(lost | silent).values_list("pk", flat=True)[:500]
    return [pk for pk in found if Run.objects.filter(lost | silent, pk=pk).update(sent_at=now)]


def give_up_worn_out() -> int:
    """Fail the runs that took their worker down too often."""
    return Run.objects.filter(
        state=Run.State.RUNNING,
        lease_until__lt=timezone.now(),
        attempts__gte=settings.RUN_ATTEMPTS,
    ).update(
        state=Run.State.FAILED,
        message=f"The worker stopped {settings.RUN_ATTEMPTS} times while at it. Look at its log.",
        lease_until=None,
        finished_at=timezone.now(),
    )


def _end(held: Claim, state: Run.State, message: str) -> None:
    held.rows().update(state=state, message=message, lease_until=None, finished_at=timezone.now())


def _lease() -> timedelta:
    return timedelta(seconds=settings.RUN_LEASE_SECONDS)
