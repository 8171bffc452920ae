"""The office's table of stages, written off its page by hand: the oracle of the moves.

A row: from, to, who moves it in, what must be attached, and what blocks it, each block as the fact
of it, a value that lets through, one that does not, and words of the sentence.
"""

from __future__ import annotations

from datetime import UTC, date, datetime
from typing import Any, NamedTuple

from structures.life.facts import Facts
from structures.life.moves import Evidence, MoveAsked

ROLES = ("field", "engineer", "district", "programme", "auditor", "admin")
DAY = date(2026, 4, 10)
AT = datetime(2026, 4, 10, 9, 0, tzinfo=UTC)


class Hurdle(NamedTuple):
    fact: str
    good: Any
    bad: Any
    words: str


class Row(NamedTuple):
    start: str
    to: str
    roles: tuple[str, ...]
    papers: tuple[str, ...]
    hurdles: tuple[Hurdle, ...]
    others_work: tuple[str, ...] = ()


TOO_LATE = Hurdle("last_opening_day", date(2026, 4, 10), date(2026, 4, 4), "Too late by 6 days")
OPEN = Hurdle("strips_open", (), ("strip 4",), "trench is still open: strip 4")
LOOK = Hurdle("trench_look_today", True, False, "No trench look today. Nobody goes in.")
ALARM = Hurdle("alarm_set", False, True, "forecast or a stream alarm")
HOLDS = Hurdle("holds_not_seen", (), ("H3 of strip 2",), "Not seen: H3 of strip 2.")
CHECK_OPEN = Hurdle("check_findings_open", (), ("key too thin",), "are open: key too thin")
OTHER_CHECK = Hurdle("check_of_this_design", True, False, "another drawing")
OTHER_PRICE = Hurdle("estimate_of_this_design", True, False, "another drawing")

