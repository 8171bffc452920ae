"""What differs between two surveys: every changed place once, nothing else."""

from __future__ import annotations

import copy
from pathlib import Path

from hypothesis import given
from hypothesis import strategies as st

from structures.documents.survey_changes import survey_changes
from structures.intake.pack_writer import pack_document
from structures.intake.survey_pack import read_pack

PACK = pack_document(read_pack(Path("fixtures/packs/OD-01.json")))


def test_a_survey_does_not_differ_from_itself():
    assert survey_changes(PACK, PACK) == ()


def test_changed_added_and_dropped_places_are_named():
    """Oracle: the three changes made here by hand."""
    new = copy.deepcopy(PACK)
    new["ground"][1]["level_m"] = 424.5
    gone = new["probes"].pop()
    new["soundings"][0]["readings"][2]["apparent_resistivity_ohm_m"] = 1.0
    found = survey_changes(PACK, new)
    assert [(one.part, one.where) for one in found] == [
        ("ground", f"{PACK['ground'][1]['offset_m']:g} m"),
        ("probes", f"{gone['offset_m']:g} m"),
        ("soundings", f"{PACK['soundings'][0]['sounding']}, 3"),
    ]
    assert found[0].new.startswith("level_m 424.5")
    assert found[1].new is None


@given(st.integers(0, len(PACK["ground"]) - 1), st.floats(0.01, 5.0))
def test_a_change_reads_backwards_with_its_sides_exchanged(place, by_m):
    new = copy.deepcopy(PACK)
    new["ground"][place]["level_m"] += by_m
    (there,), (back,) = survey_changes(PACK, new), survey_changes(new, PACK)
    assert (there.old, there.new) == (back.new, back.old)
