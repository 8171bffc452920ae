"""Papers: what each asks for, and what its rules say. Oracle: the office's practice, 3, 6 and 7."""

from __future__ import annotations

import csv
import json
from datetime import date
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.life.drawing_rules import Limits
from structures.life.paper import Paper, PaperField
from structures.life.paper_reader import blank_content, from_form, judge_photo, read_paper
from structures.life.paper_rules import (
    open_findings,
    unanswered,
    underflow_m3_per_day,
    unheard,
)
from structures.life.papers import MADE_ELSEWHERE, PAPERS, WRITTEN_HERE
from tests.structures.life.written import GOOD


def told(kind, **changes):
    """Findings of a good paper with some answers changed; None takes an answer away."""
    given = {key: value for key, value in (GOOD[kind] | changes).items() if value is not None}
    return read_paper(kind, given)[1]


def sentences(kind, **changes):
    return [(one.rule, one.level, f"{one.what} {one.remedy}") for one in told(kind, **changes)]


@pytest.mark.parametrize("paper", WRITTEN_HERE, ids=lambda paper: paper.kind)
def test_a_good_paper_is_read_whole_and_in_order(paper):
    content, found = read_paper(paper.kind, GOOD[paper.kind])
    assert found == ()
    assert list(content) == [field.name for field in paper.fields]
    assert json.loads(json.dumps(content)) == content


@pytest.mark.parametrize("paper", WRITTEN_HERE, ids=lambda paper: paper.kind)
def test_what_was_read_reads_the_same_again(paper):
    """Law: content is a paper itself, whether it comes as text from a page or as values."""
    content, _ = read_paper(paper.kind, GOOD[paper.kind])
    assert read_paper(paper.kind, content) == (content, ())


@pytest.mark.parametrize(
    ("kind", "name"),
    [(paper.kind, field.name) for paper in WRITTEN_HERE for field in paper.fields],
)
def test_a_required_field_left_blank_blocks_at_that_field(kind, name):
    field = PAPERS[kind].field(name)
    given = {key: value for key, value in GOOD[kind].items() if key != name}
    blocked = {one.field for one in read_paper(kind, given)[1] if one.level == "block"}
    if field.required:
        assert name in blocked


@pytest.mark.parametrize("paper", WRITTEN_HERE, ids=lambda paper: paper.kind)
def test_an_unknown_answer_is_refused_with_the_near_name(paper):
    name = paper.fields[0].name
    (found,) = read_paper(paper.kind, GOOD[paper.kind] | {f"{name}x": "1"})[1]
    assert found.sentence().endswith(f"There is no such field on this paper. Was {name} meant?")


def test_what_is_made_elsewhere_has_no_form():
    for paper in MADE_ELSEWHERE:
        with pytest.raises(KeyError, match="made elsewhere"):
            read_paper(paper.kind, {})
    with pytest.raises(KeyError):
        read_paper("letter", {})


NUMBERS = [
    (paper.kind, field)
    for paper in WRITTEN_HERE
    for field in paper.fields
    if field.kind in {"number", "whole"}
]


@pytest.mark.parametrize(
    ("kind", "field"), NUMBERS, ids=[f"{kind}-{field.name}" for kind, field in NUMBERS]
)
def test_a_number_outside_its_range_or_with_words_is_refused(kind, field):
    for slip in (field.low - 1, field.high + 1, 10**400, "three", "1,5", "nan"):
        (first, *_) = [one for one in told(kind, **{field.name: slip}) if one.field == field.name]
        assert first.level == "block"


def test_every_number_says_its_range_and_every_measure_its_unit():
    for _, field in NUMBERS:
        assert field.low is not None
        assert field.high is not None
        ends = {"_m": "m", "_m3": "m3", "_m2": "m2", "_km": "km", "_percent": "%", "_mm": "mm"}
        for end, unit in ends.items():
            if field.name.endswith(end):
                assert field.unit == unit


