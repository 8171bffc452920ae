"""The command on one sounding: the printed model of the handbook, a real curve, wrong files."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import pytest
from django.core.management import call_command

# Handbook table 2: AB/2, MN/2, apparent resistivity of 200/40/1000 ohm m with 2 and 6 m.
TABLE_2 = (
    (1.5, 0.5, 190.832362),
    (2, 0.5, 180.148128),
    (3, 0.5, 151.362163),
    (4, 0.5, 122.092585),
    (5, 0.5, 98.976746),
    (6, 0.5, 83.364289),
    (8, 0.5, 69.635646),
    (10, 0.5, 69.386256),
    (10, 2.5, 70.369479),
    (12, 2.5, 74.664647),
    (15, 2.5, 87.197841),
    (20, 2.5, 111.93666),
    (25, 2.5, 136.601555),
    (30, 2.5, 160.248707),
    (40, 2.5, 204.438305),
    (40, 10, 197.168937),
    (50, 10, 239.547566),
    (60, 10, 278.057086),
    (80, 10, 345.958782),
    (100, 10, 404.215462),
)
HEADS = "ab2_m,mn2_m,apparent_resistivity_ohm_m"


def written(path, rows, heads=HEADS):
    path.write_text("\n".join([heads, *(",".join(map(str, row)) for row in rows)]) + "\n")
    return str(path)


def test_the_printed_model_comes_back(tmp_path, capsys):
    """Oracle: handbook table 2 and section 2 (depth 8 m, tight readings)."""
    call_command("interpret_sounding", written(tmp_path / "s.csv", TABLE_2), "--json")
    found = json.loads(capsys.readouterr().out)
    layers = [(one["thickness_m"], one["resistivity_ohm_m"]) for one in found["layers"]]
    assert layers[0] == pytest.approx((2.0, 200.0), rel=1e-3)
    assert layers[1] == pytest.approx((6.0, 40.0), rel=1e-3)
    assert layers[2][0] is None
    assert layers[2][1] == pytest.approx(1000.0, rel=1e-3)
    assert found["rock_depth_low_m"] < 8.0 < found["rock_depth_high_m"]
    assert len(found["equivalent"]) > 1
    assert [one["observed_ohm_m"] for one in found["readings"]] == [row[2] for row in TABLE_2]
    assert found["prior"] is not None
    assert found["chi_square_per_degree"] < 1e-6
    assert [len(row) for row in found["covariance"]] == [5] * 5  # ln of 3 resistivities, 2 depths


def test_the_text_gives_depth_range_and_misfit(tmp_path, capsys):
    call_command("interpret_sounding", written(tmp_path / "s.csv", TABLE_2))
    out = capsys.readouterr().out
    assert "8 times in 10 between" in out
    assert "misfit 0.0 %" in out
    assert "Seed" in out
    # Handbook 2.6 and 2.7: segment factors are reported, the prior is printed with the result.
    assert "factor of the readings with MN/2 2.5 m: 1.000" in out
    assert "in 85 % of the prior." in out


def test_a_real_curve_whose_segments_disagree_is_refused_with_the_reason(tmp_path, capsys):
    """Oracle: open field data; overlapping readings differ by a factor of 4 at AB/2 40 m."""
    with Path("fixtures/soundings/soundings.csv").open() as file:
        rows = [
            (row["ab2_m"], row["mn2_m"], row["apparent_resistivity_ohm_m"])
            for row in csv.DictReader(file)
            if row["sounding_id"] == "mawlamyine_1"
        ]
    call_command("interpret_sounding", written(tmp_path / "m.csv", rows), "--json")
    found = json.loads(capsys.readouterr().out)
    assert found["rock_depth_m"] is None
    assert found["refusal"]["code"] == "segments-disagree"


def test_wenner_readings_take_their_own_column(tmp_path, capsys):
    rows = [(a, 100.0) for a in (1, 2, 3, 5, 8, 12, 20, 30, 40)]
    path = written(tmp_path / "w.csv", rows, "a_m,apparent_resistivity_ohm_m")
    call_command("interpret_sounding", path, "--array", "wenner", "--json")
    found = json.loads(capsys.readouterr().out)
    assert (found["array"], found["readings"][1]["ab2_m"]) == ("wenner", 3.0)
    assert found["rock_depth_m"] is None


@pytest.mark.parametrize(
    ("content", "said"),
    [
        (f"{HEADS}\n1.5,0.5,0\n", "line 2"),
        (f"{HEADS}\n1.5,0.5,abc\n", "line 2"),
        ("ab2,mn2\n1,2\n", "apparent_resistivity_ohm_m"),
        ("", "s.csv"),
    ],
)
def test_a_wrong_file_is_refused_at_its_line(content, said, tmp_path, capsys):
    path = tmp_path / "s.csv"
    path.write_text(content)
    with pytest.raises(SystemExit) as ended:
        call_command("interpret_sounding", str(path))
    out, err = capsys.readouterr()
    assert (ended.value.code, out) == (1, "")
    assert said in err
