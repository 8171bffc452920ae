"""Hold points and strips. Oracle: the office's practice, section 4; the demo's works as they went."""

from __future__ import annotations

import csv
import itertools
from collections import defaultdict
from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.field_records import HOLDS, point_of
from structures.life.holds import (
    NINE,
    HoldRecord,
    Sight,
    StripSoFar,
    covered_unseen,
    holds_not_seen,
    judge_cover,
    judge_hold,
    next_hold,
    photo_counts,
)
from structures.life.strips import Strip, cut_strips, judge_found_rock

DAY = date(2026, 3, 20)
ORDER = ("H1", "H2", "H3", "H4", "H5", "H6", "H7.1", "H7.2", "H7.3", "H8", "H9")
WITH_PHOTO = {"H3", "H4", "H6", "H8"}  # rule HP-03


def seen(*holds, on=DAY, result="go"):
    return tuple(HoldRecord(hold, "field-1", "engineer-1", on, result) for hold in holds)


def sight(hold, **changes):
    return Sight(
        **{"hold": hold, "asked_by": "field-1", "seen_by": "engineer-1", "photos": 1} | changes
    )


def test_the_nine_are_named_as_the_office_names_them():
    """Oracle: the table of hold points, first two columns."""
    assert [(point.code, point.name) for point in NINE.values()] == [
        ("H1", "line and level pegs"),
        ("H2", "trench to rock"),
        ("H3", "rock cleaned and seen"),
        ("H4", "key cut"),
        ("H5", "water out"),
        ("H6", "film, lower face"),
        ("H7", "each clay layer"),
        ("H8", "film, upper face and top"),
        ("H9", "backfill"),
    ]
    assert tuple(NINE) == HOLDS
    unseen = {code for code, point in NINE.items() if point.without == "covered unseen for ever"}
    assert unseen == WITH_PHOTO


@pytest.mark.parametrize("place", range(len(ORDER)))
def test_in_their_order_the_holds_may_be_seen(place):
    strip = StripSoFar(3, seen(*ORDER[:place]))
    assert judge_hold(strip, sight(ORDER[place])) == ()


@pytest.mark.parametrize("missing", ORDER[:9])
@pytest.mark.parametrize("hold", ORDER)
def test_hp_01_nothing_is_seen_before_what_comes_first(hold, missing):
    """Oracle: H1 to H9 in order; a layer after the layer below; one layer at least before H8."""
    others = tuple(one for one in ORDER if one not in {missing, hold})
    strip = StripSoFar(3, seen(*others))
    found = judge_hold(strip, sight(hold))
    comes_first = ORDER.index(missing) < ORDER.index(hold)
    layer_left_out = missing.startswith("H7") and not hold.startswith("H7")
    if comes_first and not layer_left_out:
        first = missing
        assert [one.rule for one in found] == ["HP-01"]
        assert found[0].what == f"{hold} of strip 3 cannot be seen before {first}."
    else:
        assert found == ()


def test_hp_01_names_the_first_of_several():
    (found,) = judge_hold(StripSoFar(3, seen("H1")), sight("H6"))
    assert found.what == "H6 of strip 3 cannot be seen before H2."
    (found,) = judge_hold(StripSoFar(3, seen(*ORDER[:6])), sight("H8"))
    assert found.what == "H8 of strip 3 cannot be seen before H7.1."
    (found,) = judge_hold(StripSoFar(3, seen(*ORDER[:6])), sight("H7.12"))
    assert found.what == "H7.12 of strip 3 cannot be seen before H7.1."


def test_a_layer_that_was_asked_for_is_seen_before_the_film_goes_over_it():
    asked = HoldRecord("H7.2", "field-1")
    strip = StripSoFar(3, (*seen(*ORDER[:7]), asked))
    assert [one.what for one in judge_hold(strip, sight("H8"))] == [
        "H8 of strip 3 cannot be seen before H7.2."
    ]
    refused = replace(asked, seen_by="engineer-1", seen_on=DAY, result="no")
    strip = StripSoFar(3, (*seen(*ORDER[:7]), refused))
    assert [one.rule for one in judge_hold(strip, sight("H8"))] == ["HP-01"]
    strip = StripSoFar(3, (*strip.records, *seen("H7.2", result="go with note")))
    assert judge_hold(strip, sight("H8")) == ()


