"""Spoiled files of every kind: each is caught with a mend, kept as one step, taken back as one step.

The files stand under the numbers of the office's practice, "what really arrives".
"""

from __future__ import annotations

from collections import Counter
from datetime import date
from pathlib import Path

import pytest

from structures.actions.reading_files import keep_file, preview_file, take_back
from structures.actions.repairs import decide_repairs
from structures.errors import Refused
from structures.models import ColumnChoice, Gauge, RainDay, Reading, Repair, Role, Upload
from tests import factories as make
from tests.structures.wells import a_well, readings_of

pytestmark = pytest.mark.django_db
SHEETS = Path("tests/structures/intake/sheets")
STATIC = {"state": "static"}
# Depth below the mark that each well mostly had in spring 2026, and the level of its mark.
WELLS = {
    "BI-W01": (7.5, 399.45),
    "BI-W02": (8.1, 399.40),
    "BI-W07": (8.9, 402.30),
    "BI-W08": (9.3, 396.95),
    "BI-W09": (8.6, 408.55),
    "OD-W02": (6.0, 426.65),
    "OD-W05": (6.0, 417.40),
    "OD-W07": (8.7, 430.10),
    "TA-W03": (7.0, 448.00),
    "TA-W06": (8.6, 439.75),
}


@pytest.fixture(autouse=True)
def _own_files(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path


@pytest.fixture
def district():
    return make.a_district(invented=True, as_of=date(2026, 4, 10))


@pytest.fixture
def sender(district):
    return make.a_user(Role.FIELD, district)


@pytest.fixture
def wells(district, sender):
    shed = make.a_watershed(district)
    found = {}
    for code, (depth_m, level_m) in WELLS.items():
        well = a_well(shed, sender, code, level_m=level_m, lat=None, lon=None)
        readings_of(well, sender, depth_m=depth_m, count=26, first=date(2025, 1, 2))
        found[code] = well
    return found


def handed(name, district, by, **said):
    data = (SHEETS / name).read_bytes()
    return {"district_id": district.pk, "name": name, "data": data, "by": by, **said}


def fates(read):
    return dict(read.counts)


def rules(read):
    told = Counter(find.rule for one in read.answers for find in one.findings if find.rule)
    return set(told) | {one.rule for one in read.findings if one.rule}


@pytest.mark.parametrize(
    ("name", "answers", "kept", "depth_m"),
    [
        # Depths as the files show them to the eye.
        ("01_levels_semicolon_comma.csv", {"days": "day"}, 8, {"BI-W07": 9.1}),
        ("02_levels_utf16_tab.txt", {}, 6, {"BI-W07": 8.83}),
        ("03_levels_bom_crlf.csv", {}, 6, {"BI-W07": 8.83}),
        ("04_levels_devanagari.csv", {"days": "day"}, 5, {"BI-W07": 9.17}),
        # 29 ft 2 in is 29.1667 ft: 8.8900 m; 28.7 ft is 8.7478 m (0.3048 m each, exact).
        ("05_levels_feet_inches.csv", {}, 4, {"BI-W07": 8.89, "OD-W07": 8.7478}),
        ("09_levels_times_zones.csv", {}, 4, {"BI-W08": 9.25}),
        ("29_levels_formula_cells.csv", {}, 4, {"BI-W07": 8.88}),
        ("31_levels_serial_dates.csv", {"serial": "1900"}, 2, {"BI-W07": 8.85}),
        ("32_levels_quoted_newline.csv", {}, 3, {"OD-W07": 8.76}),
        ("34_levels_cp1252.csv", {}, 1, {"BI-W07": 8.89}),
        ("40_levels_notes_and_totals.csv", {}, 2, {"BI-W01": 7.45}),
    ],
)
def test_a_file_in_an_unusual_style_is_read(district, sender, wells, name, answers, kept, depth_m):
    said = handed(name, district, sender, answers=STATIC | answers)
    upload = keep_file(**said)
    assert (upload.rows_in, upload.rows_kept, upload.rows_held) == (kept, kept, 0)
    for well, depth in depth_m.items():
        mine = Reading.objects.filter(upload=upload, well__code=well).order_by("read_at").first()
        assert mine.depth_m == pytest.approx(depth, abs=1e-9)


def test_what_two_readings_fit_is_asked_once_for_the_whole_file(district, sender, wells):
    """Oracle: no. 4 of the practice, FI-04: the whole file waits on one question."""
    said = handed("28_levels_dates_both_ways.csv", district, sender)
    read = preview_file(**said, answers=STATIC)
    (question,) = read.questions
    assert (question.key, question.rows) == ("days", 4)
    assert question.asks == "03/04/24: day first or month first?"
    with pytest.raises(Refused, match="day first or month first"):
        keep_file(**said, answers=STATIC)
    assert not Reading.objects.filter(upload__isnull=False).exists()
    days = {
        order: {
            one.read_at.date()
            for one in _records(preview_file(**said, answers=STATIC | {"days": order}))
        }
        for order in ("day", "month")
    }
    # 03/04/24 is 3 April with the day first and 4 March with the month first.
    assert date(2024, 4, 3) in days["day"]
    assert date(2024, 3, 4) in days["month"]


def _records(read):
    return [one for one in read.sheet.records if one.read_at]


def test_serials_of_a_spreadsheet_are_asked_for_their_base(district, sender, wells):
    """Oracle: a spreadsheet shows 1 January 2026 as 46023; 34 days later is 4 February."""
    read = preview_file(**handed("31_levels_serial_dates.csv", district, sender, answers=STATIC))
    (question,) = read.questions
    assert question.choices[0] == ("1900", "2026-02-04 (counted from 1900)")


def test_depths_and_levels_in_one_column_are_told_row_by_row(district, sender, wells):
    """Oracle: LV-09; 430.10 - 421.36 = 8.74 and so on, by hand."""
    upload = keep_file(
        **handed("06_levels_mixed_depth_level.csv", district, sender, answers=STATIC)
    )
    assert upload.rows_held == 3
    assert sorted(Repair.objects.values_list("rule", "raw", "suggested")) == [
        ("LV-09", "387.57", "9.38"),
        ("LV-09", "421.36", "8.74"),
        ("LV-09", "421.39", "8.71"),
    ]


def test_a_remark_of_a_raised_parapet_holds_what_follows(district, sender, wells):
    """Oracle: no. 10: the remark's reading and those after it are held (LV-03)."""
    upload = keep_file(**handed("07_levels_parapet_note.csv", district, sender, answers=STATIC))
    assert (upload.rows_kept, upload.rows_held) == (2, 2)
    assert set(Repair.objects.values_list("rule", flat=True)) == {"LV-03"}


def test_words_for_dry_are_bounds_and_a_blank_is_not_read(district, sender, wells):
    """Oracle: no. 14: four rows are dry, two were not read, 0 is LV-07."""
    upload = keep_file(**handed("08_levels_dry_words.csv", district, sender, answers=STATIC))
    assert (upload.rows_kept, upload.rows_held, upload.rows_refused) == (5, 1, 2)
    dry = Reading.objects.filter(upload=upload, dry=True)
    # Bottom 11.50 m below ground, mark 0.80 m above it.
    assert {one.depth_m for one in dry} == {12.3}
    assert set(Repair.objects.values_list("rule", flat=True)) == {"LV-07"}


def test_merged_headings_are_unfolded_to_rows(district, sender, wells):
    """Oracle: no. 24: three months, four wells less two blanks; `dry?` is dry, averages left out."""
    read = preview_file(**handed("12_levels_merged_header.xlsx", district, sender, answers=STATIC))
    assert fates(read) == {"kept": 8}
    assert sum(one.dry for one in read.sheet.records) == 1
    assert any("Average" in one.what for one in read.findings)


def test_a_tape_held_below_the_parapet_is_corrected_once(district, sender, wells):
    """Oracle: no. 12: 10.00 - 1.50 + 0.40 = 8.90 and 10.00 - 1.10 + 0.40 = 9.30 by hand."""
    keep_file(**handed("42_levels_tape_below_parapet.csv", district, sender, answers=STATIC))
    told = Repair.objects.values_list("rule", "raw", "suggested")
    assert sorted(told) == [("LV-15", "8.5", "8.9"), ("LV-15", "8.9", "9.3")]


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("14_zip_in_zip.zip", "An archive lies inside the archive."),
        ("15_zip_with_climbing_names.zip", "The name climbs out of the archive. Nothing was read."),
        ("33_levels_unclosed_quote.csv", "A quote is not closed."),
        ("35_empty.csv", "The file is empty."),
        ("36_headings_only.csv", "Only headings are here, no row."),
        ("37_picture_named.csv", "This is a PNG picture, not a table."),
        ("41_wells_three_spellings.csv", "This is a list of wells, not of readings."),
    ],
)
def test_what_is_no_table_of_readings_is_refused_in_a_sentence(
    district, sender, wells, name, words
):
    said = handed(name, district, sender, answers=STATIC)
    told = preview_file(**said)
    assert words in [one.what for one in told.findings if one.level == "block"]
    with pytest.raises(Refused):
        keep_file(**said)
    assert not Reading.objects.filter(upload__isnull=False).exists()
    assert Upload.objects.get().outcome == "refused"


