"""Sanction, approval, sending back and refusal: two acts with their limits, and two ways to say no."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.db.models import Max

from costing.actions.approval_checks import (
    APPROVED,
    ASKS,
    REFUSED,
    SANCTIONED,
    is_revision,
    judge_drawing,
    judge_estimate,
    judge_limit,
    judge_line,
    judge_technical,
    judge_terms,
)
from costing.actions.estimate import frozen_content
from costing.actions.moves import move
from costing.models import Estimate, MoneyLine, Sanction
from costing.queries.standing import newest_sanction, standing_of
from structures.access import Act, insist
from structures.actions.refusals import refusal
from structures.actions.register import append
from structures.actions.second_factor import insist_given
from structures.actions.stage import locked
from structures.errors import Refused
from structures.models import Entry, Photo
from structures.queries.delegation import delegator_of
from structures.queries.districts import today_of

if TYPE_CHECKING:
    from collections.abc import Mapping
    from datetime import date, datetime
    from decimal import Decimal
    from uuid import UUID

    from structures.models import Structure, User

REDRAWN_FROM: Final = "flow-judged"  # a refused drawing is not asked for again: another is drawn


@dataclass(frozen=True, slots=True)
class Terms:
    """What is written on a sanction or an approval; `why` is asked for where one is revised."""

    number: str
    valid_to: date
    conditions: str = ""
    why: str = ""


@dataclass(frozen=True, slots=True)
class Funding:
    """Who pays how much: the money line, and the photo of the sheet that its funder signed."""

    money_line_id: int
    amount: Decimal
    signed_sheet: UUID


@transaction.atomic
def sanction(
    *,
    structure_id: int,
    estimate_id: int,
    terms: Terms,
    by: User,
    signed_in_at: datetime | None,
    factor_given_at: datetime | None = None,
) -> Sanction:
    """Give technical sanction of an estimate, or a revised one where it was given before.

    Parameters
    ----------
    estimate_id
        The estimate that was looked at; a newer one makes the act void.
    signed_in_at
        When the person signed in to the session by which this is given; None for a device's token.
    factor_given_at
        When a one-time code was last given in that session; None where none was.

    Raises
    ------
    Refused
        If it was not given in a session, the user may not, the amount is over their limit, it is
        their own work, or the estimate cannot be sanctioned; `findings` says why.
    """
    structure = _opened(structure_id, Act.SANCTION, by, signed_in_at)
    _insist_factor(structure, by, factor_given_at)
    estimate = _newest(structure, estimate_id)
    before = newest_sanction(structure, Sanction.Kind.TECHNICAL)
    revised = is_revision(structure, SANCTIONED, before)
    found = [
        *judge_estimate(structure, estimate, by),
        *judge_terms(structure, terms, Sanction.Kind.TECHNICAL, revised=revised),
        *judge_limit(structure, SANCTIONED, estimate.sanction, by),
        *(judge_drawing(structure) if revised else ()),
    ]
    if found:
        raise refusal(found, SANCTIONED)
    content = {
        **frozen_content(estimate),
        **_given(structure, Act.SANCTION, by, signed_in_at),
        "amount": f"{estimate.sanction:f}",
    }
    values = {
        "amount": estimate.sanction,
        "currency": estimate.currency,
        "estimate": estimate,
    }
    given = _write(structure, Sanction.Kind.TECHNICAL, terms, content, by, values)
    if not revised:
        move(structure_id=structure.pk, to="sanctioned", by=by)
    return given


@transaction.atomic
def approve(
    *,
    structure_id: int,
    sanction_id: int,
    funding: Funding,
    terms: Terms,
    by: User,
    signed_in_at: datetime | None,
    factor_given_at: datetime | None = None,
) -> Sanction:
    """Give administrative approval of an amount from a money line, or a revised one.

    Parameters
    ----------
    sanction_id
        The technical sanction that was looked at.

    Raises
    ------
    Refused
        As for `sanction`; and if the line is too small, over or of another currency, or the amount
        is below the technical sanction.
    """
    structure = _opened(structure_id, Act.APPROVE, by, signed_in_at)
    _insist_factor(structure, by, factor_given_at)
    technical = newest_sanction(structure, Sanction.Kind.TECHNICAL)
    if technical is None or technical.pk != sanction_id:
        raise Refused(
            "This is not the technical sanction in force.",
            where=structure.site.code,
            remedy="Look at the decision sheet again.",
        )
    # The line's row locks what is promised from it: two approvals cannot take the same money.
    line = MoneyLine.objects.select_for_update().get(
        pk=funding.money_line_id, district=structure.site.watershed.district
    )
    before = newest_sanction(structure, Sanction.Kind.ADMINISTRATIVE)
    revised = is_revision(structure, APPROVED, before)
    found = [
        *judge_terms(structure, terms, Sanction.Kind.ADMINISTRATIVE, revised=revised),
        *judge_technical(structure, technical, funding.amount),
        *judge_line(structure, line, funding.amount, technical),
        *judge_limit(structure, APPROVED, funding.amount, by),
    ]
    if found:
        raise refusal(found, APPROVED)
    scan = Photo.objects.get(pk=funding.signed_sheet, site=structure.site_id)
    content = {
        **_given(structure, Act.APPROVE, by, signed_in_at),
        "currency": technical.currency,
        "amount": f"{funding.amount:f}",
        "technical_sanction": [technical.number, technical.revision, f"{technical.amount:f}"],
        "money_line": [line.code, line.funder],
        "signed_sheet": scan.sha256,
    }
    values = {"amount": funding.amount, "currency": technical.currency, "money_line": line}
    given = _write(structure, Sanction.Kind.ADMINISTRATIVE, terms, content, by, values)
    if not revised:
        known = {"money_line_covers": True, "approval_below_technical": False}
        move(structure_id=structure.pk, to="approved", by=by, known=known)
    return given


@transaction.atomic
def send_back(
    *, structure_id: int, to: str, reason: str, by: User, signed_in_at: datetime | None
) -> None:
    """Send a structure back to an earlier stage; what was sent stays in the thread.

    Raises
    ------
    Refused
        If no reason is given or the way does not lead there.
    """
    structure = _opened(structure_id, Act.SANCTION, by, signed_in_at)
    move(structure_id=structure.pk, to=to, by=by, reason=reason)


@transaction.atomic
def refuse(
    *,
    structure_id: int,
    estimate_id: int,
    reason: str,
    by: User,
    signed_in_at: datetime | None,
    factor_given_at: datetime | None = None,
) -> Entry:
    """Refuse the estimate that waits: it is never sanctioned; the wall is drawn anew or set aside.

    Raises
    ------
    Refused
        If nothing waits for a decision, or no reason is given.
    """
    structure = _opened(structure_id, Act.SANCTION, by, signed_in_at)
    _insist_factor(structure, by, factor_given_at)
    if structure.stage not in ASKS.values():
        raise Refused(
            f"{structure.site.code} waits for no sanction and no approval.",
            remedy="Send it back, or halt it.",
        )
    estimate = _newest(structure, estimate_id)
    entry = append(
        district=structure.site.watershed.district,
        by=by,
        act=REFUSED,
        subject=f"estimate {estimate.version} of {structure.site.code}",
        structure=structure,
        content={
            **frozen_content(estimate),
            **_given(structure, Act.SANCTION, by, signed_in_at),
            "reason": reason.strip(),
        },
    )
    move(structure_id=structure.pk, to=REDRAWN_FROM, by=by, reason=reason)
    return entry


def _opened(structure_id: int, act: Act, by: User, signed_in_at: datetime | None) -> Structure:
    """Lock the structure for a decision that a person gives in a session."""
    structure = locked(structure_id)
    if signed_in_at is None:
        raise Refused(
            "A device's token decides nothing.", remedy="Sign in on the page and decide there."
        )
    insist(by, act, structure)
    return structure


def _insist_factor(structure: Structure, by: User, given_at: datetime | None) -> None:
    insist_given(by=by, district=structure.site.watershed.district, given_at=given_at)


def _newest(structure: Structure, estimate_id: int) -> Estimate:
    newest = standing_of(structure).estimate
    if newest is None or newest.pk != estimate_id:
        raise Refused(
            "There is no estimate to decide on."
            if newest is None
            else f"Estimate {newest.version} came since.",
            where=structure.site.code,
            remedy="Look at the decision sheet again.",
        )
    return newest


def _given(structure: Structure, act: Act, by: User, signed_in_at: datetime) -> dict[str, Any]:
    """Say by which session it was given, and in whose name if not in the user's own."""
    instead_of = delegator_of(by, act, structure)
    said = {"signed_in_at": signed_in_at.isoformat(timespec="seconds")}
    return said if instead_of is None else said | {"instead_of": instead_of.username}


def _write(
    structure: Structure,
    kind: Sanction.Kind,
    terms: Terms,
    content: Mapping[str, Any],
    by: User,
    values: Mapping[str, Any],
) -> Sanction:
    """Write the register's entry and the sanction that rests on it, as the next revision."""
    newest = structure.sanctions.filter(kind=kind).aggregate(newest=Max("revision"))["newest"]
    revision = 0 if newest is None else newest + 1
    number, district = terms.number.strip(), structure.site.watershed.district
    entry = append(
        district=district,
        by=by,
        act=kind.label,
        subject=f"{'revised ' if revision else ''}{kind.label} {number} of {structure.site.code}",
        structure=structure,
        content={
            **content,
            "number": number,
            "revision": revision,
            "valid_to": terms.valid_to.isoformat(),
            "conditions": terms.conditions.strip(),
            "why_revised": terms.why.strip() if revision else "",
        },
    )
    return Sanction.objects.create(
        structure=structure,
        kind=kind,
        revision=revision,
        number=number,
        day=today_of(district),
        valid_to=terms.valid_to,
        conditions=terms.conditions.strip(),
        by=by,
        entry=entry,
        **values,
    )
