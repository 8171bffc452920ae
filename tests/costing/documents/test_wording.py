from datetime import date

import pytest

from costing.documents.wording import (
    amount_words,
    answer,
    day_words,
    item_words,
    not_known,
    rests_on,
    unit_words,
)
from structures.takeoff.quantity import Quantity
from tests.costing.documents.appraisals import estimated, example, without_rock


@pytest.mark.parametrize(
    ("value", "words"),
    [(None, "not known"), (0.0, "0.00"), (0.0216, "0.0216"), (38.404, "38.40"), (-2.0, "-2.00")],
)
def test_values_in_words(value, words):
    assert amount_words(value) == words


def test_days_units_and_items_as_they_stand_on_paper():
    assert day_words(date(2027, 3, 14)) == "14 Mar 2027"
    assert [unit_words(unit) for unit in ("m2", "m3", "m3/day", "hour")] == [
        "m²",
        "m³",
        "m³/day",
        "hour",
    ]
    assert item_words(Quantity("rock_key", "m3", 1.0)) == "rock key"
    assert item_words(Quantity("excavation", "m3", 1.0, 0.0, 1.5)) == "excavation 0.0 to 1.5 m"


def test_the_answer_of_example_a():
    """Oracle: handbook 13, example A: ends at 13.333333 and 66.666667, closed."""
    assert answer(example("A")) == (
        "As drawn, yes: rock reaches bed level 100.00 m at offset 13.33 m on the left and at "
        "66.67 m on the right. The rock line is the one an engineer settled."
    )


def test_an_estimated_line_says_how_often_a_flank_opens():
    found = estimated()
    share = round(100 * found.spread.open_flank_share)
    assert f"A flank opens in {share} of 100 draws of the line." in answer(found)


def test_what_is_not_known_names_the_open_side():
    """Oracle: handbook 13, example C: the right flank is open."""
    said = not_known(example("C"))
    assert "How far the right flank goes on is not known; quantities end with the line." in said
    assert not any("left flank" in line for line in said)


def test_without_rock_the_whole_survey_is_not_known():
    assert not_known(without_rock())[0] == (
        "Rock is not known from 0.00 to 68.00 m: no rock line, no wall."
    )


def test_what_the_figures_rest_on_is_named_in_full():
    found = estimated()
    words = rests_on(found)
    assert found.digest in words
    assert found.method in words
    assert str(found.rock.seed) in words
    assert found.schedule.schedule_id in words