def test_three_spellings_of_a_well_are_told_and_not_joined(district, sender, wells):
    """Oracle: no. 34, WL-03."""
    read = preview_file(**handed("41_wells_three_spellings.csv", district, sender))
    assert [one.rule for one in read.findings if one.level == "hold"] == ["WL-03", "WL-03"]


def test_the_same_file_twice_changes_nothing(district, sender, wells):
    """Oracle: nos. 35 and 36: the copy is FI-01, the corrected one adds what is new."""
    first = keep_file(**handed("10_levels_march.csv", district, sender, answers=STATIC))
    assert first.rows_kept == 6
    with pytest.raises(Refused, match="This very file came"):
        keep_file(**handed("10_levels_march (1).csv", district, sender, answers=STATIC))
    again = keep_file(**handed("10_levels_march_corrected.csv", district, sender, answers=STATIC))
    # Seven rows: five are there, one has another value, one is new.
    assert (again.rows_kept, again.rows_held, again.rows_refused) == (1, 1, 5)
    assert set(Repair.objects.values_list("rule", flat=True)) == {"LV-13"}
    assert Repair.objects.count() == 2
    take_back(upload_id=again.pk, by=sender)
    assert not Repair.objects.exists()
    assert set(Reading.objects.filter(upload=first).values_list("standing", flat=True)) == {"taken"}
    assert Upload.objects.get(pk=again.pk).outcome == "back"
    assert keep_file(**handed("10_levels_march_corrected.csv", district, sender, answers=STATIC))


