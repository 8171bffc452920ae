"""What the records say of one structure when somebody wants to move it.

A fact is asked of the records by whoever judges a move; None is "not known", which lets nothing
through. A fact that lists what stands in the way is empty where nothing does.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from datetime import date

Names = tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Facts:
    """Facts of a structure, in the order of the stages that ask for them; None is not known."""

    # noted
    position_given: bool | None = None
    places_near_unexplained: Names | None = None  # codes of places within 50 m
    # walked
    downstream_answered: bool | None = None  # a list, or "none found" within a distance
    # surveying
    land_permission: bool | None = None
    benchmark_named: bool | None = None
    # flow-judged and drawn
    flanks_open: Names | None = None  # of "left" and "right"
    k_has_source: bool | None = None
    vertical_in_wet_sand: bool | None = None
    crest_above_bed: bool | None = None
    # checked
    check_of_this_design: bool | None = None  # the check names the design in force
    check_findings_open: Names | None = None
    # priced and sanctioned
    estimate_of_this_design: bool | None = None
    typed_without_reason: Names | None = None  # items whose quantity is not the drawing's
    schedule_ended_on: date | None = None  # last day of the schedule that priced the estimate
    within_district_limit: bool | None = None
    # heard
    settlements_not_heard: Names | None = None  # of the downstream list
    objections_unanswered: Names | None = None
    # approved and signed
    money_line_covers: bool | None = None
    approval_below_technical: bool | None = None
    safety_terms: bool | None = None
    contractor_authority: bool | None = None
    # cleared
    today: date | None = None  # the district's own day
    last_opening_day: date | None = None
    clay_tested: bool | None = None
    trained_person_named: bool | None = None
    services_answered: bool | None = None  # cables and pipes: found or none, not "not known"
    # digging, rising, covered
    holds_not_seen: Names | None = None  # of those that the asked move needs: "H3 of strip 2"
    trench_look_today: bool | None = None
    alarm_set: bool | None = None  # forecast of rain or alarm from the stream
    water_in_trench: bool | None = None
    rock_seen: bool | None = None
    strips_open: Names | None = None  # "strip 4"
    restored_bed_photo: bool | None = None
    # measured-up
    lines_undecided: Names | None = None
    entries_billed_twice: Names | None = None
    entries_checked_by_maker: Names | None = None
    # handed-over
    control_well_named: bool | None = None
    reader_named: bool | None = None
    # judged
    verdict: str | None = None  # as proposed, one of the four
    full_years_enough: bool | None = None
    # halted, closed-off and the ways back
    cost_moves: bool | None = None
    option_way: str | None = None  # "" while undecided; "go on", "step", "shift", "close"
    revisions_missing: Names | None = None  # "revised technical sanction", ...
    unpaid_lines: Names | None = None
    committee_told: bool | None = None
    set_aside: bool | None = None  # closed off as set aside, not as given up


FACT_NAMES: Final = tuple(field.name for field in fields(Facts))
