"""What stands against a sanction or an approval: each in a sentence with what to do."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from costing.models import Sanction
from costing.queries.money_lines import left_on
from costing.queries.standing import limit_of, standing_of, within
from structures.access import place_of, roles
from structures.errors import Finding, Refused
from structures.life.blocks import BLOCKS
from structures.life.people import DISTRICT, PROGRAMME
from structures.life.stages import HALTED, LINE, before
from structures.models import Entry
from structures.queries.districts import today_of
from structures.queries.evidence import records_of, settle

if TYPE_CHECKING:
    from decimal import Decimal

    from costing.actions.approval import Terms
    from costing.models import Estimate, MoneyLine
    from structures.models import Structure, User

SANCTIONED: Final = "technical sanction"
APPROVED: Final = "administrative approval"
REFUSED: Final = "refused"
ASKS: Final = {SANCTIONED: "heard", APPROVED: "sanctioned"}  # the stage that waits for the act
OF_THE_DRAWING: Final = (
    "estimate-of-other-design",
    "check-of-other-design",
    "check-open",
    "schedule-ended",
)
LIMITS: Final = {
    SANCTIONED: "technical_sanction_limit",
    APPROVED: "administrative_approval_limit",
}


def is_revision(structure: Structure, act: str, given: Sanction | None) -> bool:
    """Tell whether the act revises one that was given; at its own stage it moves the structure.

    Raises
    ------
    Refused
        If the structure does not wait for it, and there is none to revise.
    """
    stage = structure.stage
    if stage == ASKS[act]:
        return False
    beyond = stage == HALTED or (stage in LINE and before(ASKS[act], stage))
    if given is None or not beyond:
        raise Refused(
            f"It is {stage} and does not wait for the {act}.",
            where=structure.site.code,
            remedy=f"It waits for it once it is {ASKS[act]}.",
        )
    return True


def judge_estimate(structure: Structure, estimate: Estimate, by: User) -> list[Finding]:
    """Say why an estimate cannot be sanctioned by somebody."""
    where, found = structure.site.code, []
    if not estimate.complete or estimate.sanction is None:
        what = f"Estimate {estimate.version} is incomplete."
        found.append(Finding(where, "estimate", what, "Have it completed and priced again."))
    for one in estimate.result["cautions"]:
        if one["level"] == "block":
            remedy = "It is not to be sanctioned so: send it back."
            found.append(Finding(where, "cautions", one["text"], remedy))
    if estimate.asked_by_id == by.pk:
        what = "Your own work, which somebody else must decide on: estimate."
        found.append(Finding(where, "maker", what, "Ask another person."))
    refused = Entry.objects.filter(
        structure=structure, act=REFUSED, content__estimate=estimate.input_digest
    ).first()
    if refused is not None:
        what = f"{refused.by_name} refused this estimate: {refused.content['reason']}"
        found.append(Finding(where, "estimate", what, "Draw and price another wall."))
    return found


def judge_drawing(structure: Structure) -> list[Finding]:
    """Say what a move would have said of drawing, check and schedule: a revision is no move."""
    facts = settle(records_of(structure).facts, standing_of(structure).facts)
    found = []
    for name in OF_THE_DRAWING:
        block, stands = BLOCKS[name], BLOCKS[name].judge(facts)
        if stands is None:
            what = f"Cannot be judged: {block.doubt}."
            found.append(
                Finding(structure.site.code, name, what, "Enter it first.", rule=block.rule)
            )
        elif stands:
            what = block.says.format(list=", ".join(stands))
            found.append(Finding(structure.site.code, name, what, block.remedy, rule=block.rule))
    return found


def judge_terms(structure: Structure, terms: Terms, kind: str, *, revised: bool) -> list[Finding]:
    """Say what is wrong with number, validity and reason."""
    where, found, number = structure.site.code, [], terms.number.strip()
    if not number:
        found.append(Finding(where, "number", "The number is missing.", "Give it its number."))
    elif structure.sanctions.filter(kind=kind, number=number).exists():
        what = f"Number {number} was given before."
        found.append(Finding(where, "number", what, "Take the next one."))
    if terms.valid_to < today_of(structure.site.watershed.district):
        what = f"It would be over already, on {terms.valid_to}."
        found.append(Finding(where, "valid_to", what, "Give a later day."))
    if revised and not terms.why.strip():
        found.append(Finding(where, "why", "The reason is missing.", "Write why it is revised."))
    return found


def judge_limit(structure: Structure, act: str, amount: Decimal | None, by: User) -> list[Finding]:
    """Say whether an amount goes beyond what the district office may decide."""
    mine = roles(by, place_of(structure))
    if PROGRAMME in mine or DISTRICT not in mine or amount is None:
        return []
    limit = limit_of(structure.site.watershed.district, LIMITS[act])
    inside = within(amount, limit)
    if inside:
        return []
    what = (
        f"No limit of the district office for the {act} is entered."
        if inside is None
        else f"The amount lies over the limit of the district office, {limit:.2f}."
    )
    return [Finding(structure.site.code, "role", what, "Ask the programme manager.")]


def judge_technical(structure: Structure, technical: Sanction, amount: Decimal) -> list[Finding]:
    """Say why an approval does not rest on a technical sanction."""
    where, found = structure.site.code, []
    today = today_of(structure.site.watershed.district)
    if technical.valid_to is not None and technical.valid_to < today:
        what = f"The technical sanction was valid until {technical.valid_to}."
        found.append(Finding(where, "sanction", what, "Have it renewed first."))
    if amount < technical.amount:
        what = f"{amount:f} is below the technical sanction of {technical.amount:f}."
        remedy = "Approve at least that, or send the drawing back."
        found.append(Finding(where, "amount", what, remedy))
    return found


def judge_line(
    structure: Structure, line: MoneyLine, amount: Decimal, technical: Sanction
) -> list[Finding]:
    """Say why a money line does not bear an amount."""
    where, found = structure.site.code, []
    today = today_of(structure.site.watershed.district)
    if line.currency != technical.currency:
        what = f"{line.code} is in {line.currency}, the sanction in {technical.currency}."
        return [Finding(where, "money_line", what, "Take another line.", rule="ES-05")]
    if line.valid_from > today or (line.valid_to is not None and line.valid_to < today):
        what = f"{line.code} does not hold on {today}."
        found.append(Finding(where, "money_line", what, "Take another line."))
    left = left_on(line, besides=structure)
    if left < amount:
        what = f"{line.code} has {left:f} left; {amount:f} is asked for."
        remedy = "Take another line, or have this one raised and signed by the funder."
        found.append(Finding(where, "money_line", what, remedy))
    return found
