"""Moves: stage x role x record, against the office's table as `practice` has it."""

from __future__ import annotations

from dataclasses import replace
from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.life.blocks import BLOCKS
from structures.life.facts import FACT_NAMES, Facts
from structures.life.move_table import MOVES, find_move, moves_from, return_stage
from structures.life.moves import Evidence, MoveAsked, judge_move, missing_for_next
from structures.life.papers import PAPERS
from structures.life.stages import ON_THE_LINE, STAGES
from tests.structures.life.practice import AT, BESIDE, LINE, ROLES, ROWS, asked, evidence, facts

HURDLES = [(row, hurdle) for row in ROWS for hurdle in row.hurdles]
ROW_IDS = [f"{row.start or 'new'}-to-{row.to}" for row in ROWS]
HURDLE_IDS = [f"{row.to}-{hurdle.fact}" for row, hurdle in HURDLES]


def test_the_table_has_the_eighteen_moves_of_the_line_in_their_order():
    assert [row.to for row in LINE] == list(ON_THE_LINE)
    assert [move.ends for move in MOVES[:18]] == [(row.to,) for row in LINE]


@pytest.mark.parametrize("row", ROWS, ids=ROW_IDS)
def test_with_role_papers_and_facts_a_move_is_made(row):
    assert judge_move(asked(row), evidence(row), facts(row)) == ()


@pytest.mark.parametrize("role", ROLES)
@pytest.mark.parametrize("row", ROWS, ids=ROW_IDS)
def test_a_role_moves_where_the_table_says_so_and_nowhere_else(row, role):
    found = judge_move(asked(row, role), evidence(row), facts(row))
    assert [one.rule for one in found] == ([] if role in row.roles else ["SL-02"])


@pytest.mark.parametrize("row", ROWS, ids=ROW_IDS)
def test_without_a_posting_nobody_moves(row):
    found = judge_move(asked(row, roles=frozenset()), evidence(row), facts(row))
    assert found[0].what == f"Somebody without a posting here cannot move to {row.to}."


@pytest.mark.parametrize(
    ("row", "paper"),
    [(row, paper) for row in ROWS for paper in row.papers],
    ids=lambda one: one if isinstance(one, str) else one.to,
)
def test_each_paper_is_asked_for_by_name_with_who_can_bring_it(row, paper):
    found = judge_move(asked(row), evidence(row, without=paper), facts(row))
    title = PAPERS[paper].title
    assert [one.rule for one in found] == ["SL-01"]
    assert found[0].what == f"Missing for {row.to}: {title}."
    assert found[0].remedy == f"{title[0].upper()}{title[1:]}: {PAPERS[paper].who()}."


@pytest.mark.parametrize("row", ROWS, ids=ROW_IDS)
def test_nobody_passes_a_step_on_their_own_work(row):
    found = judge_move(asked(row, by="maker-1"), evidence(row), facts(row))
    assert [one.field for one in found] == (["maker"] if row.others_work else [])


@pytest.mark.parametrize(("row", "hurdle"), HURDLES, ids=HURDLE_IDS)
def test_each_block_of_the_table_blocks_in_its_words(row, hurdle):
    found = judge_move(asked(row), evidence(row), facts(row, **{hurdle.fact: hurdle.bad}))
    assert [hurdle.words in one.what for one in found] == [True]
    assert {one.level for one in found} == {"block"}
    assert all(one.remedy for one in found)


@pytest.mark.parametrize(("row", "hurdle"), HURDLES, ids=HURDLE_IDS)
def test_what_is_not_known_blocks_and_is_said_to_be_not_known(row, hurdle):
    found = judge_move(asked(row), evidence(row), facts(row, **{hurdle.fact: None}))
    assert found
    assert all(one.what.startswith("Cannot be judged: ") for one in found)


@pytest.mark.parametrize("row", ROWS, ids=ROW_IDS)
def test_nothing_moves_on_nothing(row):
    assert judge_move(asked(row), (), Facts()) != ()


