import re
from dataclasses import replace

import pytest

from costing.documents.bundle import figures_of
from costing.documents.drawings import appraised_section
from costing.documents.report import report_data, report_pdf
from structures.ground.refraction import RefractionReading
from structures.ground.sounding_refusals import Refusal
from structures.life.cautions import CLOSING_SENTENCE
from tests.costing.documents.appraisals import (
    estimated,
    example,
    unpriced,
    without_hours,
    without_rock,
)
from tests.structures.documents.pdf import read_pdf


def printed(found):
    """All words of a report, in one line."""
    words = read_pdf(report_pdf(found)).words
    return re.sub(r"\s+", " ", words.replace("\n", " ")), words.replace("\n", "")


@pytest.fixture(scope="module")
def report_b():
    return printed(example("B"))


def test_the_report_of_example_b_prints_its_figures(report_b):
    """Oracle: handbook 13, example B."""
    words, _ = report_b
    for figure in (
        "249.70",
        "249.40",
        "54.00",
        "5.65",
        "6.05",
        "6.20",
        "177.95",
        "169.85",
        "128355.30",
        "137113.84",
        "648376.26",
        "32418.81",
        "12967.53",
        "693762.60",
        "693800.00",
    ):
        assert f" {figure} " in words, figure


def test_the_drawing_stands_in_it_with_words(report_b):
    _, letters = report_b
    for text in ("wall 54.00 m", "243.90 rock, lowest", "closed on rock", "1:500 and 1:200 on A4."):
        assert text in letters, text


def test_every_sheet_has_its_title_block(report_b):
    words, _ = report_b
    sheets = int(re.search(r"1 of (\d+)", words)[1])
    for place in range(1, sheets + 1):
        assert f"{place} of {sheets}" in words
    for head in ("prepared by, date", "checked by, date", "approved by, date", "revision"):
        assert words.count(head) == sheets, head
    assert words.count(example("B").digest[:12]) >= sheets
    assert words.count("14 Mar 2027") == sheets


def test_cautions_come_before_figures_and_end_with_their_sentence(report_b):
    words, _ = report_b
    assert (
        words.index("Cautions") < words.index("Section under the line") < words.index("Water value")
    )
    assert "BLOCK The trench goes 6.20 m down" in words
    sheets = int(re.search(r"1 of (\d+)", words)[1])
    assert words.count(CLOSING_SENTENCE) >= sheets


def test_every_caution_is_printed():
    """Whole or, where it stands there, in the list of what is not known."""
    for found in (example("C"), estimated(), without_rock()):
        words, _ = printed(found)
        for one in found.cautions:
            if one.code != "water-not-known":
                assert " ".join(one.text.split()) in words, one.code


def test_an_open_flank_is_no_and_incomplete():
    """Oracle: handbook 13, example C: right flank open, sums 337716.02 as far as surveyed."""
    words, letters = printed(example("C"))
    assert "No, not as surveyed: rock is still below the bed where the line ends" in words
    assert "on the right at offset 45.00 m" in words
    assert "INCOMPLETE" in words
    assert "337716.02" in words
    assert "figures of the surveyed part only" in words
    assert "open: rock not reached" in letters


def test_refraction_lines_are_listed_with_depth_or_reason():
    read = RefractionReading(40.0, "R1", (500.0, 3500.0), 6.4, 5.5, 7.9, 0.6)
    refused = RefractionReading(50.0, "R2", refusal=Refusal("no-branches", "it has no branches."))
    found = replace(example("B"), refraction=(read, refused))
    words, _ = printed(found)
    for said in (
        "Refraction lines",
        "R1 40.00 500, 3500 rock at 6.4 m, 8 times in 10 between 5.5 and 7.9 m",
        "R2 50.00 not known no depth of rock: it has no branches.",
    ):
        assert said in words
    assert figures_of(found)["refraction"][1] == {
        "label": "R2",
        "words": "no depth of rock: it has no branches.",
    }


def test_without_refraction_lines_none_are_named(report_b):
    assert "Refraction lines" not in report_b[0]


def test_what_is_not_known_is_said_and_never_zero():
    words, _ = printed(without_hours())
    assert "Price of dewatering (quantity not known)." in words
    assert "for sanction, rounded up to the next 100 not known" in words
    words, _ = printed(unpriced())
    assert "Cost: no rate schedule was given." in words
    assert "693762.60" not in words


def test_without_a_rock_line_there_is_no_wall_and_no_price():
    words, letters = printed(without_rock())
    assert "Not known: there is no rock line, so no wall can be drawn." in words
    assert "Quantities and cost are not known: there is no wall." in words
    assert "rock not surveyed" in letters
    assert "greatest depth" not in words


def test_an_estimated_line_prints_its_range_and_percentiles():
    found = estimated()
    words, letters = printed(found)
    for amount in (found.spread.p10, found.spread.p50, found.spread.p90):
        assert f"{amount:f}" in words
    assert "rock read, 50 %" in letters
    low = found.rock.low_m[list(found.rock.offset_m).index(26.0)]
    assert f"{low:.2f}" in words


def test_names_in_other_scripts_have_their_font():
    paper = read_pdf(report_pdf(estimated()))
    assert paper.fonts == {
        "NotoSans-Regular",
        "NotoSans-Bold",
        "NotoSansDevanagari-Bold",
    }
    assert paper.embedded == 3
    assert "<ford> & #sys.inputs" in paper.words.replace("\n", "")
    assert "=Nerla+va" in paper.words


def test_a4_and_the_same_bytes_again():
    first, again = report_pdf(example("A")), report_pdf(example("A"))
    assert first == again
    assert set(read_pdf(first).sheets_mm) == {(210.0, 297.0)}


def test_section_rows_are_those_of_the_twin():
    """Oracle: example A at its left toe: 30 m, ground 100, rock 96, top 100 and 99.70, key 0.15."""
    found = example("A")
    rows = report_data(found, appraised_section(found))["section"]["rows"]
    at_toe = [row for row in rows if row[0] == "30.00"]
    assert at_toe == [
        ["30.00", "100.00", "", "96.00", "", "100.00", "95.85", "left toe"],
        ["30.00", "100.00", "", "96.00", "", "99.70", "95.85", "left toe"],
    ]