def test_the_unusual_is_kept_and_asked_about():
    """Oracle: width of the bed 5-300 m is usual; outside it is asked about, not thrown away."""
    content, (found,) = read_paper("walk-over", GOOD["walk-over"] | {"bed_width_m": "420"})
    assert content["bed_width_m"] == 420.0
    assert (found.level, found.what) == ("warn", "420 is unusual; 5 to 300 m is usual.")


@pytest.mark.parametrize(
    ("day", "words"),
    [
        ("2026-02-30", "does not exist"),
        ("10.04.2026", "is no day"),
        ("2026-4-1", "is no day"),
        ("20260401", "is no day"),
        (20260401, "is no day"),
        ("1026-04-01", "cannot be"),
    ],
)
def test_a_day_that_cannot_be_is_refused(day, words):
    (found,) = told("check", checked_on=day)
    assert words in found.what


def test_a_day_may_come_as_a_day():
    content, _ = read_paper("check", GOOD["check"] | {"checked_on": date(2026, 4, 10)})
    assert content["checked_on"] == "2026-04-10"


# --- rules, message by message


def test_pl_01_and_pl_03_ask_for_the_position():
    where = "No position for this place. Stand on the line and take it, or type it from the map "
    assert sentences("note", latitude=None) == [("PL-01", "block", f"{where}sheet and say so.")]
    assert sentences("note", accuracy_m=31) == [
        (
            "PL-03",
            "warn",
            "The position is only good to 31 m. Take it again under open sky if you can.",
        )
    ]
    assert sentences("note", accuracy_m=30) == []


def test_pl_05_none_found_is_an_answer_and_blank_is_not():
    blank = 'Who uses water below this place is blank. Write the list, or "none found" within '
    assert sentences("walk-over", downstream=None) == [("PL-05", "block", f"{blank}how many km.")]
    assert sentences("walk-over", downstream=[], none_found_within_km=5) == []
    (both,) = told("walk-over", none_found_within_km=5)
    assert both.remedy == "Leave one of the two out."
    assert told("walk-over", wells=None)[0].what == "Wells nearby are blank."
    assert told("walk-over", wells=None, no_wells="yes") == ()


def test_no_leave_no_survey_and_services_wait():
    row = GOOD["survey-permission"]["land"][0] | {"leave": "refused"}
    (found,) = told("survey-permission", land=[row])
    assert (found.level, found.what) == ("block", "Leave to enter bed and left bank was refused.")
    (found,) = told("survey-permission", services="not known")
    assert (found.level, found.what) == ("hold", "Cables and pipes: not known.")
    (found,) = told("survey-permission", services="found")
    assert found.what == "Cables or pipes were found."
    assert told("survey-permission", land=[])[0].what == "There is no row."


def test_uf_02_k_has_a_range_and_a_source():
    assert sentences("underflow", k_source=None) == [
        ("UF-02", "block", "Where does K come from? Pumping test, grain size or table?")
    ]
    same = {"k_low_m_per_day": 18, "k_high_m_per_day": 18}
    assert [one.rule for one in told("underflow", **same)] == ["UF-02"]
    (found,) = told("underflow", k_low_m_per_day=20)
    assert found.what == "K runs 20, 18, 40 m/day: the range is upside down."


def test_uf_03_too_little_water_asks_why():
    """Oracle: hand product of OD-01, high K: 40 x 89.2 x 0.0042 = 14.99 m3/day, low 3.00."""
    said = "Even at best 15.0 m3/day passes. Is a wall worth it? Say why."
    assert sentences("underflow", use_below_m3_per_day=3.1) == [("UF-03", "warn", said)]
    assert sentences("underflow", use_below_m3_per_day=2.9) == []
    assert sentences("underflow", use_below_m3_per_day=3.1, worth_it="For cattle only.") == []


