"""A verdict starts at not known, rests on evidence, and never stands on one person's word."""

from __future__ import annotations

from datetime import date

import pytest

from structures.actions.verdicts import PROPOSED, REVIEWED, propose_verdict, review_verdict
from structures.errors import Refused
from structures.models import Role, Run, Structure, Verdict
from structures.queries.runs import site_subject
from structures.queries.sites import visible_sites
from structures.queries.verdicts import (
    EFFECT,
    evidence_of,
    open_proposal,
    sent_back,
    standing_verdict,
    year_words,
)
from tests.factories import a_user
from tests.structures.wells import a_well
from tests.trench import a_trench

pytestmark = pytest.mark.django_db
YEAR = 2024  # of a district that stands at 10 Apr 2026 the newest water year that is over


@pytest.fixture
def trench():
    return a_trench(without=("soundings", "refraction"), stage="covered")


@pytest.fixture
def programme(trench):
    return a_user(Role.PROGRAMME, trench.structure.site.watershed.district)


def compared(trench, *, gain=(0.62, 0.45, 0.80), years=(2, 2), pairs=(40, 40), controls=1):
    """A comparison as its run keeps it; figures are invented."""
    effect, low, high = gain
    return Run.objects.create(
        kind=EFFECT,
        subject=site_subject(trench.structure.site.code),
        params={},
        digest="1" * 64,
        version="1",
        state="done",
        result={
            "effect_m": effect,
            "low_m": low,
            "high_m": high,
            "smallest_seen_m": 0.2,
            "readings": {"taken": 200, "left_out": []},
            "before": {"pairs": pairs[0], "full_years": years[0]},
            "after": {"pairs": pairs[1], "full_years": years[1]},
            "wells": {"affected": 2, "control": controls},
            "rain": None,
        },
    )


def control(trench):
    return a_well(trench.structure.site.watershed, trench.engineer, "OD-W07", role="control")


def propose(trench, word="not known", **more):
    return propose_verdict(structure_id=trench.structure.pk, word=word, by=trench.engineer, **more)


def test_a_covered_wall_is_not_known_and_says_what_would_end_it(trench):
    found = evidence_of(trench.structure)
    assert found.suggestion.verdict == "not known"
    assert standing_verdict(trench.structure) is None
    whats = " ".join(one.what for one in found.unknown)
    for words in ("pipe", "control well", "no comparison computed yet"):
        assert words in whats
    assert all(one.ends for one in found.unknown)


def test_the_list_of_sites_says_not_known_from_the_start_and_nothing_before_a_wall(trench):
    site = trench.structure.site
    assert visible_sites(trench.engineer).get(pk=site.pk).verdict_word == "not known"
    Structure.objects.filter(pk=trench.structure.pk).update(stage="rising")
    assert visible_sites(trench.engineer).get(pk=site.pk).verdict_word == ""


def test_a_proposal_stands_only_when_another_person_reviewed_it(trench, programme):
    proposed = propose(trench)
    assert (proposed.word, proposed.water_year, proposed.reviewed_by) == ("not known", YEAR, None)
    assert standing_verdict(trench.structure) is None
    stands = review_verdict(verdict_id=proposed.pk, by=programme, agrees=True)
    assert standing_verdict(trench.structure) == stands
    assert (stands.proposed_by, stands.reviewed_by) == (trench.engineer, programme)
    assert stands.version == proposed.version + 1
    acts = list(trench.structure.entries.values_list("act", flat=True))
    assert [one for one in acts if one in (PROPOSED, REVIEWED)] == [PROPOSED, REVIEWED]
    assert Verdict.objects.get(pk=proposed.pk).reviewed_by is None


def test_whoever_proposed_it_does_not_review_it(trench):
    """Rule: maker is never checker, not even with both postings."""
    proposed = propose(trench)
    district = trench.structure.site.watershed.district
    trench.engineer.postings.create(
        role=Role.PROGRAMME, district=district, valid_from=date(2020, 1, 1)
    )
    with pytest.raises(Refused, match="You proposed this verdict yourself"):
        review_verdict(verdict_id=proposed.pk, by=trench.engineer, agrees=True)


def test_an_engineer_reviews_nothing_and_a_manager_proposes_nothing(trench, programme):
    proposed = propose(trench)
    with pytest.raises(Refused, match="may not"):
        review_verdict(verdict_id=proposed.pk, by=trench.other, agrees=True)
    with pytest.raises(Refused, match="may not"):
        propose_verdict(structure_id=trench.structure.pk, word="not known", by=programme)


def test_a_proposal_that_goes_back_says_why_and_makes_room_for_the_next(trench, programme):
    proposed = propose(trench)
    with pytest.raises(Refused, match="missing"):
        review_verdict(verdict_id=proposed.pk, by=programme, agrees=False, why=" ")
    review_verdict(verdict_id=proposed.pk, by=programme, agrees=False, why="Pipes were read twice.")
    assert sent_back(proposed).content["why"] == "Pipes were read twice."
    assert open_proposal(trench.structure) is None
    assert standing_verdict(trench.structure) is None
    assert propose(trench).version == proposed.version + 1


def test_two_proposals_do_not_wait_at_once(trench):
    propose(trench)
    with pytest.raises(Refused, match="waits to be reviewed"):
        propose(trench)


@pytest.mark.parametrize("word", ["holds", "holds in part", "does not hold"])
def test_without_evidence_only_not_known_can_be_proposed(trench, word):
    with pytest.raises(Refused, match="does not bear"):
        propose(trench, word)


def test_too_few_full_years_leave_it_not_known(trench):
    """Rule VR-01: two full years on each side by the setting."""
    control(trench)
    compared(trench, years=(2, 1))
    with pytest.raises(Refused, match="1 after; 2 are needed"):
        propose(trench, "holds")


def test_wells_without_a_head_hold_nothing_by_the_paper(trench):
    """The verdict paper asks for the head across the wall for any word but not known."""
    control(trench)
    compared(trench)
    assert evidence_of(trench.structure).suggestion.verdict == "holds"
    with pytest.raises(Refused, match="head across the wall is blank"):
        propose(trench, "holds")


def test_a_year_that_is_not_over_gets_no_verdict(trench):
    with pytest.raises(Refused, match="2025-26 is not over"):
        propose(trench, water_year=YEAR + 1)


def test_no_wall_no_verdict(trench):
    Structure.objects.filter(pk=trench.structure.pk).update(stage="rising")
    with pytest.raises(Refused, match="No wall stands"):
        propose(trench)


def test_the_paper_for_the_move_to_judged_is_filed_with_the_proposal(trench):
    propose(trench, remarks="Well 4 was never found again.")
    paper = trench.structure.papers.get(kind="verdict")
    assert paper.content["verdict"] == "not known"
    assert paper.content["water_year"] == year_words(YEAR) == "2024-25"
    assert paper.content["not_known"].endswith("Well 4 was never found again.")
