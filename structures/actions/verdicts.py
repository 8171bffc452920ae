"""A verdict on a wall: proposed by an engineer on the evidence, reviewed by another person.

It starts at "not known", is given for one water year, and is renewed with the next.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.db.models import Max

from structures.access import Act, insist
from structures.actions.papers import file_paper
from structures.actions.register import append
from structures.actions.stage import locked
from structures.errors import Refused
from structures.life.verdict import RULE, VERDICTS
from structures.models import Verdict
from structures.queries.districts import today_of
from structures.queries.verdicts import (
    NOT_KNOWN,
    SENT_BACK,
    STANDING,
    Evidence,
    evidence_of,
    open_proposal,
    year_words,
)

if TYPE_CHECKING:
    from structures.models import Entry, Structure, User

PROPOSED: Final = "verdict proposed"
REVIEWED: Final = "verdict reviewed"


@transaction.atomic
def propose_verdict(
    *,
    structure_id: int,
    word: str,
    by: User,
    water_year: int | None = None,
    why: str = "",
    rain_allowed_for: str = "",
    remarks: str = "",
) -> Verdict:
    """Propose a verdict for a water year; the verdict paper is filed with it.

    Parameters
    ----------
    word
        One of the four. Above what the evidence gives none can be proposed; below it, with `why`.
    water_year
        The year in which it begins; the newest one that is over where left out.
    rain_allowed_for
        How unlike rain was allowed for (VR-03).
    remarks
        What else is not known, in words.

    Raises
    ------
    Refused
        If no wall stands, the year is not over, a proposal waits, or the evidence does not bear it
        (VR-01, VR-02, VR-04).
    """
    structure = locked(structure_id)
    insist(by, Act.PROPOSE_VERDICT, structure)
    if structure.stage not in STANDING:
        raise Refused(
            f"No wall stands at {structure.site.code}: it is {structure.stage}.",
            where=structure.site.code,
            remedy="A verdict is given on a wall that is covered.",
        )
    if word not in VERDICTS:
        raise Refused(f"{word!r} is no verdict.", where="word", remedy="Choose one of the four.")
    waiting = open_proposal(structure)
    if waiting is not None:
        raise Refused(
            f"“{waiting.word}”, proposed by {waiting.proposed_by.username}, waits to be reviewed.",
            where="verdict",
            remedy="Have it reviewed or sent back first.",
        )
    found = evidence_of(structure)
    year = found.water_year if water_year is None else water_year
    if year > found.water_year:
        raise Refused(
            f"The water year {year_words(year)} is not over.",
            where="water_year",
            remedy=f"The newest that is over is {year_words(found.water_year)}.",
        )
    _insist_borne(found, word, why)
    unknown = [f"{one.what} {one.ends}" for one in found.unknown]
    said = [*unknown, *([remarks.strip()] if remarks.strip() else [])]
    paper = file_paper(
        structure_id=structure.pk,
        kind="verdict",
        given=_paper(found, word, year, rain_allowed_for, said),
        by=by,
    )
    content = {
        **_told(found),
        "why": why.strip(),
        "rain_allowed_for": rain_allowed_for.strip(),
        "paper": paper.digest,
        "findings": paper.findings,
    }
    entry = _enter(structure, by, PROPOSED, word, year, content)
    return _row(structure, word, year, content, said, proposed_by=by, reviewed_by=None, entry=entry)


@transaction.atomic
def review_verdict(*, verdict_id: int, by: User, agrees: bool, why: str = "") -> Verdict:
    """Let a proposed verdict stand, or send it back with the reason; the proposal stays as it was.

    Raises
    ------
    Refused
        If the reviewer proposed it, or it does not wait any more.
    """
    proposed = Verdict.objects.select_related("proposed_by").get(pk=verdict_id)
    structure = locked(proposed.structure_id)
    insist(by, Act.REVIEW_VERDICT, structure)
    waiting = open_proposal(structure)
    if waiting is None or waiting.pk != proposed.pk:
        raise Refused(
            "This proposal does not wait any more.",
            where="verdict",
            remedy="Open the page again and look at the newest.",
        )
    if proposed.proposed_by_id == by.pk:
        raise Refused(
            "You proposed this verdict yourself.",
            where="verdict",
            remedy="Another person must review it.",
        )
    if not agrees:
        if not why.strip():
            raise Refused("This is missing.", where="why", remedy="Say why it goes back.")
        content = {"verdict": proposed.pk, "why": why.strip()}
        _enter(structure, by, SENT_BACK, proposed.word, proposed.water_year, content)
        return proposed
    content = {"verdict": proposed.pk, "why": why.strip(), "proposal": proposed.entry.digest}
    entry = _enter(structure, by, REVIEWED, proposed.word, proposed.water_year, content)
    return _row(
        structure,
        proposed.word,
        proposed.water_year,
        proposed.evidence,
        proposed.not_known,
        proposed_by=proposed.proposed_by,
        reviewed_by=by,
        entry=entry,
    )


def _insist_borne(found: Evidence, word: str, why: str) -> None:
    """Nobody proposes more than the evidence bears; less asks for the reason."""
    borne = found.suggestion.verdict
    if word in (borne, NOT_KNOWN):
        return
    if borne == NOT_KNOWN:
        raise Refused(
            f"The evidence does not bear “{word}”. {' '.join(found.suggestion.reasons)}",
            where="word",
            remedy="The verdict is *not known* until what is missing is known.",
        )
    if VERDICTS.index(word) > VERDICTS.index(borne):
        raise Refused(
            f"The evidence bears “{borne}”, not “{word}”.",
            where="word",
            remedy="Propose what it bears, or less with the reason.",
        )
    if not why.strip():
        raise Refused(
            f"The evidence bears “{borne}”; you propose “{word}”.",
            where="why",
            remedy="Say why you go below it.",
        )


def _paper(
    found: Evidence, word: str, year: int, rain_allowed_for: str, unknown: list[str]
) -> dict[str, Any]:
    before, after = found.full_years
    rain_before, rain_after = found.rain_mm
    given = {
        "verdict": word,
        "water_year": year_words(year),
        "head_across_m": found.head_now_m,
        "years_before": before,
        "years_after": after,
        "years_needed": found.limits.least_full_years,
        "pairs": found.pairs,
        "controls": [{"well": one.code} for one in found.controls],
        "rain_before_mm": rain_before,
        "rain_after_mm": rain_after,
        "rain_allowed_for": rain_allowed_for.strip() or None,
        "readings_waiting": found.waiting,
        "not_known": "\n".join(unknown) or "Nothing that the rule asks for.",
    }
    return {key: value for key, value in given.items() if value is not None}


def _told(found: Evidence) -> dict[str, Any]:
    """What the verdict rests on, as values that stay."""
    gain = None
    if found.head is not None:
        head = found.head.measured
        gain = {"gain_m": head.gain_m, "low_m": head.low_m, "high_m": head.high_m}
    effect = None
    if found.effect is not None:
        keys = ("effect_m", "low_m", "high_m", "smallest_seen_m", "before", "after", "wells")
        effect = {key: found.effect[key] for key in keys}
    return {
        "completed": None if found.completed is None else found.completed.isoformat(),
        "pipes": None if found.pipes is None else list(found.pipes),
        "head": gain,
        "head_now_m": found.head_now_m,
        "effect": effect,
        "controls": [one.code for one in found.controls],
        "readings_waiting": found.waiting,
        "suggested": found.suggestion.verdict,
        "reasons": list(found.suggestion.reasons),
        "rule": found.suggestion.rule,
    }


def _row(
    structure: Structure, word: str, year: int, evidence: Any, unknown: Any, **people: Any
) -> Verdict:
    newest = structure.verdicts.filter(water_year=year).aggregate(newest=Max("version"))["newest"]
    return Verdict.objects.create(
        structure=structure,
        water_year=year,
        version=(newest or 0) + 1,
        word=word,
        evidence=evidence,
        not_known=unknown,
        rule=RULE,
        given_on=today_of(structure.site.watershed.district),
        **people,
    )


def _enter(
    structure: Structure, by: User, act: str, word: str, year: int, content: dict[str, Any]
) -> Entry:
    return append(
        district=structure.site.watershed.district,
        by=by,
        act=act,
        subject=f"{structure.site.code}: {word}, water year {year_words(year)}",
        structure=structure,
        content={"word": word, "water_year": year_words(year), **content},
    )