def test_uf_04_and_uf_05():
    assert sentences("underflow", only_wetted="no") == [
        ("UF-04", "hold", "A counts the dry part above the water table. Use the wetted area.")
    ]
    assert [one[:2] for one in sentences("underflow", shares=[{"settlement": "Pirrumad"}])] == [
        ("UF-05", "block")
    ]
    (found,) = told("underflow", shares=[])
    assert found.remedy == "Say what each settlement below keeps in a dry year."
    assert told("underflow", shares=[], nobody_below="yes") == ()
    assert told("underflow", nobody_below="yes")[0].field == "nobody_below"


def test_underflow_of_the_demo_is_k_times_a_times_i():
    """Oracle: columns q_* of the demo's underflow.csv, printed to 0.1 m3/day."""
    with Path("fixtures/demo/underflow.csv").open() as file:
        rows = list(csv.DictReader(file))
    assert len(rows) == 10
    for row in rows:
        sheet = {f"k_{which}_m_per_day": float(row[f"k_{which}_m_day"]) for which in WHICH}
        sheet |= {
            "wetted_area_m2": float(row["wetted_area_m2"]),
            "gradient": float(row["gradient"]),
        }
        told = [float(row[f"q_{which}_m3_day"]) for which in WHICH]
        assert underflow_m3_per_day(sheet) == pytest.approx(told, abs=0.05 + 1e-9)


WHICH = ("low", "likely", "high")


@pytest.mark.parametrize(
    ("changes", "rule", "level", "words"),
    [
        ({"side_slope": 0}, "DW-01", "block", "Refused: vertical sides in wet sand kill."),
        (
            {"side_slope": 0, "support_design": "LD-7"},
            "DW-01",
            "block",
            "Refused: vertical sides in wet sand kill.",
        ),
        ({"side_slope": 0, "wet_sand": "no"}, "DW-02", "block", "steeper than 1"),
        ({"side_slope": 1.4}, "DW-02", "block", "Side 1.4 is steeper than 1.5 for this ground."),
        ({"trench_depth_m": 6.2}, "DW-03", "block", "Trench 6.2 m deep with the key."),
        ({"water_goes_to": None}, "DW-08", "hold", "Where does pumped water go?"),
        ({"clay_proven_m3": 183}, "DW-06", "hold", "Clay proven 183 m3, needed 183.5."),
        ({"bund_distance_m": 49}, "DW-07", "block", "Borrow pit is 49 m from the tank bund."),
        (
            {"bund_distance_m": 49, "bund_consent": "C-3"},
            "DW-07",
            "block",
            "Borrow pit is 49 m from the tank bund.",
        ),
        ({"bund_distance_m": 50}, "DW-07", "hold", "Borrow pit is 50 m from the tank bund."),
        ({"no_bund_near": None}, "DW-07", "block", "is blank"),
    ],
)
def test_rules_of_the_drawing_sheet(changes, rule, level, words):
    found = [one for one in told("drawing-sheet", **changes) if one.rule]
    assert [(one.rule, one.level) for one in found] == [(rule, level)]
    assert words in found[0].what


def test_a_signed_design_opens_the_steep_and_the_deep_and_consent_the_pit():
    assert [
        one.level
        for one in told("drawing-sheet", side_slope=1.2, trench_depth_m=7, support_design="LD-7")
    ] == ["warn"]  # 1.2 is unusual all the same
    assert told("drawing-sheet", bund_distance_m=50, bund_consent="owner 3/26, LD-7") == ()


def test_an_office_may_be_stricter_about_depth_and_bund():
    strict = Limits(licensed_depth_m=4.0, bund_least_m=80.0)
    sheet = GOOD["drawing-sheet"] | {"trench_depth_m": 4.1, "bund_distance_m": 79}
    assert [one.rule for one in read_paper("drawing-sheet", sheet, limits=strict)[1]] == [
        "DW-03",
        "DW-07",
    ]


