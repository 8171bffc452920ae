"""Complaints: written down as they were said, answered with what was measured, closed by somebody."""

from __future__ import annotations

from dataclasses import asdict
from typing import TYPE_CHECKING, Any

from django.db import transaction

from structures.access import Act, insist
from structures.actions.refusals import refusal
from structures.actions.register import append
from structures.errors import Finding, Refused
from structures.models import Complaint, ComplaintAnswer, Site, Well
from structures.queries.complaints import look_into
from structures.queries.districts import today_of

if TYPE_CHECKING:
    from datetime import date

    from structures.models import User


@transaction.atomic
def take_complaint(
    *, site_id: int, received_on: date, from_whom: str, text: str, by: User, well: str = ""
) -> Complaint:
    """Write a complaint down; of people only their kind is kept ("farmer, east bank").

    Raises
    ------
    Refused
        If a field is missing, the day is still to come, or there is no such well.
    """
    # The site's row locks its complaints: two do not take one number.
    site = (
        Site.objects.select_for_update(of=("self",))
        .select_related("watershed__district")
        .get(pk=site_id)
    )
    insist(by, Act.HEAR_COMPLAINT, site)
    said = {"from_whom": from_whom.strip(), "text": text.strip()}
    found = [
        Finding(site.code, key, "This is missing.", "Write it as it was said.")
        for key, value in said.items()
        if not value
    ]
    if received_on > today_of(site.watershed.district):
        what = "That day is still to come."
        found.append(Finding(site.code, "received_on", what, "When did it come?"))
    named = None
    if well.strip():
        named = Well.objects.filter(watershed=site.watershed, code=well.strip()).first()
        if named is None:
            what = f"There is no well {well.strip()} here."
            found.append(Finding(site.code, "well", what, "Look at its code, or leave it out."))
    if found:
        raise refusal(found, "complaint")
    return Complaint.objects.create(
        site=site,
        code=_next_code(site, received_on),
        received_on=received_on,
        well=named,
        by=by,
        **said,
    )


@transaction.atomic
def answer_complaint(
    *, complaint_id: int, text: str, by: User, closes: bool = False, since: date | None = None
) -> ComplaintAnswer:
    """Answer a complaint; what the readings said that day stands with the answer.

    Raises
    ------
    Refused
        If the answer is empty or the complaint is closed.
    """
    complaint = Complaint.objects.select_related("site__watershed__district", "well").get(
        pk=complaint_id
    )
    Site.objects.select_for_update().get(pk=complaint.site_id)
    insist(by, Act.HEAR_COMPLAINT, complaint.site)
    if not text.strip():
        raise Refused("This is missing.", where="text", remedy="Write the answer.")
    if complaint.answers.filter(closes=True).exists():
        raise Refused(
            "This complaint is closed.", where=complaint.code, remedy="Take in a new one."
        )
    looked = look_into(complaint, since)
    evidence: dict[str, Any] = {
        "since": None if looked.since is None else looked.since.isoformat(),
        "completed": None if looked.completed is None else looked.completed.isoformat(),
        "sentences": list(looked.sentences),
    }
    if looked.explained is not None:
        found = looked.explained
        evidence |= {
            "change_m": found.change_m,
            "rain": asdict(found.rain),
            "mark_m": found.mark_m,
            "rest": asdict(found.rest),
        }
    entry = append(
        district=complaint.site.watershed.district,
        by=by,
        act="complaint answered",
        subject=f"{complaint.code}, {complaint.site.code}",
        content={"complaint": complaint.code, "closes": closes, "text": text.strip()},
        structure=complaint.site.structure,
    )
    return ComplaintAnswer.objects.create(
        complaint=complaint,
        text=text.strip(),
        evidence=evidence,
        closes=closes,
        by=by,
        entry=entry,
    )


def _next_code(site: Site, on: date) -> str:
    stem = f"C-{site.code}-{on.year}-"
    taken = set(Complaint.objects.filter(code__startswith=stem).values_list("code", flat=True))
    number = len(taken) + 1
    while f"{stem}{number}" in taken:
        number += 1
    return f"{stem}{number}"
