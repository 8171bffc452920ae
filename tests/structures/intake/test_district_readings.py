"""Readings of a site from a district's tables. Oracle: the tables, read by the csv module."""

import csv
import io
from pathlib import Path

import pytest

from structures.intake.district_readings import gauge_days_csv, site_readings_csv

FIXTURES = Path(__file__).parents[3] / "fixtures"


def rows(name):
    with (FIXTURES / "demo" / f"{name}.csv").open(newline="") as stream:
        return list(csv.DictReader(stream))


def made(site, **options):
    return site_readings_csv(
        site,
        wells=rows("wells"),
        marks=rows("measuring_points"),
        levels=rows("levels"),
        **options,
    )


@pytest.mark.parametrize(("site", "gauge"), [("BI-01", "BI-R1"), ("OD-01", "OD-R1")])
def test_the_files_that_were_made_are_still_what_is_made(site, gauge):
    folder = FIXTURES / "readings"
    assert (folder / f"{site}.csv").read_text() == made(site)
    assert (folder / f"{site}-rain.csv").read_text() == gauge_days_csv(gauge, rows("rain"))


def test_upstream_wells_are_affected_and_downstream_ones_are_not_pooled():
    """Oracle: wells.csv, BI-01 has three wells upstream and its watershed three controls."""
    read = list(csv.DictReader(io.StringIO(made("BI-01"))))
    roles = {(row["well"], row["role"]) for row in read}
    assert roles == {
        ("BI-W01", "affected"),
        ("BI-W02", "affected"),
        ("BI-W03", "affected"),
        ("BI-W07", "control"),
        ("BI-W08", "control"),
        ("BI-W09", "control"),
    }
    assert len(read) == sum(row["well_id"] in {well for well, _ in roles} for row in rows("levels"))


def test_a_reading_has_the_mark_that_was_valid_that_day():
    """Oracle: measuring_points.csv, BI-W05 at 399.45 to 2025-10-17, then 400.05."""
    read = list(csv.DictReader(io.StringIO(made("BI-01", also=["BI-W05"]))))
    heights = {
        (row["read_at"][:10] > "2025-10-17", row["height_m"])
        for row in read
        if row["well"] == "BI-W05"
    }
    assert heights == {(False, "399.45"), (True, "400.05")}


def test_without_a_valid_mark_the_height_stays_blank():
    text = site_readings_csv(
        "S",
        wells=[{"well_id": "W", "watershed": "S", "site_id": "S", "role": "upstream"}],
        marks=[],
        levels=[
            {
                "well_id": "W",
                "read_at": "2027-01-01",
                "state": "static",
                "dry": "no",
                "depth_below_mark_m": "3",
            }
        ],
    )
    assert text.splitlines()[1] == "W,affected,2027-01-01,static,no,3,"
