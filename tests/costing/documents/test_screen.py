"""The text for a terminal: every part says what it is, also where something is not known."""

from __future__ import annotations

from dataclasses import replace

from costing.documents.result import as_json
from costing.documents.screen import screen_text
from costing.price.abstract import NOT_INCLUDED
from structures.ground.refraction import RefractionReading
from structures.ground.sounding_refusals import Refusal
from tests.costing.documents.appraisals import estimated, example, unpriced, without_rock


def text(found):
    return screen_text(as_json(found))


def test_a_price_is_not_known_without_rock_and_not_asked_for_without_rates():
    assert "ESTIMATE: not known" in text(without_rock())
    assert "ESTIMATE: no rate schedule was given" in text(unpriced())


def test_the_estimate_says_what_it_leaves_out():
    """Oracle: handbook 5.10."""
    assert " ".join(text(example("A")).split()).count(NOT_INCLUDED) == 1
    assert "ramps" in NOT_INCLUDED


def test_percentiles_stand_with_the_share_of_open_flanks():
    found = estimated()
    words = text(found)
    assert f"P50 {found.spread.p50}" in words
    share = 100 * found.spread.open_flank_share
    assert f"a flank opens in {share:.0f} of 100 draws" in words


def test_a_refraction_line_gives_its_depth_or_its_reason():
    read = RefractionReading(40.0, "R1", (500.0, 3500.0), 6.4, 5.5, 7.9, 0.6)
    refused = RefractionReading(50.0, "R2", refusal=Refusal("no-branches", "it has no branches."))
    found = replace(example("A"), refraction=(read, refused))
    assert "refraction R1 at 40.0 m: rock at 6.4 m, 8 times in 10 between 5.5 and 7.9 m" in text(
        found
    )
    assert "refraction R2 at 50.0 m: no depth of rock: it has no branches." in text(found)
    assert as_json(found)["rock"]["refraction"][1]["refusal"] == {
        "code": "no-branches",
        "text": "it has no branches.",
    }
