"""Bringing a rate schedule in: what it would change first, then kept as the next version."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import TYPE_CHECKING, Any

from django.db import transaction
from django.db.models import Max

from costing.models import Rate, RateComponent, RateSchedule
from costing.price.analysis import OVERHEAD_PROFIT, analyse_rate
from costing.price.money import gated
from costing.price.rates import read_rates
from costing.queries.schedules import RateChange, differences, schedule_record
from structures.access import Act, insist
from structures.actions.inbox import mark_kept, receive_file, refuse_same_file, told_of
from structures.actions.refusals import as_documents, refusal
from structures.errors import Finding, Refused
from structures.intake.defaults import MONEY
from structures.models import District, Upload
from structures.queries.settings import settings_in_force
from structures.runs.book import input_digest

if TYPE_CHECKING:
    from decimal import Decimal

    from costing.price import rates
    from structures.models import User

Components = "Mapping[tuple[str, float | None], tuple[Component, ...]]"


@dataclass(frozen=True, slots=True)
class ScheduleRead:
    """A schedule as it was read, the one it follows (None: the first), and what differs."""

    schedule: rates.RateSchedule
    newest: RateSchedule | None
    changes: tuple[RateChange, ...]
    digest: str


def preview_schedule(*, district_id: int, name: str, data: bytes, by: User) -> ScheduleRead:
    """Read a schedule as `import_schedule` would, and keep nothing.

    Raises
    ------
    Refused
        If it could not be kept; `findings` names each line and field.
    """
    district = District.objects.get(pk=district_id)
    insist(by, Act.IMPORT_SCHEDULE, district)
    refuse_same_file(kind=Upload.Kind.RATES, name=name, data=data, district=district, by=by)
    return _read(district, name, data)


def import_schedule(
    *,
    district_id: int,
    name: str,
    data: bytes,
    by: User,
    components: Components | None = None,
) -> RateSchedule:
    """Keep a schedule as the next version of its code.

    Parameters
    ----------
    components
        Where rates come from, by item and lift; they must give the rate of the schedule.

    Raises
    ------
    Refused
        If it cannot be used, is the same as the newest, its currency is not the district's, or an
        analysis gives another rate; nothing is added.
    """
    district = District.objects.get(pk=district_id)
    upload = receive_file(kind=Upload.Kind.RATES, name=name, data=data, owner=district, by=by)
    with told_of(upload), transaction.atomic():
        # The district row locks its schedules: two of them cannot take one version.
        District.objects.select_for_update().get(pk=district_id)
        refuse_same_file(kind=upload.kind, name=upload.name, data=data, district=district, by=by)
        read = _read(district, upload.name, data)
        if read.newest is not None and read.newest.digest == read.digest:
            raise Refused(
                f"These rates are those of {read.newest}. Nothing was added.",
                where=upload.name,
                remedy="Send the schedule that is new.",
            )
        if components:
            set_percent = settings_in_force(district)[OVERHEAD_PROFIT.key].value
            _check_analyses(read.schedule, components, gated(set_percent))
        rows = len(read.schedule.rates)
        mark_kept(upload, rows=rows, findings=read.schedule.findings)
        return _keep(read, upload, components or {}, by)


def _read(district: District, name: str, data: bytes) -> ScheduleRead:
    percents = {
        key: line.value for key, line in settings_in_force(district).items() if key in MONEY
    }
    schedule = read_rates(name, data, currency_default=district.currency, percents_set=percents)
    if schedule.currency != district.currency:
        what = f"The rates are in {schedule.currency}, the district counts in {district.currency}."
        finding = Finding(
            name, "currency", what, f"Give rates in {district.currency}.", rule="ES-05"
        )
        raise refusal([finding], "rate schedule")
    versions = RateSchedule.objects.filter(district=district, code=schedule.schedule_id)
    newest = versions.prefetch_related("rates").order_by("-version").first()
    before = None if newest is None else schedule_record(newest)
    return ScheduleRead(schedule, newest, differences(before, schedule), _digest(schedule))


def _digest(schedule: rates.RateSchedule) -> str:
    """Digest of what prices: not of words, findings or the file it came in."""
    return input_digest(_plain(schedule))


def _plain(schedule: rates.RateSchedule) -> dict[str, Any]:
    days = {key: getattr(schedule, key) for key in ("valid_from", "valid_to")}
    return {
        "currency": schedule.currency,
        "rates": sorted(
            [one.item, -1.0 if one.from_m is None else one.from_m, f"{one.rate:f}"]
            for one in schedule.rates
        ),
        "contingency_percent": f"{schedule.contingency_percent.normalize():f}",
        "overhead_percent": f"{schedule.overhead_percent.normalize():f}",
        **{key: None if day is None else day.isoformat() for key, day in days.items()},
    }


def _check_analyses(
    schedule: rates.RateSchedule, components: Components, overhead_profit_percent: Decimal
) -> None:
    priced = {(one.item, one.from_m): one.rate for one in schedule.rates}
    found = []
    for (item, from_m), parts in components.items():
        rate = priced.get((item, from_m))
        made = analyse_rate(parts, overhead_profit_percent=overhead_profit_percent).rate
        if rate is None:
            what, remedy = (
                "There is no such rate in the schedule.",
                "Add the rate, or leave it out.",
            )
        elif made != rate:
            what = f"The analysis gives {made}, the schedule says {rate}."
            remedy = "Put one of them right."
        else:
            continue
        found.append(Finding("rate analysis", item, what, remedy))
    if found:
        raise refusal(found, "rate analysis")


def _keep(read: ScheduleRead, upload: Upload, components: Components, by: User) -> RateSchedule:
    schedule = read.schedule
    versions = RateSchedule.objects.filter(district=upload.district, code=schedule.schedule_id)
    newest = versions.aggregate(newest=Max("version"))["newest"] or 0
    kept = RateSchedule.objects.create(
        district=upload.district,
        code=schedule.schedule_id,
        version=newest + 1,
        currency=schedule.currency,
        valid_from=schedule.valid_from,
        valid_to=schedule.valid_to,
        contingency_percent=schedule.contingency_percent,
        overhead_percent=schedule.overhead_percent,
        upload=upload,
        digest=read.digest,
        findings=as_documents(schedule.findings),
        notes=[asdict(note) for note in schedule.notes],
        by=by,
    )
    rows = Rate.objects.bulk_create(
        Rate(
            schedule=kept,
            order=order,
            item=one.item,
            from_m=one.from_m,
            unit=one.unit,
            rate=one.rate,
            description=one.description or "",
        )
        for order, one in enumerate(schedule.rates, start=1)
    )
    RateComponent.objects.bulk_create(
        RateComponent(
            rate=row,
            order=order,
            words=part.words,
            kind=part.kind,
            quantity=part.quantity,
            unit_rate=part.rate,
        )
        for row in rows
        for order, part in enumerate(components.get((row.item, row.from_m), ()), start=1)
    )
    return kept
