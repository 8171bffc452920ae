"""Appraising a pack that was handed in without an account: looked at whole, then kept and run."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.conf import settings
from django.utils import timezone

from costing.price.rates import read_rates
from structures.intake.survey_pack import read_pack_bytes
from structures.runs.files import keep_bytes
from structures.runs.queue import start_run

if TYPE_CHECKING:
    from structures.models.run import Run

APPRAISAL: Final = "appraisal"
SUBJECT_MOST: Final = 120  # characters of a file's name that the run shows

Handed = tuple[str, bytes]  # name and content of a file


def start_appraisal(*, pack: Handed, rates: Handed | None) -> Run:
    """Start the run of a survey pack and, if given, a rate schedule.

    Raises
    ------
    Refused
        If either file cannot be used; nothing of it is kept.
    """
    read_pack_bytes(*pack)
    if rates is not None:
        read_rates(*rates, currency_default=settings.CURRENCY)
    params = {
        "pack": _kept(pack),
        "rates": None if rates is None else _kept(rates),
        "currency": settings.CURRENCY,
        "on": timezone.localdate().isoformat(),
    }
    return start_run(kind=APPRAISAL, params=params, subject=pack[0][:SUBJECT_MOST])


def _kept(handed: Handed) -> dict[str, str]:
    name, data = handed
    return {"name": name, "digest": keep_bytes(data)}