def test_hp_02_another_person_sees():
    (found,) = judge_hold(StripSoFar(3), sight("H1", seen_by="field-1"))
    assert (found.rule, found.what) == (
        "HP-02",
        "You asked for this; another person must see it.",
    )


@pytest.mark.parametrize("hold", ORDER)
def test_hp_03_a_photo_where_one_is_asked_for(hold):
    strip = StripSoFar(3, seen(*ORDER[: ORDER.index(hold)]))
    found = judge_hold(strip, sight(hold, photos=0))
    assert [one.rule for one in found] == (["HP-03"] if hold in WITH_PHOTO else [])
    for one in found:
        assert one.what.startswith(f"No photo of {NINE[hold].name} on strip 3.")
        assert "no photo is worth going in" in one.remedy


def test_no_is_an_answer_at_any_time_and_without_a_photo():
    assert judge_hold(StripSoFar(3), sight("H6", photos=0, lets_go=False)) == ()
    (found,) = judge_hold(StripSoFar(3), sight("H6", seen_by="field-1", lets_go=False))
    assert found.rule == "HP-02"


def test_a_no_takes_back_what_was_seen_before():
    strip = StripSoFar(3, (*seen("H1", "H2"), *seen("H2", result="no")))
    assert [one.what for one in judge_hold(strip, sight("H3"))] == [
        "H3 of strip 3 cannot be seen before H2."
    ]


def test_a_halted_strip_waits():
    (found,) = judge_hold(StripSoFar(6, seen("H1"), halted=True), sight("H2"))
    assert (found.rule, found.what) == ("HP-05", "Strip 6 is halted.")


def test_a_layer_needs_its_number_and_a_hold_point_its_name():
    strip = StripSoFar(3, seen(*ORDER[:6]))
    assert judge_hold(strip, sight("H7"))[0].what == "Which layer of clay?"
    for wrong in ("H0", "H10", "H7.0", "H6.1", "h1", ""):
        with pytest.raises(ValueError, match="no hold point"):
            judge_hold(strip, sight(wrong))


def test_what_lies_under_the_ground_is_past_but_the_backfill_is_seen_after():
    strip = StripSoFar(3, seen(*ORDER[:10]), covered_on=DAY)
    assert judge_hold(strip, sight("H9")) == ()
    strip = StripSoFar(3, seen(*ORDER[:9]), covered_on=DAY)
    assert "HP-04" in {one.rule for one in judge_hold(strip, sight("H8"))}


@pytest.mark.parametrize("missing", sorted(WITH_PHOTO))
def test_hp_04_covered_before_it_was_seen_is_covered_unseen_for_ever(missing):
    holds = [hold for hold in ORDER if hold != missing]
    strip = StripSoFar(7, seen(*holds), covered_on=DAY)
    assert covered_unseen(strip) == (missing,)
    found = judge_cover(strip)[0]
    assert (found.rule, found.level) == ("HP-04", "hold")
    assert found.what == (
        f"Strip 7 was covered on 2026-03-20 before {missing} {NINE[missing].name} was seen. "
        "Marked *covered unseen* for ever; its lines wait."
    )
    later = replace(strip, records=(*strip.records, *seen(missing, on=date(2026, 3, 21))))
    assert covered_unseen(later) == (missing,)
    assert judge_cover(later)[0].rule == "HP-04"


@pytest.mark.parametrize("missing", ["H1", "H2", "H5", "H9"])
def test_what_else_was_not_seen_is_held_and_leaves_no_mark(missing):
    strip = StripSoFar(7, seen(*(hold for hold in ORDER if hold != missing)), covered_on=DAY)
    assert covered_unseen(strip) == ()
    assert [(one.field, one.level) for one in judge_cover(strip)] == [(missing, "hold")]