def test_a_file_with_decisions_is_not_taken_back(district, sender, wells):
    upload = keep_file(
        **handed("06_levels_mixed_depth_level.csv", district, sender, answers=STATIC)
    )
    decide_repairs(
        repair_ids=[Repair.objects.first().pk],
        decision="suggested",
        why="a level",
        by=make.an_engineer(district),
    )
    with pytest.raises(Refused, match="Somebody has decided"):
        take_back(upload_id=upload.pk, by=sender)
    assert Reading.objects.filter(upload=upload).count() == 8


def test_what_was_said_once_is_remembered_for_the_next_file(district, sender, wells):
    keep_file(**handed("03_levels_bom_crlf.csv", district, sender, answers=STATIC))
    assert ColumnChoice.objects.get().choices["answers"] == STATIC
    read = preview_file(**handed("32_levels_quoted_newline.csv", district, sender))
    assert [one.key for one in read.questions] == ["state"]  # other headings
    read = preview_file(**handed("02_levels_utf16_tab.txt", district, sender))
    assert read.questions == ()


def test_rain_down_and_across_is_unfolded_and_a_day_that_is_not_is_named(district, sender):
    """Oracle: nos. 27 and RN-04: 366 days of 2024, 30 February filled."""
    upload = keep_file(**handed("21_rain_grid_2024.csv", district, sender))
    assert (upload.kind, upload.rows_kept, upload.rows_refused) == ("rain", 366, 1)
    assert RainDay.objects.get(gauge__code="BI-R1", day=date(2024, 10, 1)).rain_mm == 23.6
    (wrong,) = [one for one in upload.findings if one["rule"] == "RN-04"]
    assert wrong["what"] == "30 Feb 2024 does not exist."
    take_back(upload_id=upload.pk, by=sender)
    assert not RainDay.objects.exists()


def test_blank_rain_is_not_read_and_a_trace_is_a_trace(district, sender):
    """Oracle: no. 28; RN-01, RN-02 and RN-03."""
    upload = keep_file(**handed("22_rain_blank_trace.csv", district, sender))
    gauge = Gauge.objects.get(code="OD-R1")
    rows = {one.day.day: one for one in RainDay.objects.filter(gauge=gauge)}
    assert (rows[3].trace, rows[3].rain_mm) == (True, 0.05)
    assert (rows[4].rain_mm, rows[4].rules) == (None, ["RN-01"])
    assert (rows[5].rain_mm, rows[5].rules) == (0.0, [])
    assert (rows[6].days, rows[6].rules) == (2, ["RN-03"])
    assert (rows[7].rain_mm, rows[7].rules) == (312.0, ["RN-02"])
    assert upload.rows_held == 1


def test_another_district_is_not_written_to(district, wells):
    stranger = make.a_user(Role.FIELD, make.a_district("ZZ"))
    with pytest.raises(Refused, match="You may not"):
        keep_file(**handed("03_levels_bom_crlf.csv", district, stranger, answers=STATIC))