def test_a_check_names_what_is_open_and_none_found_is_an_answer():
    finding = {"what": "key too thin", "answer": "drawn thicker", "state": "closed"}
    assert told("check", findings=[finding], none_found=None) == ()
    opened = finding | {"state": "open", "answer": ""}
    content, (found,) = read_paper(
        "check", GOOD["check"] | {"findings": [opened], "none_found": "no"}
    )
    assert (found.level, found.what) == ("hold", '"key too thin" is open.')
    assert open_findings(content) == ("key too thin",)
    (found,) = told("check", findings=[finding | {"answer": ""}], none_found=None)
    assert found.what == '"key too thin" is closed without an answer.'
    assert told("check", none_found=None)[0].what == "Findings are blank."
    assert told("check", none_found="no")[0].what == "Findings are blank."
    assert told("check", findings=[finding])[0].remedy == "Leave one out."


def test_a_hearing_holds_what_is_unanswered_and_counts_who_was_left_out():
    content, found = read_paper("hearing", GOOD["hearing"])
    assert found == ()
    assert unheard(["Mandolerra", "pirrumad  East", "Gomdallu"], [content]) == ("Gomdallu",)
    open_one = {"settlement": "Mandolerra", "objection": "the lower well"}
    content, (held,) = read_paper(
        "hearing", GOOD["hearing"] | {"objections": [open_one], "none_raised": None}
    )
    assert held.what == "Without an answer: Mandolerra: the lower well."
    assert unanswered(content) == ("Mandolerra: the lower well",)
    nobody = GOOD["hearing"]["settlements"][0] | {"present": 0}
    assert told("hearing", settlements=[nobody])[0].what == "Nobody of Mandolerra was present."
    assert told("hearing", none_raised=None)[0].what == "Objections are blank."


def test_sg_01_and_sg_02_on_the_season_sheet():
    """Oracle: by hand. 10 April + 38 + 10 days = 28 May; + 47 + 10 = 6 June."""
    assert told("season", early_flow_on="2026-06-06") == ()
    assert sentences("season", early_flow_on="2026-06-05") == [
        (
            "SG-02",
            "warn",
            "With rock at the deep limit 1 day is missing. Open earlier, or work with more gangs.",
        )
    ]
    assert [one.rule for one in told("season", early_flow_on="2026-05-28")] == ["SG-02"]
    assert sentences("season", early_flow_on="2026-05-22") == [
        ("SG-01", "block", "Too late by 6 days. Do not open this season.")
    ]
    assert told("season", days_needed_deep=37)[0].remedy == "Look at both figures."
    assert told("season", clay_tested_on=None)[0].level == "hold"
    assert told("season", services="not known")[0].level == "hold"


def test_hand_over_closing_and_bed():
    wells = [GOOD["handover"]["wells"][0] | {"role": "upstream", "reader": ""}]
    assert [one.what for one in told("handover", wells=wells)] == [
        "No control well is named.",
        "Nobody is named who reads.",
    ]
    assert told("handover", raw_water="no")[0].level == "block"
    assert told("close-off", ground_safe="no")[0].level == "block"
    assert told("restored-bed", drained_sand="no")[0].level == "hold"
    assert told("restored-bed", drained_sand="no", remarks="Gravel; engineer-2 agreed.") == ()


def test_verdict_rules_let_only_not_known_pass_without_evidence():
    bare = {
        "years_after": 1,
        "controls": None,
        "head_across_m": None,
        "readings_waiting": 3,
        "rain_before_mm": None,
        "rain_allowed_for": None,
    }
    assert [one.rule for one in told("verdict", **bare)] == ["VR-01", "VR-02", "", "VR-04", "VR-03"]
    assert told("verdict", **bare)[0].what == (
        "1 full water years after covering, 2 before; 2 needed."
    )
    assert told("verdict", verdict="not known", **bare) == ()
    assert told("verdict", rain_after_mm=960, rain_before_mm=800) == ()
    (found,) = told("verdict", rain_after_mm=961, rain_before_mm=800)
    assert (found.rule, found.what) == ("VR-03", "Rain 800 and 961 mm: not alike.")


