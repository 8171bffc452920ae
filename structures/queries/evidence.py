"""What the records of metres say of a structure when somebody wants to move it.

Papers, surveys, rock lines, drawings and the records of the trench are read here. What is made
where money is counted (estimate, sanction, contract, bill) comes in as values from there.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import date, timedelta
from typing import TYPE_CHECKING, Any, Final

from structures.life.facts import Facts
from structures.life.moves import Evidence
from structures.life.paper_rules import open_findings, unanswered, unheard
from structures.life.stages import CLOSED_OFF, HALTED
from structures.queries.districts import today_of
from structures.queries.sites import newest_rock_line, newest_survey
from structures.queries.survey_reading import reading_of
from structures.queries.trench_facts import trench_evidence, trench_facts

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from structures.models import Design, Paper, Site, Structure

MANY: Final = frozenset({"hearing"})  # kinds of which every settlement has its own
MOVES_COST: Final[dict[str, bool | None]] = {"yes": True, "no": False, "not known": None}
Content = dict[str, Any]


@dataclass(frozen=True, slots=True)
class Records:
    """Evidence and facts of one structure, and the papers behind them."""

    evidence: tuple[Evidence, ...]
    facts: Facts
    papers: tuple[Paper, ...]
    design: Design | None


def records_of(structure: Structure, *, to: str = "") -> Records:
    """Read what counts today for the move to a stage; the hold points asked for depend on it."""
    today = today_of(structure.site.watershed.district)
    design = structure.designs.select_related("by").order_by("-version").first()
    papers = _in_force(structure, today, design)
    evidence = (
        *_made_elsewhere(structure.site, design),
        *(Evidence(one.kind, one.digest, one.by.username, one.at) for one in papers),
        *trench_evidence(structure, today),
    )
    known = {
        **_of_the_site(structure.site),
        **_of_the_papers({one.kind: one.content for one in papers}),
        **_heard(structure.site, papers),
        **_checked(design, papers),
        **trench_facts(structure, to, today),
        "today": today,
    }
    return Records(evidence, settle(Facts(), known), papers, design)


def settle(facts: Facts, known: Mapping[str, Any]) -> Facts:
    """Give facts with those put in that are known now.

    Raises
    ------
    TypeError
        If one of them is no fact.
    """
    return replace(facts, **known)


def left_at(structure: Structure) -> str:
    """Give the stage at which a structure was halted or closed off; "" for all others."""
    if structure.stage not in (HALTED, CLOSED_OFF):
        return ""
    last = structure.moves.filter(to_stage=structure.stage).order_by("-number").first()
    return "" if last is None else last.from_stage


def papers_of(structure: Structure) -> list[Paper]:
    """Every version of every paper, newest first."""
    return list(structure.papers.select_related("by").prefetch_related("photos").order_by("-at"))


def _in_force(structure: Structure, today: date, design: Design | None) -> tuple[Paper, ...]:
    """Give the newest version of each paper that still speaks of what stands today."""
    newest: dict[tuple[str, str], Paper] = {}
    for paper in structure.papers.select_related("by").order_by("at", "version"):
        about = paper.about if paper.kind in MANY else ""
        newest[paper.kind, about] = paper
    return tuple(one for one in newest.values() if _still_speaks(one, structure, today, design))


def _still_speaks(paper: Paper, structure: Structure, today: date, design: Design | None) -> bool:
    if paper.kind == "drawing-sheet":
        return design is not None and paper.about == f"design {design.version}"
    if paper.kind == "season":
        return date.fromisoformat(paper.content["early_flow_on"]) >= today
    if paper.kind in ("halt", "restart"):
        halts = structure.moves.filter(to_stage=HALTED).count()
        return paper.about == f"halt {halts + 1 if paper.kind == 'halt' else halts}"
    return True


def _made_elsewhere(site: Site, design: Design | None) -> Iterable[Evidence]:
    survey = newest_survey(site)
    if survey is not None:
        yield Evidence("survey", survey.digest, survey.by.username, survey.at)
        line = newest_rock_line(survey)
        if line is not None:
            yield Evidence("rock-line", line.digest, line.by.username, line.at)
    if design is not None:
        yield Evidence("design", design.digest, design.by.username, design.at)


def _of_the_site(site: Site) -> dict[str, Any]:
    """Read the wall as the newest survey gives it; None until a worker has read that."""
    survey = newest_survey(site)
    if survey is not None:
        survey.site = site
    run = None if survey is None else reading_of(survey)
    wall = ((run and run.result) or {}).get("appraisal", {}).get("wall")
    closed = None if wall is None else wall["closed"]
    return {
        "position_given": True,
        "flanks_open": None
        if closed is None
        else tuple(side for side in ("left", "right") if not closed[side]),
        "crest_above_bed": None
        if wall is None
        else bool(wall["crest_level_m"] >= wall["bed_level_m"]),
        "downstream_answered": True if site.downstream_users.strip() else None,
        "benchmark_named": True if site.benchmark.strip() else None,
    }


def _of_the_papers(papers: Mapping[str, Content]) -> dict[str, Any]:
    """Read the facts that stand on a paper alone."""
    known: dict[str, Any] = {}
    if "walk-over" in papers:
        known["downstream_answered"] = True  # the form lets no blank through
    if "survey-permission" in papers:
        land = papers["survey-permission"]["land"]
        known["land_permission"] = all(row["leave"] == "given" for row in land)
        known["benchmark_named"] = True
    if "underflow" in papers:
        known["k_has_source"] = bool(papers["underflow"]["k_source"])
    if "drawing-sheet" in papers:
        sheet = papers["drawing-sheet"]
        known["vertical_in_wet_sand"] = sheet["side_slope"] == 0 and bool(sheet["wet_sand"])
    if "season" in papers:
        known |= _season(papers["season"])
    if "halt" in papers:
        known["cost_moves"] = MOVES_COST[papers["halt"]["cost_moves"]]
    if "restored-bed" in papers:
        known["restored_bed_photo"] = True  # the form asks for it
    return known | _of_the_end(papers)


def _of_the_end(papers: Mapping[str, Content]) -> dict[str, Any]:
    """Read the facts of hand-over, verdict and closing off."""
    known: dict[str, Any] = {}
    if "handover" in papers:
        wells = papers["handover"]["wells"]
        known["control_well_named"] = any(row["role"] == "control" for row in wells)
        known["reader_named"] = any(row["reader"] for row in wells)
    if "verdict" in papers:
        said = papers["verdict"]
        known["verdict"] = said["verdict"]
        years = min(said["years_before"], said["years_after"])
        known["full_years_enough"] = years >= said["years_needed"]
    if "close-off" in papers:
        known["committee_told"] = bool(papers["close-off"]["committee_told_on"])
        known["set_aside"] = papers["close-off"]["how"] == "set aside"
    return known


def _season(sheet: Content) -> dict[str, Any]:
    early = date.fromisoformat(sheet["early_flow_on"])
    return {
        "last_opening_day": early - timedelta(days=sheet["days_needed"] + sheet["reserve_days"]),
        "clay_tested": sheet["clay_tested_on"] is not None,
        "trained_person_named": bool(sheet["trained_person"]),
        "services_answered": sheet["services"] in ("found", "none"),
    }


def _heard(site: Site, papers: Iterable[Paper]) -> dict[str, Any]:
    """Compare the minutes with the villages of the site and the list of the walk-over."""
    papers = tuple(papers)
    minutes = [one.content for one in papers if one.kind == "hearing"]
    listed = [
        row["settlement"]
        for one in papers
        if one.kind == "walk-over"
        for row in one.content["downstream"]
    ]
    named = [site.village_upstream, site.village_downstream, *listed]
    wanted = tuple(dict.fromkeys(name.strip() for name in named if name.strip()))
    if not minutes:
        return {}
    return {
        "settlements_not_heard": unheard(wanted, minutes),
        "objections_unanswered": tuple(what for one in minutes for what in unanswered(one)),
    }


def _checked(design: Design | None, papers: Iterable[Paper]) -> dict[str, Any]:
    sheet = next((one for one in papers if one.kind == "check"), None)
    if sheet is None:
        return {}
    return {
        "check_of_this_design": design is not None and sheet.about == f"design {design.version}",
        "check_findings_open": open_findings(sheet.content),
    }