@given(st.data())
def test_whatever_is_missing_together_is_told_together(data):
    """Law: findings of a move are those of each lack alone, put together."""
    row = data.draw(st.sampled_from(ROWS))
    lacks = data.draw(st.sets(st.sampled_from(row.hurdles))) if row.hurdles else set()
    bad = {one.fact: one.bad for one in lacks}
    paper = data.draw(st.sampled_from(("", *row.papers)))
    role = data.draw(st.sampled_from(ROLES))
    found = judge_move(asked(row, role), evidence(row, without=paper), facts(row, **bad))
    alone = [
        *judge_move(asked(row, role), evidence(row), facts(row)),
        *judge_move(asked(row), evidence(row, without=paper), facts(row)),
        *judge_move(asked(row), evidence(row), facts(row, **bad)),
    ]
    assert sorted(one.what for one in found) == sorted(one.what for one in alone)


def test_over_its_limit_the_district_sends_the_sanction_up():
    row = LINE[8]
    over = facts(row, within_district_limit=False)
    assert judge_move(asked(row, "programme"), evidence(row), over) == ()
    (found,) = judge_move(asked(row, "district"), evidence(row), over)
    assert found.sentence() == (
        "OD-02, role: The amount lies over the limit of the district. Ask the programme manager."
    )
    unknown = facts(row, within_district_limit=None)
    (found,) = judge_move(asked(row, "district"), evidence(row), unknown)
    assert found.what.startswith("Cannot be judged: whether the amount")
    assert judge_move(asked(row, "programme"), evidence(row), unknown) == ()


def test_not_known_is_the_one_verdict_that_needs_no_years():
    row = LINE[17]
    unknown = facts(row, verdict="not known", full_years_enough=False)
    assert judge_move(asked(row), evidence(row), unknown) == ()


def test_a_halt_that_moves_no_cost_needs_no_option_paper():
    row = next(row for row in BESIDE if row.start == "halted")
    still = facts(row, cost_moves=False, option_way=None)
    assert judge_move(asked(row), evidence(row, without="option-paper"), still) == ()
    unknown = facts(row, cost_moves=None, option_way=None)
    found = judge_move(asked(row), evidence(row), unknown)
    assert [one.field for one in found] == ["option-undecided"]


def test_a_restart_leads_to_where_it_was_halted():
    row = next(row for row in BESIDE if row.start == "halted")
    (found,) = judge_move(asked(row, left="rising"), evidence(row), facts(row))
    assert found.what == "It was halted at rising and comes back as rising, not digging."
    (found,) = judge_move(asked(row, left=""), evidence(row), facts(row))
    assert found.what == "Cannot be judged: the stage at which it was halted."


UNTIL_CLEARED = list(ON_THE_LINE)[:12]


@pytest.mark.parametrize("start", STAGES)
@pytest.mark.parametrize("to", ON_THE_LINE)
def test_back_goes_whatever_is_not_dug_and_afterwards_only_papers(start, to):
    """Oracle: before a trench is open to any earlier stage; after covering one stage at a time."""
    order = list(ON_THE_LINE)
    if start not in order or order.index(to) >= order.index(start):
        return
    move = find_move(start, to)
    if start in UNTIL_CLEARED:
        assert move.name == "send back"
    elif (start, to) in {
        ("measured-up", "covered"),
        ("handed-over", "measured-up"),
        ("judged", "handed-over"),
    }:
        assert move.name == "take back"
    else:
        assert move is None


def test_sending_back_needs_a_reason_and_no_paper():
    back = MoveAsked("OD-02", "heard", "drawn", "district-1", frozenset({"district"}))
    (found,) = judge_move(back, (), Facts())
    assert found.what == "To move from heard to drawn a reason is needed."
    assert judge_move(replace(back, reason="Pirrumad showed another spring."), (), Facts()) == ()
    field = replace(back, reason="Pirrumad showed another spring.", roles=frozenset({"field"}))
    assert [one.rule for one in judge_move(field, (), Facts())] == ["SL-02"]