def test_a_refused_field_does_not_hide_what_is_wrong_elsewhere():
    found = told("underflow", gradient="steep", only_wetted="no", shares=[])
    assert [one.rule for one in found] == ["", "UF-04", "UF-05"]


# --- photos, pages, shape


def test_photos_are_asked_for_where_a_paper_needs_one():
    (found,) = judge_photo("hearing", 0)
    assert found.sentence() == (
        "minutes of the hearing, photo: No photo of the signed minutes. "
        "Print the sheet, have it signed, and take a photo of it."
    )
    assert judge_photo("hearing", 1) == ()
    assert judge_photo("restored-bed", 0)[0].what.startswith("No photo of the restored bed")
    assert judge_photo("check", 0) == ()


def test_a_page_hands_in_rows_by_flat_names_and_blank_rows_fall_out():
    flat = {
        "settlements-0-settlement": "Mandolerra",
        "settlements-0-present": "31",
        "settlements-2-settlement": "Pirrumad",
        "settlements-1-settlement": " ",
        "none_raised": "yes",
        "objections-0-answer": "",
        "nothing": "",
    }
    assert from_form("hearing", flat) == {
        "settlements": [
            {"settlement": "Mandolerra", "present": "31"},
            {"settlement": "Pirrumad"},
        ],
        "none_raised": "yes",
        "nothing": "",
    }


def test_rows_that_are_none_are_refused_by_row():
    (found,) = told("hearing", settlements="Mandolerra")
    assert found.what == 'Rows were expected here, not "Mandolerra".'
    found = told("hearing", settlements=[GOOD["hearing"]["settlements"][0], "Pirrumad"])
    assert found[0].where == "minutes of the hearing, settlements, row 2"
    (found,) = told("hearing", settlements=GOOD["hearing"]["settlements"] * 201)
    assert found.what == "402 rows are more than 200."
    (found,) = told("check", findings=[{"what": "a", "state": "closed", "answr": "b"}])[:1]
    assert found.remedy == "Was answer meant?"


def test_a_blank_paper_has_every_key():
    for paper in WRITTEN_HERE:
        assert blank_content(paper) == read_paper(paper.kind, {})[0]


JSON = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=30),
    lambda inner: (
        st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=12), inner, max_size=3)
    ),
    max_leaves=8,
)


@given(st.data())
def test_whatever_is_handed_in_gets_content_and_findings_never_a_crash(data):
    """Law: the reader is total over JSON, and content without a block is JSON again."""
    paper = data.draw(st.sampled_from(WRITTEN_HERE))
    names = st.sampled_from([field.name for field in paper.fields]) | st.text(max_size=12)
    given = data.draw(st.dictionaries(names, JSON, max_size=6))
    content, found = read_paper(paper.kind, dict(GOOD[paper.kind]) | given)
    assert list(content) == [field.name for field in paper.fields]
    assert json.loads(json.dumps(content, allow_nan=False)) == content
    for one in found:
        assert one.what
        assert one.remedy


@pytest.mark.parametrize(
    "wrong",
    [
        {"kind": "choice"},
        {"choices": ("a",)},
        {"kind": "rows"},
        {"columns": (PaperField("a", "A"),)},
        {"least": 1},
        {
            "kind": "rows",
            "columns": (PaperField("a", "A", "rows", columns=(PaperField("b", "B"),)),),
        },
    ],
)
def test_a_field_that_contradicts_itself_cannot_be_made(wrong):
    with pytest.raises(ValueError, match="x: "):
        PaperField("x", "X", **wrong)


def test_a_paper_that_contradicts_itself_cannot_be_made():
    twice = (PaperField("a", "A"), PaperField("a", "A"))
    with pytest.raises(ValueError, match="stands twice"):
        Paper("x", "x", "?", ("field",), twice)
    with pytest.raises(ValueError, match="signers"):
        Paper("x", "x", "?", ("field",), signed=True)
    with pytest.raises(KeyError, match="no field"):
        PAPERS["note"].field("colour")