LINE = (
    Row(
        "",
        "noted",
        ("field", "engineer"),
        ("note",),
        (
            Hurdle("position_given", True, False, "No position"),
            Hurdle("places_near_unexplained", (), ("OD-02",), "Within 50 m stands OD-02."),
        ),
    ),
    Row(
        "noted",
        "walked",
        ("field",),
        ("walk-over",),
        (Hurdle("downstream_answered", True, False, "Who uses water below"),),
    ),
    Row(
        "walked",
        "surveying",
        ("engineer",),
        ("survey-permission",),
        (
            Hurdle("land_permission", True, False, "no permission to enter"),
            Hurdle("benchmark_named", True, False, "No benchmark"),
        ),
    ),
    Row(
        "surveying",
        "flow-judged",
        ("engineer",),
        ("survey", "rock-line", "underflow"),
        (
            Hurdle("flanks_open", (), ("right",), "Open flank, right"),
            Hurdle("k_has_source", True, False, "no source"),
        ),
    ),
    Row(
        "flow-judged",
        "drawn",
        ("engineer",),
        ("underflow", "design", "drawing-sheet"),
        (
            Hurdle("vertical_in_wet_sand", False, True, "vertical sides in wet sand kill"),
            Hurdle("flanks_open", (), ("left", "right"), "ends in sand, left, right"),
            Hurdle("crest_above_bed", False, True, "dam the stream itself"),
        ),
    ),
    Row(
        "drawn",
        "checked",
        ("engineer",),
        ("design", "drawing-sheet", "check"),
        (OTHER_CHECK, CHECK_OPEN),
        ("design", "drawing-sheet"),
    ),
    Row(
        "checked",
        "priced",
        ("engineer",),
        ("estimate",),
        (
            OTHER_PRICE,
            Hurdle("typed_without_reason", (), ("clay",), "without a reason: clay"),
        ),
    ),
    Row(
        "priced",
        "heard",
        ("district",),
        ("hearing",),
        (
            Hurdle("settlements_not_heard", (), ("Pirrumad",), "Not heard: Pirrumad."),
            Hurdle("objections_unanswered", (), ("the lower well",), "without an answer"),
        ),
    ),
    Row(
        "heard",
        "sanctioned",
        ("district", "programme"),
        ("estimate", "technical-sanction"),
        (
            Hurdle("schedule_ended_on", DAY, date(2026, 4, 9), "ended on 2026-04-09"),
            OTHER_PRICE,
            OTHER_CHECK,
            CHECK_OPEN,
        ),
        ("estimate",),
    ),
    Row(
        "sanctioned",
        "approved",
        ("district", "programme"),
        ("administrative-approval",),
        (
            Hurdle("money_line_covers", True, False, "money line does not cover"),
            Hurdle("approval_below_technical", False, True, "below the technical sanction"),
        ),
    ),
    Row(
        "approved",
        "signed",
        ("district",),
        ("contract",),
        (
            Hurdle("safety_terms", True, False, "no safety terms"),
            Hurdle("contractor_authority", True, False, "authority to sign is missing"),
        ),
    ),
    Row(
        "signed",
        "cleared",
        ("programme",),
        ("season",),
        (
            TOO_LATE,
            Hurdle("clay_tested", True, False, "clay is not tested"),
            Hurdle("trained_person_named", True, False, "No trained person"),
            Hurdle("services_answered", True, False, "Cables and pipes: not known"),
        ),
        ("season",),
    ),
    Row(
        "cleared",
        "digging",
        ("engineer",),
        ("hold-points", "trench-look"),
        (TOO_LATE, HOLDS, LOOK, ALARM),
    ),
    Row(
        "digging",
        "rising",
        ("engineer",),
        ("hold-points",),
        (
            HOLDS,
            Hurdle("water_in_trench", False, True, "Water stands in the trench"),
            Hurdle("rock_seen", True, False, "Rock was not seen"),
        ),
    ),
    Row(
        "rising",
        "covered",
        ("engineer",),
        ("hold-points", "restored-bed"),
        (HOLDS, OPEN, Hurdle("restored_bed_photo", True, False, "no photo of the restored bed")),
    ),
    Row(
        "covered",
        "measured-up",
        ("district",),
        ("final-measurement",),
        (
            Hurdle("lines_undecided", (), ("line 3",), "without a decision: line 3"),
            Hurdle("entries_billed_twice", (), ("M07",), "Billed twice: M07."),
            Hurdle("entries_checked_by_maker", (), ("M08",), "by the same person: M08"),
        ),
        ("final-measurement",),
    ),
    Row(
        "measured-up",
        "handed-over",
        ("district",),
        ("handover",),
        (
            Hurdle("control_well_named", True, False, "No control well"),
            Hurdle("reader_named", True, False, "Nobody is named who reads"),
        ),
    ),
    Row(
        "handed-over",
        "judged",
        ("programme",),
        ("verdict",),
        (Hurdle("full_years_enough", True, False, 'Too few full water years for "holds"'),),
        ("verdict",),
    ),
)
BESIDE = (
    *(
        Row(stage, "halted", ("field", "engineer", "district", "programme"), ("halt",), ())
        for stage in ("digging", "rising")
    ),
    *(
        Row(
            "halted",
            stage,
            ("district", "programme"),
            ("restart", "option-paper"),
            (
                Hurdle("option_way", "go on", "", "option paper says: undecided"),
                Hurdle("option_way", "step", "close", "option paper says: close"),
                Hurdle("revisions_missing", (), ("revised approval",), "Missing: revised approval"),
                TOO_LATE,
                LOOK,
                ALARM,
            ),
            ("option-paper",),
        )
        for stage in ("digging", "rising")
    ),
    Row(
        "halted",
        "flow-judged",
        ("district", "programme"),
        ("option-paper",),
        (Hurdle("option_way", "shift", "go on", "option paper says: go on"), OPEN),
        ("option-paper",),
    ),
    *(
        Row(
            stage,
            "closed-off",
            ("district",),
            ("close-off",),
            (
                OPEN,
                Hurdle("unpaid_lines", (), ("line 2 of RB1",), "are unpaid: line 2 of RB1"),
                Hurdle("committee_told", True, False, "committee was not told"),
            ),
        )
        for stage in ("noted", "heard", "signed", "rising", "halted")
    ),
    Row(
        "closed-off",
        "drawn",
        ("district",),
        (),
        (Hurdle("set_aside", True, False, "given up, not set aside"),),
    ),
)
ROWS = LINE + BESIDE


def asked(row: Row, role: str | None = None, by: str = "mover-1", **changes: Any) -> MoveAsked:
    """What somebody asks who may do it, or somebody else."""
    left = {"halted": row.to, "closed-off": row.to}.get(row.start, "")
    values = {
        "site": "OD-02",
        "stage": row.start,
        "to": row.to,
        "by": by,
        "roles": frozenset({role or row.roles[0]}),
        "reason": "the papers of the office say so",
        "left": left,
    }
    return MoveAsked(**(values | changes))


def evidence(row: Row, by: str = "maker-1", without: str = "") -> tuple[Evidence, ...]:
    return tuple(Evidence(kind, "0" * 64, by, AT) for kind in row.papers if kind != without)


def facts(row: Row, **changes: Any) -> Facts:
    values = {hurdle.fact: hurdle.good for hurdle in row.hurdles}
    values |= {"today": DAY, "within_district_limit": True, "verdict": "holds"}
    if row.start == "halted":
        values |= {"cost_moves": True}
    return Facts(**(values | changes))
