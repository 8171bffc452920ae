"""One decision with all it rests on: drawing, estimate, what changed, whom it touches below."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from costing.models import Estimate, Sanction
from costing.price.money import gated
from costing.price.revision import exceeds
from costing.queries.changes import line_changes, sum_changes
from costing.queries.decisions import WAITS, quantities_of, waiting_structures
from costing.queries.money_lines import LineSheet, money_line_sheets
from costing.queries.standing import limit_of, standing_of, within
from structures import access
from structures.access import Act, may
from structures.life.people import PROGRAMME
from structures.life.stages import LINE
from structures.queries.delegation import delegator_of
from structures.queries.districts import today_of
from structures.queries.evidence import records_of
from structures.queries.season import clocks_of
from structures.queries.settings import settings_in_force

if TYPE_CHECKING:
    from decimal import Decimal

    from django.db.models import QuerySet

    from costing.queries.changes import Change
    from structures.life.season import Clock
    from structures.models import Design, Structure, User

EARLIER_MOST = 8  # stages to which a decision may send back, nearest first


@dataclass(frozen=True, slots=True)
class Excess:
    """How far the newest estimate lies over a sum that was given, and the percentage allowed."""

    what: str
    given: Decimal
    percent: float
    allowed: float
    over: bool


@dataclass(frozen=True, slots=True)
class DecisionSheet:
    """What the page of one decision shows; None is "there is none"."""

    structure: Structure
    what: str
    days: int
    clock: Clock
    estimate: Estimate | None
    design: Design | None
    technical: Sanction | None
    administrative: Sanction | None
    before: Estimate | None
    changes: tuple[Change, ...]
    sums: tuple[Change, ...]
    excesses: tuple[Excess, ...]
    minutes: tuple[dict[str, Any], ...]
    money_lines: tuple[LineSheet, ...]
    limit: float | None
    within_limit: bool | None
    acts: tuple[str, ...]
    earlier: tuple[str, ...]
    revises: bool
    instead_of: str
    own_work: bool


def decision_sheet(user: User, structure: Structure) -> DecisionSheet:
    """Read one decision whole; which acts it offers depends on stage, role and limit."""
    standing, records = standing_of(structure), records_of(structure)
    estimate = (
        None
        if standing.estimate is None
        else Estimate.objects.select_related(
            "run", "design", "schedule", "survey", "rock_line", "asked_by"
        ).get(pk=standing.estimate.pk)
    )
    what, key = WAITS.get(structure.stage, ("", "technical_sanction_limit"))
    amount = _amount(structure, estimate, standing.technical)
    district = structure.site.watershed.district
    limit = limit_of(district, key)
    before = _before(structure, estimate, standing.technical)
    excesses = tuple(_excesses(structure, estimate, standing))
    revises = structure.stage not in WAITS and any(one.over for one in excesses)
    lender = delegator_of(user, Act.SANCTION, structure)
    return DecisionSheet(
        structure=structure,
        what=what,
        days=(today_of(district) - structure.since).days,
        clock=_clock(user, structure),
        estimate=estimate,
        design=records.design,
        technical=standing.technical,
        administrative=standing.administrative,
        before=before,
        changes=() if before is None else tuple(line_changes(before, estimate)),
        sums=() if before is None else tuple(sum_changes(before, estimate)),
        excesses=excesses,
        minutes=tuple(one.content for one in records.papers if one.kind == "hearing"),
        money_lines=tuple(
            one for one in money_line_sheets(user) if one.line.district_id == district.pk
        ),
        limit=limit,
        within_limit=None if amount is None else within(amount, limit),
        acts=_acts(user, structure, revises=revises, inside=amount and within(amount, limit)),
        earlier=_earlier(structure.stage),
        revises=revises,
        instead_of="" if lender is None else lender.username,
        own_work=estimate is not None and estimate.asked_by_id == user.pk,
    )


def visible_sanctions(user: User) -> QuerySet[Sanction]:
    found = Sanction.objects.filter(structure__site__in=access.sites(user, Act.SEE_MONEY))
    return found.select_related(
        "structure__site__watershed__district", "estimate__design", "money_line", "by", "entry"
    ).order_by("structure__site__code", "kind", "-revision")


def _amount(
    structure: Structure, estimate: Estimate | None, technical: Sanction | None
) -> Decimal | None:
    if structure.stage == "sanctioned":
        return None if technical is None else technical.amount
    return None if estimate is None else estimate.sanction


def _before(
    structure: Structure, estimate: Estimate | None, technical: Sanction | None
) -> Estimate | None:
    """Give the version to compare with: the one sanctioned last, else the one before."""
    if estimate is None:
        return None
    if technical is not None and technical.estimate_id not in (None, estimate.pk):
        return technical.estimate
    older = Estimate.objects.filter(site=structure.site, version__lt=estimate.version)
    return older.select_related("schedule", "survey").order_by("-version").first()


def _excesses(structure: Structure, estimate: Estimate | None, standing: Any) -> list[Excess]:
    if estimate is None or estimate.sanction is None:
        return []
    lines = settings_in_force(structure.site.watershed.district)
    asked = (
        ("technical sanction", standing.technical, "excess_technical_percent"),
        ("administrative approval", standing.administrative, "excess_administrative_percent"),
    )
    return [
        Excess(
            what,
            given.amount,
            float((estimate.sanction - given.amount) / given.amount * 100),
            lines[key].value,
            over=exceeds(given.amount, estimate.sanction, gated(lines[key].value)),
        )
        for what, given, key in asked
        if given is not None and given.estimate_id != estimate.pk
    ]


def _clock(user: User, structure: Structure) -> Clock:
    rows = list(waiting_structures(user, every=True).filter(pk=structure.pk))
    return clocks_of(rows, quantities_of(rows))[structure.pk]


def _acts(user: User, structure: Structure, *, revises: bool, inside: Any) -> tuple[str, ...]:
    """Name the acts that the reader may try; whether each holds is judged when it is given."""
    roles = access.roles(user, access.place_of(structure))
    if not may(user, Act.SANCTION, structure):
        return ()
    decides = PROGRAMME in roles or bool(inside)
    back = ("send-back",)
    if structure.stage == "heard":
        return (*(("sanction",) if decides else ()), *back, "refuse")
    if structure.stage == "sanctioned":
        return (*(("approve",) if decides else ()), *back, "refuse")
    return ("sanction", "approve") if revises else ()


def _earlier(stage: str) -> tuple[str, ...]:
    if stage not in LINE:
        return ()
    return LINE[: LINE.index(stage)][::-1][:EARLIER_MOST]