@given(st.sets(st.sampled_from(ORDER)), st.sets(st.sampled_from(ORDER)))
def test_seeing_more_never_makes_a_mark_and_nothing_later_takes_it_away(one, more):
    """Law: the mark falls with what was seen up to the day; later records do not change it."""
    strip = StripSoFar(1, seen(*sorted(one)), covered_on=DAY)
    richer = StripSoFar(1, seen(*sorted(one | more)), covered_on=DAY)
    later = replace(strip, records=(*strip.records, *seen(*sorted(more), on=date(2026, 4, 1))))
    assert set(covered_unseen(richer)) <= set(covered_unseen(strip))
    assert covered_unseen(later) == covered_unseen(strip)


def test_an_open_strip_is_not_covered_unseen():
    assert covered_unseen(StripSoFar(1)) == ()
    assert judge_cover(StripSoFar(1)) == ()


@pytest.mark.parametrize(
    ("count", "hold"),
    [(0, "H1"), (4, "H5"), (6, "H7.1"), (7, "H7.2"), (10, "H9"), (11, None)],
)
def test_the_next_hold(count, hold):
    assert next_hold(StripSoFar(1, seen(*ORDER[:count]))) == hold


def test_holds_of_a_stage():
    """Oracle: digging H1, rising H2-H5, covered H6-H9 of every strip or the lasting mark."""
    new, begun = StripSoFar(1), StripSoFar(2, seen("H1", "H2", "H3"))
    assert holds_not_seen("digging", (new,)) == ("H1 of strip 1",)
    assert holds_not_seen("digging", (new, begun)) == ()
    assert holds_not_seen("rising", (new, begun)) == ("H4 of strip 2", "H5 of strip 2")
    done = StripSoFar(3, seen(*ORDER), covered_on=DAY)
    unseen = StripSoFar(4, seen("H1", "H2"), covered_on=DAY)
    assert holds_not_seen("covered", (done, unseen)) == ()
    assert holds_not_seen("covered", (done, begun)) == tuple(
        f"{hold} of strip 2" for hold in ("H6", "H7", "H8", "H9")
    )
    assert holds_not_seen("covered", ()) is None


def test_a_photo_says_its_place_and_its_day():
    assert photo_counts(taken_on=DAY, has_position=True, day=DAY)
    assert not photo_counts(taken_on=date(2025, 3, 20), has_position=True, day=DAY)
    assert not photo_counts(taken_on=DAY, has_position=False, day=DAY)
    assert not photo_counts(taken_on=None, has_position=True, day=DAY)


# --- the demo as it went


def demo_strips():
    """Records of the demo by strip, and when each strip was covered."""
    records = defaultdict(list)
    with Path("fixtures/demo/hold_points.csv").open() as file:
        for row in csv.DictReader(file):
            records[row["structure_id"], int(row["strip_no"])].append(row)
    with Path("fixtures/demo/strips.csv").open() as file:
        return [
            (row, records[row["structure_id"], int(row["strip_no"])])
            for row in csv.DictReader(file)
        ]


def record(row):
    on = date.fromisoformat(row["seen_at"][:10]) if row["seen_at"] else None
    return HoldRecord(row["hold"], row["asked_by"], row["seen_by"], on, row["result"])


def test_in_the_demo_one_strip_was_covered_unseen():
    """Oracle: strip 7 of TA-05, where H3, H4, H6 and H8 were asked for and nobody came."""
    marked = {}
    for row, asked in demo_strips():
        on = date.fromisoformat(row["covered_on"]) if row["covered_on"] else None
        strip = StripSoFar(int(row["strip_no"]), tuple(map(record, asked)), on)
        if covered_unseen(strip):
            marked[row["structure_id"], row["strip_no"]] = covered_unseen(strip)
    assert marked == {("TA-05", "7"): ("H3", "H4", "H6", "H8")}