@pytest.mark.parametrize(
    ("left", "back"),
    [("noted", "noted"), ("approved", "approved"), ("signed", "signed"), ("cleared", "signed"),
     ("rising", "signed"), ("halted", "signed")],
)  # fmt: skip
def test_what_was_set_aside_comes_back_where_it_left_and_is_cleared_anew(left, back):
    assert return_stage(left) == back


@pytest.mark.parametrize("left", ["covered", "judged", "closed-off", "nowhere"])
def test_what_is_covered_was_never_closed_off(left):
    with pytest.raises(ValueError, match="nothing is closed off"):
        return_stage(left)


@pytest.mark.parametrize("start", STAGES)
def test_closing_off_is_open_until_covered(start):
    order = list(ON_THE_LINE)
    possible = start == "halted" or (start in order and order.index(start) < order.index("covered"))
    assert (find_move(start, "closed-off") is not None) == possible


@pytest.mark.parametrize("start", ["", *STAGES])
@pytest.mark.parametrize("to", STAGES)
def test_a_pair_of_stages_is_led_by_one_move_or_by_none(start, to):
    """Law: the table is a function of the pair, and no stage is skipped forwards."""
    leading = [move for move in moves_from(start) if to in move.ends]
    move = find_move(start, to)
    assert move is None or move in leading
    order = ["", *ON_THE_LINE]
    if start in order and to in order and order.index(to) > order.index(start) + 1:
        assert move is None


def test_a_move_that_does_not_exist_says_what_does():
    skip = MoveAsked("OD-04", "noted", "drawn", "engineer-1", frozenset({"engineer"}))
    (found,) = judge_move(skip, (), Facts())
    assert found.sentence() == (
        "OD-04, to: No move leads from noted to drawn. From here: walked, closed-off."
    )
    (found,) = judge_move(replace(skip, to="noted"), (), Facts())
    assert found.what == "It is noted already."


def test_every_block_and_fact_is_used_and_every_paper_is_known():
    used = {name for move in MOVES for name in move.blocks}
    assert used == set(BLOCKS)
    told = {hurdle.fact for _, hurdle in HURDLES}
    beside = {"today", "within_district_limit", "verdict", "cost_moves"}
    assert told | beside == set(FACT_NAMES)
    for move in MOVES:
        assert set(move.papers) | set(move.others_work) <= set(PAPERS)


def test_what_is_missing_for_the_next_stage_names_papers_and_people():
    lines = missing_for_next("noted", (), Facts())
    assert [(one.what, one.who) for one in lines] == [
        ("walk-over sheet", "field staff or an engineer")
    ]
    lines = missing_for_next("signed", (), Facts(today=date(2026, 4, 10), clay_tested=False))
    assert [one.name for one in lines] == ["season", "clay-not-tested"]
    paper = Evidence("season", "0" * 64, "engineer-1", AT)
    lines = missing_for_next("signed", (paper,), Facts(clay_tested=True, services_answered=True))
    assert [one.what for one in lines] == [
        "Cannot be judged: the last opening day. Enter it first.",
        "Cannot be judged: who is trained and on site. Enter it first.",
    ]


def test_nothing_is_missing_where_nothing_follows():
    assert missing_for_next("judged", (), Facts()) == ()
    assert missing_for_next("closed-off", (), Facts()) == ()
    assert [one.name for one in missing_for_next("halted", (), Facts(), left="digging")][:2] == [
        "restart",
        "option-paper",
    ]
    with pytest.raises(ValueError, match="there is no stage"):
        missing_for_next("started", (), Facts())


@given(st.sampled_from(LINE))
def test_what_is_missing_is_what_the_judge_finds(row):
    """Law: nothing missing means that somebody may move, and the reverse."""
    if not row.start:
        return
    assert missing_for_next(row.start, evidence(row), facts(row)) == ()
    assert judge_move(asked(row), evidence(row), facts(row)) == ()
    assert missing_for_next(row.start, (), Facts()) != ()
