"""Two forms of one record: an engineer says which counts and why; the other one stays beside it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final
from uuid import UUID, uuid5

from django.db import transaction
from django.utils import timezone

from structures.access import Act, insist
from structures.actions.parcels import carry_out
from structures.actions.refusals import blocking, refusal
from structures.actions.register import append
from structures.actions.trench import locked
from structures.errors import Refused
from structures.intake.field_records import KINDS, read_record
from structures.intake.parcel import read_parcel
from structures.models import Clash, FoundLevel, HoldPoint, PhoneRecord
from structures.queries.trench_day import zone_of

if TYPE_CHECKING:
    from structures.intake.parcel import Sent
    from structures.models import Structure, User

DECIDED: Final = "correction"
FIRST: Final = "first"
SECOND: Final = "second"


@transaction.atomic
def decide_clash(*, clash_id: int, counts: str, why: str, by: User) -> Clash:
    """Say which of two forms counts; what it changes is done at once and entered for good.

    Nothing is overwritten: the form that counts becomes a row that corrects the other's, or stands
    beside it; a hold point that waits to be seen takes the readings of the form that counts.

    Raises
    ------
    Refused
        If the user may not, no reason is given, it was decided before, or the form that should
        count cannot be kept.
    """
    owner = Clash.objects.values_list("record__site__structure", flat=True).get(pk=clash_id)
    structure = locked(owner)
    insist(by, Act.SETTLE_CLASH, structure)
    clash = Clash.objects.select_for_update(of=("self",)).select_related("record").get(pk=clash_id)
    record = PhoneRecord.objects.select_related("by").get(pk=clash.record_id)
    if clash.counts:
        raise Refused("This was decided before.", where="record", remedy="Look at the thread.")
    if counts not in (FIRST, SECOND) or not why.strip():
        what = "Which counts, and why?"
        raise Refused(what, where="why", remedy="Choose one and write the reason in a sentence.")
    _carry_through(clash, record, counts, structure)
    clash.counts, clash.why = counts, why.strip()
    clash.decided_by, clash.decided_at = by, timezone.now()
    clash.save()
    append(
        district=structure.site.watershed.district,
        by=by,
        act=DECIDED,
        subject=f"{KINDS[record.kind].title} of {structure.site.code}: the {counts} counts",
        structure=structure,
        content={
            "record": str(record.pk),
            "first": record.content,
            "second": clash.content,
            "counts": counts,
            "why": clash.why,
        },
    )
    return clash


def _carry_through(clash: Clash, record: PhoneRecord, counts: str, structure: Structure) -> None:
    other = _other_asking(clash, record)
    applied = record.outcome == PhoneRecord.Outcome.KEPT
    if other is not None:
        kept = PhoneRecord.Outcome.KEPT if counts == SECOND else PhoneRecord.Outcome.REFUSED
        PhoneRecord.objects.filter(pk=other.pk).update(outcome=kept)
    if counts == FIRST and (applied or other is not None):
        return
    content = record.content if counts == FIRST else clash.content
    maker = record.by if counts == FIRST or other is None else other.by
    if counts == SECOND and other is None and clash.by_id is not None:
        maker = clash.by
    sent = _as_sent(content, record.pk, structure)
    if record.kind == "hold-asked" and (applied or other is not None):
        _replace_asking(_asking(record, other, structure), sent, maker)
    else:
        _do(sent, record, structure, maker, applied=applied, clash=clash)
    if not applied and other is None:
        PhoneRecord.objects.filter(pk=record.pk).update(outcome=PhoneRecord.Outcome.KEPT)


def _do(
    sent: Sent,
    record: PhoneRecord,
    structure: Structure,
    maker: User,
    *,
    applied: bool,
    clash: Clash,
) -> None:
    values = _values(sent)
    row_id = uuid5(record.pk, clash.digest) if applied else record.pk
    corrects = None
    if applied and record.kind == "found-level":
        corrects = FoundLevel.objects.filter(pk=record.pk).first()
    if applied and record.kind == "incident":
        values["adds_to_id"] = record.pk
    carry_out(sent, values, structure, row_id=row_id, by=maker, corrects=corrects)


def _other_asking(clash: Clash, record: PhoneRecord) -> PhoneRecord | None:
    """Give the second asking for one hold point, where that is what clashes."""
    name = clash.content.get("id")
    return (
        None if name is None else PhoneRecord.objects.filter(pk=name, site=record.site_id).first()
    )


def _asking(record: PhoneRecord, other: PhoneRecord | None, structure: Structure) -> HoldPoint:
    found = HoldPoint.objects.filter(pk=record.pk, strip__structure=structure).first()
    if found is None and other is not None:
        found = HoldPoint.objects.filter(
            strip__structure=structure,
            strip__number=other.content.get("strip"),
            hold=other.content.get("hold"),
            seen_at__isnull=True,
        ).first()
    if found is None or found.seen_at is not None:
        raise Refused(
            "The hold point was seen as it was first asked for.",
            where="hold",
            remedy="Let the first count; what changed since is asked for anew.",
        )
    return found


def _replace_asking(hold: HoldPoint, sent: Sent, maker: User) -> None:
    values = _values(sent)
    if values["hold"] != hold.hold or sent.strip != hold.strip.number:
        what = f"The second form asks for {values['hold']} of strip {sent.strip}."
        raise Refused(what, where="hold", remedy="Let the first count and ask for the other anew.")
    hold.readings = {key: one for key, one in values.items() if key != "hold" and one is not None}
    hold.asked_by = maker
    hold.save(update_fields=["readings", "asked_by"])
    hold.photos.add(*hold.strip.structure.site.photos.filter(pk__in=sent.photos))


def _as_sent(content: dict[str, Any], name: UUID, structure: Structure) -> Sent:
    one = {**content, "id": str(name)}
    return read_parcel({"records": [one]}, zone_of(structure)).records[0]


def _values(sent: Sent) -> dict[str, Any]:
    kind = KINDS.get(sent.kind)
    if kind is None:
        raise Refused("The second form is no record known here.", remedy="Let the first count.")
    values, findings = read_record(kind, sent.values, kind.title)
    findings = (*sent.findings, *findings)
    if blocking(findings):
        raise refusal(findings, "record")
    return values