def test_in_the_demo_every_other_hold_point_was_seen_by_the_rules():
    wrong = []
    for row, asked in demo_strips():
        so_far = []
        for one in asked:
            hold = record(one)
            if hold.seen_by:
                look = Sight(
                    hold.hold,
                    hold.asked_by,
                    hold.seen_by,
                    photos=int(one["photo"] == "yes"),
                    lets_go=hold.result != "no",
                )
                found = judge_hold(StripSoFar(int(row["strip_no"]), tuple(so_far)), look)
                wrong += [(row["structure_id"], row["strip_no"], hold.hold, f.rule) for f in found]
            so_far.append(hold)
    assert wrong == [("TA-05", "7", "H5", "HP-01"), ("TA-05", "7", "H9", "HP-01")]


# --- strips


def test_the_strips_of_the_demo_are_cut_from_its_left_ends():
    """Oracle: strips.csv, left and right ends of structures.csv, strips of 6 m."""
    ends = {}
    told = defaultdict(list)
    with Path("fixtures/demo/structures.csv").open() as file:
        for row in csv.DictReader(file):
            if row["left_end_m"]:
                ends[row["structure_id"]] = (float(row["left_end_m"]), float(row["right_end_m"]))
    for row, _ in demo_strips():
        strip = Strip(int(row["strip_no"]), float(row["from_m"]), float(row["to_m"]))
        told[row["structure_id"]].append(strip)
    assert len(told) == 6
    for code, strips in told.items():
        assert list(cut_strips(*ends[code])) == strips


@given(st.floats(-500, 500), st.floats(0.01, 500), st.floats(0.5, 20))
def test_strips_lie_end_to_end_and_none_is_longer(left_m, length_m, strip_m):
    """Law: none longer than asked but for 1 mm of rest and half a millimetre of rounding an end."""
    right_m = left_m + length_m
    strips = cut_strips(left_m, right_m, strip_m)
    assert strips[0].from_m == left_m
    assert strips[-1].to_m == right_m
    assert [strip.number for strip in strips] == list(range(1, len(strips) + 1))
    for one, following in itertools.pairwise(strips):
        assert one.to_m == following.from_m
    assert all(strip.to_m - strip.from_m <= strip_m + 0.002 + 1e-9 for strip in strips)
    assert len(strips) in {int(length_m // strip_m), int(length_m // strip_m) + 1, 1}


def test_a_rest_under_a_millimetre_is_no_strip():
    assert [strip.to_m for strip in cut_strips(0.0, 12.0005, 6.0)] == [6.0, 12.0005]
    assert len(cut_strips(0.0, 12.01, 6.0)) == 3


@pytest.mark.parametrize(
    ("left_m", "right_m", "strip_m"),
    [(5.0, 5.0, 6.0), (6.0, 5.0, 6.0), (0.0, float("inf"), 6.0), (0.0, 9.0, 0.0)],
)
def test_what_has_no_length_is_not_cut(left_m, right_m, strip_m):
    with pytest.raises(ValueError, match="no length"):
        cut_strips(left_m, right_m, strip_m)


def test_a_strip_that_ends_before_it_starts_cannot_be_made():
    with pytest.raises(ValueError, match="before its start"):
        Strip(1, 2.0, 2.0)


def test_hp_05_rock_below_the_drawn_range_halts_the_strip():
    """Oracle: OD-03 strip 6 of the demo, found at 405.29 m."""
    found = judge_found_rock(6, 405.29, 408.6, 409.1, over_percent=24.36)
    assert found.sentence() == (
        "strip 6, found_rock: Rock at 405.29 m, drawn 408.60\N{EN DASH}409.10. "
        "Strip halted, new estimate +24.4 %. Option paper needed."
    )
    assert (found.rule, found.level) == ("HP-05", "block")
    assert "is not known yet" in judge_found_rock(6, 405.29, 408.6, 409.1).what
    assert judge_found_rock(6, 408.6, 408.6, 409.1) is None
    assert judge_found_rock(6, 409.1, 408.6, 409.1) is None
    assert judge_found_rock(6, 409.2, 408.6, 409.1).level == "hold"
    assert judge_found_rock(6, 409.2, None, 409.1).what.endswith("range is not known.")


def test_layers_belong_to_their_hold_point():
    assert point_of("H7.12") == "H7"
