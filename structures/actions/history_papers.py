"""The way so far, its sheets, complaints and verdicts, as they were before the district was kept here."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Any, Final

from structures.actions.refusals import as_documents
from structures.life.paper_reader import read_paper
from structures.life.papers import PAPERS
from structures.life.stages import FLOW_JUDGED
from structures.models import Complaint, ComplaintAnswer, Move, Paper, Verdict
from structures.queries.register import paper_digest

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from structures.actions.history import Taking
    from structures.intake.history import History, HistoryRow
    from structures.models import Structure, User, Well

WALKED: Final = "walked"
NONE_FOUND: Final = re.compile(r"none found within (\d+(?:\.\d+)?) km", re.ASCII)
K_SOURCES: Final = PAPERS["underflow"].field("k_source").choices
SPELT: Final = "Taken over from the list of sites; what that list does not say is blank."
ANSWERED: Final = "Answered on {day}, before this was kept here; the words were not taken over."
BEFORE: Final = "given before the district was kept here; its evidence was not taken over"


def take_moves(
    taking: Taking, rows: Sequence[HistoryRow], structures: Sequence[HistoryRow]
) -> None:
    """Keep the moves; the cause of a halt or an end is the reason of the move that led there."""
    causes = {row["structure_id"]: (row["state"], row["cause"] or "") for row in structures}
    last = {row["structure_id"]: row for row in rows}  # the rows stand in their order
    Move.objects.bulk_create(
        Move(
            structure=taking.structures[row["structure_id"]],
            number=row["move_no"],
            from_stage=row["from_state"] or "",
            to_stage=row["to_state"],
            day=row["moved_on"],
            reason=_reason(row, last, causes),
            by=taking.people[row["moved_by"]],
        )
        for row in rows
    )


def _reason(
    row: HistoryRow, last: Mapping[str, HistoryRow], causes: Mapping[str, tuple[str, str]]
) -> str:
    state, cause = causes.get(row["structure_id"], ("", ""))
    return cause if row is last[row["structure_id"]] and row["to_state"] == state else ""


def take_papers(taking: Taking, history: History) -> None:
    """Keep the walk-over and the underflow sheet of each site by the forms of today.

    What the forms ask and nobody wrote down stays blank; the findings beside the paper say so.
    """
    reached = {(row["structure_id"], row["to_state"]): row for row in history["moves"]}
    papers = []
    for row in history["sites"]:
        walked = reached.get((row["site_id"], WALKED))
        if walked is not None and row["downstream_users"]:
            papers.append(_paper(taking, "walk-over", walked, _walk_over(row, walked)))
    for row in history["underflow"]:
        judged = reached.get((row["site_id"], FLOW_JUDGED))
        if judged is not None:
            papers.append(_paper(taking, "underflow", judged, _underflow(row)))
    Paper.objects.bulk_create(papers)


def _paper(taking: Taking, kind: str, move: HistoryRow, given: Mapping[str, Any]) -> Paper:
    content, findings = read_paper(kind, given)
    structure: Structure = taking.structures[move["structure_id"]]
    by: User = taking.people[move["moved_by"]]
    return Paper(
        structure=structure,
        kind=kind,
        version=1,
        content=content,
        findings=as_documents(findings),
        digest=paper_digest(kind, "", content, ()),
        by=by,
    )


def _walk_over(row: HistoryRow, walked: HistoryRow) -> dict[str, Any]:
    users: str = row["downstream_users"]
    nobody = NONE_FOUND.fullmatch(users)
    settlement, _, use = users.partition(", ")
    toes = (row["left_toe_m"], row["right_toe_m"])
    return {
        "walked_on": walked["moved_on"].isoformat(),
        "bed_width_m": None if None in toes else toes[1] - toes[0],
        "downstream": [] if nobody else [{"settlement": settlement, "use": use}],
        "none_found_within_km": float(nobody[1]) if nobody else None,
        "remarks": SPELT,
    }


def _underflow(row: HistoryRow) -> dict[str, Any]:
    words: str = row["k_source"]
    return {
        **{f"k_{which}_m_per_day": row[f"k_{which}_m_day"] for which in ("low", "likely", "high")},
        "k_source": next((one for one in K_SOURCES if words.startswith(one)), None),
        "k_source_words": words,
        "wetted_area_m2": row["wetted_area_m2"],
        "only_wetted": True,  # the column of the table is that of the wetted area
        "gradient": row["gradient"],
    }


def take_complaints(taking: Taking, rows: Sequence[HistoryRow], wells: Mapping[str, Well]) -> None:
    """Keep the complaints; of an answer only its day is known."""
    kept = Complaint.objects.bulk_create(
        Complaint(
            site=taking.structures[row["site_id"]].site,
            code=row["complaint_id"],
            received_on=row["received_on"],
            from_whom=row["from"],
            well=wells.get(row["well_id"]),
            text=row["text"],
            by=taking.by,
        )
        for row in rows
    )
    ComplaintAnswer.objects.bulk_create(
        ComplaintAnswer(
            complaint=complaint,
            text=ANSWERED.format(day=row["answered_on"]),
            closes=True,
            by=taking.by,
        )
        for complaint, row in zip(kept, rows, strict=True)
        if row["answered_on"] is not None
    )


def take_verdicts(taking: Taking, rows: Sequence[HistoryRow]) -> None:
    """Keep the verdicts with the word that they are from before."""
    Verdict.objects.bulk_create(
        Verdict(
            structure=taking.structures[row["structure_id"]],
            water_year=row["water_year"],
            version=1,
            word=row["verdict"],
            evidence={"taken_over": BEFORE},
            proposed_by=taking.people[row["proposed_by"]],
            reviewed_by=_person(taking, row["reviewed_by"]),
            given_on=row["given_on"],
        )
        for row in rows
    )


def _person(taking: Taking, login: str | None) -> User | None:
    return None if login is None else taking.people[login]
