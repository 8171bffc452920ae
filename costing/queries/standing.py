"""What money says of a structure: its estimate, sanctions, contract and bills as facts of a move."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from datetime import date
from typing import TYPE_CHECKING, Any

from costing.models import (
    Bill,
    BillLine,
    Contract,
    Estimate,
    EstimateLine,
    Forecast,
    OptionPaper,
    Sanction,
)
from costing.price.money import gated
from structures.life.chain import content_digest
from structures.life.moves import Evidence
from structures.queries.season import clocks_of
from structures.queries.settings import settings_in_force

if TYPE_CHECKING:
    from collections.abc import Iterable
    from decimal import Decimal

    from structures.models import District, Structure

Kind = Sanction.Kind


@dataclass(frozen=True, slots=True)
class Standing:
    """The papers of money of one structure that count today; None is "there is none"."""

    estimate: Estimate | None
    technical: Sanction | None
    administrative: Sanction | None
    contract: Contract | None
    option: OptionPaper | None
    evidence: tuple[Evidence, ...]
    facts: dict[str, Any]


def standing_of(structure: Structure) -> Standing:
    """Read what counts today; a sanction of an older estimate is kept and counts no more."""
    site = structure.site
    estimate = (
        Estimate.objects.filter(site=site)
        .select_related("schedule", "asked_by", "design", "survey", "rock_line")
        .order_by("-version")
        .first()
    )
    technical = newest_sanction(structure, Kind.TECHNICAL)
    administrative = newest_sanction(structure, Kind.ADMINISTRATIVE)
    contract = structure.contracts.select_related("by").order_by("-version").first()
    option = structure.option_papers.select_related("decided_by").order_by("-version").first()
    evidence = tuple(_evidence(structure, estimate, technical, administrative, contract, option))
    facts = {
        **_of_the_estimate(structure, estimate),
        **_of_the_contract(contract),
        **_of_the_bills(structure),
        **_of_the_option(structure, option, technical, administrative),
        **_of_the_season(structure, estimate),
    }
    return Standing(estimate, technical, administrative, contract, option, evidence, facts)


def newest_sanction(structure: Structure, kind: str) -> Sanction | None:
    found = structure.sanctions.filter(kind=kind).select_related("by", "entry", "estimate")
    return found.order_by("-revision").first()


def limit_of(district: District, key: str) -> float | None:
    """Give a limit of power of the district office; None where none was entered."""
    return settings_in_force(district)[key].value


def within(amount: Decimal, limit: float | None) -> bool | None:
    """Tell whether an amount lies within a limit; None where there is no limit to compare with."""
    return None if limit is None else amount <= gated(limit)


def _evidence(
    structure: Structure,
    estimate: Estimate | None,
    technical: Sanction | None,
    administrative: Sanction | None,
    contract: Contract | None,
    option: OptionPaper | None,
) -> Iterable[Evidence]:
    if estimate is not None:
        by = "" if estimate.asked_by is None else estimate.asked_by.username
        yield Evidence("estimate", estimate.input_digest, by, estimate.frozen_at)
    if technical is not None and _of_this(technical, estimate):
        yield sanction_evidence(technical)
    if administrative is not None:
        yield sanction_evidence(administrative)
    if contract is not None:
        told = {"contract": [contract.number, contract.version, contract.signed_on.isoformat()]}
        yield Evidence("contract", content_digest(told), contract.by.username, contract.at)
    if option is not None and option.decided_by is not None:
        opener = "" if option.opened_by is None else option.opened_by.username
        yield Evidence("option-paper", option.digest, opener, option.decided_at)
    final = structure.bills.filter(kind=Bill.Kind.FINAL, state=Bill.State.DECIDED).first()
    if final is not None:
        told = {"bill": [final.number, final.currency, str(final.payable), final.account]}
        yield Evidence(
            "final-measurement", content_digest(told), final.made_by.username, final.decided_at
        )


def sanction_evidence(sanction: Sanction) -> Evidence:
    """Give a sanction as a move asks for it; one taken over from before has no entry."""
    told = {"sanction": [sanction.kind, sanction.revision, sanction.number, f"{sanction.amount:f}"]}
    digest = content_digest(told) if sanction.entry is None else sanction.entry.digest
    kind = "technical-sanction" if sanction.kind == Kind.TECHNICAL else "administrative-approval"
    return Evidence(kind, digest, sanction.by.username, sanction.at)


def _of_this(technical: Sanction, estimate: Estimate | None) -> bool:
    return technical.estimate_id is None or (
        estimate is not None and technical.estimate_id == estimate.pk
    )


def _of_the_estimate(structure: Structure, estimate: Estimate | None) -> dict[str, Any]:
    if estimate is None:
        return {}
    newest = structure.designs.order_by("-version").values_list("pk", flat=True).first()
    limit = limit_of(structure.site.watershed.district, "technical_sanction_limit")
    return {
        "estimate_of_this_design": estimate.design_id == newest,
        "typed_without_reason": (),  # every quantity of an estimate is the drawing's
        "schedule_ended_on": estimate.schedule.valid_to or date.max,
        "within_district_limit": None
        if estimate.sanction is None
        else within(estimate.sanction, limit),
    }


def _of_the_contract(contract: Contract | None) -> dict[str, Any]:
    if contract is None:
        return {}
    return {
        "safety_terms": bool(contract.safety_terms.strip()),
        "contractor_authority": contract.authority_paper_id is not None,
    }


def _of_the_bills(structure: Structure) -> dict[str, Any]:
    lines = list(
        BillLine.objects.filter(bill__structure=structure)
        .select_related("bill")
        .order_by("bill__billed_on", "order")
    )
    state = BillLine.State
    return {
        "lines_undecided": tuple(_named(one) for one in lines if one.state == state.OPEN),
        # That an entry is billed once and checked by another, the database itself insists on.
        "entries_billed_twice": (),
        "entries_checked_by_maker": (),
        "unpaid_lines": tuple(
            _named(one)
            for one in lines
            if one.state in (state.OPEN, state.HELD)
            or (one.state == state.PAID and one.bill.paid_on is None)
        ),
    }


def _named(line: BillLine) -> str:
    return f"line {line.order} of bill {line.bill.number}"


def _of_the_option(
    structure: Structure,
    option: OptionPaper | None,
    technical: Sanction | None,
    administrative: Sanction | None,
) -> dict[str, Any]:
    known: dict[str, Any] = {}
    if option is not None:
        known = {"cost_moves": True, "option_way": option.way}
    forecast = Forecast.objects.filter(structure=structure).order_by("-at").first()
    known["revisions_missing"] = _revisions(structure, forecast, option, technical, administrative)
    return known


def _of_the_season(structure: Structure, estimate: Estimate | None) -> dict[str, Any]:
    """Read the clock with the work of the estimate, where no season sheet says how long it takes."""
    work = {} if estimate is None else {structure.pk: work_of([estimate.pk])[estimate.pk]}
    last = clocks_of([structure], work)[structure.pk].last_opening_day
    return {} if last is None else {"last_opening_day": last}


def work_of(estimates: Iterable[int]) -> dict[int, dict[str, float | None]]:
    """Give the work of estimates by item, by their numbers; None where a lift is not known."""
    found: dict[int, dict[str, float | None]] = defaultdict(dict)
    lines = EstimateLine.objects.filter(estimate__in=estimates)
    for estimate, item, quantity in lines.values_list("estimate", "item", "quantity"):
        work = found[estimate]
        so_far = work.get(item, 0.0)
        known = quantity is not None and so_far is not None
        work[item] = so_far + float(quantity) if known else None
    return found


def _revisions(
    structure: Structure,
    forecast: Forecast | None,
    option: OptionPaper | None,
    technical: Sanction | None,
    administrative: Sanction | None,
) -> tuple[str, ...]:
    """Name what must be revised: given before the forecast, and passed by more than the setting.

    Once a way is decided its own cost counts: a step costs less than the forecast.
    """
    if forecast is None:
        return ()
    lines = settings_in_force(structure.site.watershed.district)
    over = (forecast.technical_excess_percent, forecast.administrative_excess_percent)
    if option is not None and option.way and option.forecast_id == forecast.pk:
        way = next(one for one in option.ways["ways"] if one["way"] == option.way)
        over = (way["technical_excess_percent"], way["administrative_excess_percent"])
    asked = (
        (over[0], "excess_technical_percent", technical),
        (over[1], "excess_administrative_percent", administrative),
    )
    words = ("revised technical sanction", "revised administrative approval")
    return tuple(
        word
        for (excess, key, given), word in zip(asked, words, strict=True)
        if excess is not None
        and excess > lines[key].value
        and (given is None or given.at < forecast.at)
    )
