"""The named blocks of the moves: what stands in the way, in words, and what to do about it.

Source: the office's practice, "the life of one structure", column "what blocks it", with the
messages of its validation rules where a rule has one. A block that cannot be judged blocks.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Callable

    from structures.life.facts import Facts

NOT_KNOWN: Final = "not known"
GOING_ON: Final = ("go on", "step")  # ways of an option paper by which this trench is worked on


@dataclass(frozen=True, slots=True)
class Block:
    """One reason not to move.

    `judge` gives what stands in the way: () for nothing, None where a fact is missing. `says` and
    `remedy` are the message with {list}, {today}, {last} and {days}; `doubt` ends the sentence
    "cannot be judged: ...". `paper` is the kind of paper that answers it: while that one is missing
    altogether, the doubt is not told besides.
    """

    name: str
    judge: Callable[[Facts], tuple[str, ...] | None]
    says: str
    remedy: str
    doubt: str
    rule: str = ""
    paper: str = ""


def _must(fact: str) -> Callable[[Facts], tuple[str, ...] | None]:
    """Let through where the fact is true."""

    def judge(facts: Facts) -> tuple[str, ...] | None:
        value = getattr(facts, fact)
        return None if value is None else (() if value else (fact,))

    return judge


def _must_not(fact: str) -> Callable[[Facts], tuple[str, ...] | None]:
    """Let through where the fact is false."""

    def judge(facts: Facts) -> tuple[str, ...] | None:
        value = getattr(facts, fact)
        return None if value is None else ((fact,) if value else ())

    return judge


def _none_of(fact: str) -> Callable[[Facts], tuple[str, ...] | None]:
    """Let through where the fact lists nothing."""

    def judge(facts: Facts) -> tuple[str, ...] | None:
        return getattr(facts, fact)

    return judge


def _schedule(facts: Facts) -> tuple[str, ...] | None:
    if facts.today is None or facts.schedule_ended_on is None:
        return None
    ended = facts.schedule_ended_on < facts.today
    return (facts.schedule_ended_on.isoformat(),) if ended else ()


def _season(facts: Facts) -> tuple[str, ...] | None:
    if facts.today is None or facts.last_opening_day is None:
        return None
    days = (facts.today - facts.last_opening_day).days
    return () if days <= 0 else ("1 day" if days == 1 else f"{days} days",)


def _verdict(facts: Facts) -> tuple[str, ...] | None:
    if facts.verdict == NOT_KNOWN:
        return ()
    if facts.verdict is None or facts.full_years_enough is None:
        return None
    return () if facts.full_years_enough else (facts.verdict,)


def _option(facts: Facts) -> tuple[str, ...] | None:
    if facts.cost_moves is False:
        return ()
    if facts.cost_moves is None or facts.option_way is None:
        return None
    return () if facts.option_way in GOING_ON else (facts.option_way or "undecided",)


def _option_shift(facts: Facts) -> tuple[str, ...] | None:
    if facts.option_way is None:
        return None
    return () if facts.option_way == "shift" else (facts.option_way or "undecided",)


def _table(*rows: Block) -> dict[str, Block]:
    return {row.name: row for row in rows}


BLOCKS: Final = _table(
    Block(
        "no-position",
        _must("position_given"),
        "No position for this place.",
        "Stand on the line and take it, or type it from the map sheet and say so.",
        "whether the place has a position",
        "PL-01",
        "note",
    ),
    Block(
        "place-near",
        _none_of("places_near_unexplained"),
        "Within 50 m stands {list}.",
        "Same place? Join them, or write why both stay.",
        "whether another place lies within 50 m",
        "PL-04",
    ),
    Block(
        "downstream-blank",
        _must("downstream_answered"),
        "Who uses water below this place is blank.",
        'Write the list, or "none found" within how many km.',
        "whether the users downstream were listed",
        "PL-05",
        "walk-over",
    ),
    Block(
        "no-land-permission",
        _must("land_permission"),
        "There is no permission to enter the land.",
        "Ask the owners and attach their leave.",
        "whether the owners of the land gave leave",
        paper="survey-permission",
    ),
    Block(
        "no-benchmark",
        _must("benchmark_named"),
        "No benchmark is named.",
        "Name the benchmark from which the levels are run.",
        "from which benchmark the levels are run",
        "XS-04",
        "survey-permission",
    ),
    Block(
        "flank-open",
        _none_of("flanks_open"),
        "Open flank, {list}: rock is still below the bed where the survey ends.",
        "Survey further out before drawing.",
        "whether rock closes both flanks",
        "RK-02",
        "rock-line",
    ),
    Block(
        "k-without-source",
        _must("k_has_source"),
        "The conductivity has no source.",
        "Where does K come from? Pumping test, grain size or table?",
        "where the conductivity comes from",
        "UF-02",
        "underflow",
    ),
    Block(
        "vertical-sides",
        _must_not("vertical_in_wet_sand"),
        "Refused: vertical sides in wet sand kill.",
        "Slope, or support designed by a licensed engineer under local code.",
        "how the sides stand and whether the sand is wet",
        "DW-01",
        "drawing-sheet",
    ),
    Block(
        "end-in-sand",
        _none_of("flanks_open"),
        "The wall ends in sand, {list}.",
        "See the open flank: survey further out, then draw again.",
        "whether both ends of the wall are keyed into rock",
        "DW-05",
        "design",
    ),
    Block(
        "crest-above-bed",
        _must_not("crest_above_bed"),
        "The crest is not below the bed: it would dam the stream itself.",
        "Lower the crest as the settings of the wall say.",
        "whether the crest lies below the bed",
        "DW-04",
        "design",
    ),
    Block(
        "check-of-other-design",
        _must("check_of_this_design"),
        "The check is of another drawing than the one in force.",
        "Have the drawing in force checked.",
        "which drawing was checked",
        paper="check",
    ),
    Block(
        "check-open",
        _none_of("check_findings_open"),
        "Findings of the check are open: {list}.",
        "Answer each and have the checker close it.",
        "whether the findings of the check are closed",
        paper="check",
    ),
    Block(
        "typed-quantity",
        _none_of("typed_without_reason"),
        "Typed, not from the drawing, and without a reason: {list}.",
        "Take the drawing's quantity, or write why.",
        "whether the quantities are the drawing's",
        "ES-01",
        "estimate",
    ),
    Block(
        "estimate-of-other-design",
        _must("estimate_of_this_design"),
        "The estimate is of another drawing than the one in force.",
        "Price the drawing in force.",
        "which drawing was priced",
        paper="estimate",
    ),
    Block(
        "not-heard",
        _none_of("settlements_not_heard"),
        "Not heard: {list}.",
        "Hear them, or write into the minutes that they were asked and when.",
        "whether every settlement downstream was heard",
        paper="hearing",
    ),
    Block(
        "objection-open",
        _none_of("objections_unanswered"),
        "Objections without an answer: {list}.",
        "Answer each in the minutes; nobody has agreed because nobody objected.",
        "whether the objections are answered",
        paper="hearing",
    ),
    Block(
        "schedule-ended",
        _schedule,
        "The rate schedule of the estimate ended on {list}.",
        "Price again with the schedule in force.",
        "until when the rate schedule of the estimate is valid",
        "ES-02",
        "estimate",
    ),
    Block(
        "money-line-small",
        _must("money_line_covers"),
        "The money line does not cover the amount.",
        "Take another line, or have this one raised and signed by the funder.",
        "whether the money line covers the amount",
        paper="administrative-approval",
    ),
    Block(
        "approval-below-technical",
        _must_not("approval_below_technical"),
        "The amount approved is below the technical sanction.",
        "Approve at least the sanctioned amount, or send the drawing back.",
        "whether the approval reaches the technical sanction",
        paper="administrative-approval",
    ),
    Block(
        "no-safety-terms",
        _must("safety_terms"),
        "The contract has no safety terms.",
        "Write them in: slope, look, way out, watch upstream, who may stop the work.",
        "whether the contract has safety terms",
        paper="contract",
    ),
    Block(
        "no-contractor-authority",
        _must("contractor_authority"),
        "The contractor's authority to sign is missing.",
        "Ask for the paper that says who signs for the contractor.",
        "whether the contractor's signatory may sign",
        paper="contract",
    ),
    Block(
        "too-late",
        _season,
        "Too late by {list}: do not open this season.",
        "Nothing shortens the days needed but another plan of work, judged anew.",
        "the last opening day",
        "SG-01",
        "season",
    ),
    Block(
        "clay-not-tested",
        _must("clay_tested"),
        "The clay is not tested.",
        "Test it and write the date into the season sheet.",
        "whether the clay was tested",
        paper="season",
    ),
    Block(
        "no-trained-person",
        _must("trained_person_named"),
        "No trained person is named.",
        "Name who looks into the trench each day and may stop the work.",
        "who is trained and on site",
        paper="season",
    ),
    Block(
        "services-not-known",
        _must("services_answered"),
        "Cables and pipes: not known.",
        "Ask their owners; found or none is an answer, not known is not.",
        "whether cables and pipes were asked for",
        paper="season",
    ),
    Block(
        "hold-not-seen",
        _none_of("holds_not_seen"),
        "Not seen: {list}.",
        "Ask for the hold point, and go on when somebody else has seen it.",
        "which hold points were seen",
    ),
    Block(
        "no-look-today",
        _must("trench_look_today"),
        "No trench look today. Nobody goes in.",
        "The trained person looks and writes it down first.",
        "whether the trench was looked at today",
        "TR-01",
    ),
    Block(
        "alarm",
        _must_not("alarm_set"),
        "A forecast or a stream alarm is set.",
        "Everybody out; wait until it is withdrawn, then look again.",
        "whether a forecast or a stream alarm is set",
    ),
    Block(
        "water-in-trench",
        _must_not("water_in_trench"),
        "Water stands in the trench.",
        "Pump it down from the sump outside the wall line before clay goes in.",
        "whether water stands in the trench",
    ),
    Block(
        "rock-not-seen",
        _must("rock_seen"),
        "Rock was not seen.",
        "Clean it and have it seen before anything covers it.",
        "whether rock was seen",
    ),
    Block(
        "trench-open",
        _none_of("strips_open"),
        "The trench is still open: {list}.",
        "Backfill it as drawn first.",
        "whether the trench is open anywhere",
    ),
    Block(
        "no-bed-photo",
        _must("restored_bed_photo"),
        "There is no photo of the restored bed.",
        "Take one of the whole wall line.",
        "whether the restored bed was photographed",
        paper="restored-bed",
    ),
    Block(
        "line-undecided",
        _none_of("lines_undecided"),
        "Bill lines without a decision: {list}.",
        "Each line is paid, held or refused.",
        "whether every bill line is decided",
        paper="final-measurement",
    ),
    Block(
        "billed-twice",
        _none_of("entries_billed_twice"),
        "Billed twice: {list}.",
        "Refuse the later line; an entry is billed once.",
        "whether an entry was billed twice",
        "BL-01",
        "final-measurement",
    ),
    Block(
        "measured-unchecked",
        _none_of("entries_checked_by_maker"),
        "Measured and checked by the same person: {list}.",
        "Another person must check.",
        "who checked the measurement",
        "BL-02",
        "final-measurement",
    ),
    Block(
        "no-control-well",
        _must("control_well_named"),
        "No control well is named.",
        "Name one outside the wall's reach; without it rain and wall cannot be told apart.",
        "whether a control well is named",
        "WL-04",
        "handover",
    ),
    Block(
        "no-reader",
        _must("reader_named"),
        "Nobody is named who reads the wells.",
        "Name the reader in the hand-over sheet.",
        "who reads the wells",
        paper="handover",
    ),
    Block(
        "too-few-years",
        _verdict,
        'Too few full water years for "{list}".',
        "The verdict is *not known* until there are as many as the setting asks.",
        "the verdict, or how many full water years there are",
        "VR-01",
        "verdict",
    ),
    Block(
        "option-undecided",
        _option,
        "The option paper says: {list}.",
        "Going on waits until it is decided to go on deeper or to step the wall.",
        "whether the cost moves, and what the option paper decided",
        "HP-05",
    ),
    Block(
        "option-no-shift",
        _option_shift,
        "The option paper says: {list}.",
        "Another line is drawn only where the paper chose to shift.",
        "what the option paper decided",
        paper="option-paper",
    ),
    Block(
        "revision-missing",
        _none_of("revisions_missing"),
        "Missing: {list}.",
        "Have it given before going on.",
        "whether sanction and approval must be revised",
        "ES-03",
    ),
    Block(
        "unpaid-line",
        _none_of("unpaid_lines"),
        "Bill lines are unpaid: {list}.",
        "Pay or refuse each before closing off.",
        "whether a bill line is unpaid",
    ),
    Block(
        "committee-not-told",
        _must("committee_told"),
        "The village committee was not told.",
        "Tell it, and write when and by whom.",
        "whether the village committee was told",
        paper="close-off",
    ),
    Block(
        "given-up",
        _must("set_aside"),
        "This place was given up, not set aside.",
        "Note it as a new place if it is looked at again.",
        "whether it was set aside or given up",
    ),
)
