"""The command on files of readings: keys, words, exit status. Oracle: the interface of the command."""

from __future__ import annotations

import json

import pytest
from django.core.management import call_command
from django.core.management.base import CommandError

from structures.water.effect import measure_effect
from tests.structures.water.programmes import programme

HEAD = "well,role,read_at,state,dry,depth_m,height_m\n"
KEYS = {
    "effect_m",
    "low_m",
    "high_m",
    "confidence",
    "method",
    "readings",
    "before",
    "after",
    "wells",
    "rivals",
    "smallest_seen_m",
    "suggested_verdict",
    "cautions",
}


def written(path, readings):
    rows = [
        f"{one.well},{one.role},{one.read_at.isoformat()},{one.state},{'yes' if one.dry else 'no'},"
        f"{one.depth_m:.2f},{one.height_m:.6f}\n"
        for one in readings
    ]
    path.write_text(HEAD + "".join(rows))
    return str(path)


def answer(capsys, *arguments):
    call_command("assess_effect", *arguments, "--json")
    return json.loads(capsys.readouterr().out)


def test_a_programme_goes_through_a_file_unchanged(tmp_path, capsys):
    """Oracle: the same readings measured without a file."""
    readings, completed = programme(3, coefficient=0.3)
    found = answer(
        capsys, written(tmp_path / "r.csv", readings), "--completed", completed.isoformat()
    )
    direct = measure_effect(readings, completed).estimate
    assert found["effect_m"] == pytest.approx(direct.effect_m, abs=1e-6)
    assert (found["low_m"], found["high_m"]) == pytest.approx(
        (direct.low_m, direct.high_m), abs=1e-6
    )
    assert found.keys() >= KEYS
    assert found["confidence"] == 0.90
    assert found["wells"] == {"affected": 3, "control": 2}
    assert (found["before"]["full_years"], found["after"]["full_years"]) == (3, 3)
    assert found["smallest_seen_m"] > 0.0
    assert [one["what"] for one in found["rivals"]] == ["rain", "measuring point"]
    assert found["rivals"][0]["share_m"] is None  # no rain was given
    assert found["rivals"][1]["share_m"] == 0.0
    taken, left = found["readings"]["taken"], found["readings"]["left_out"]
    assert taken + sum(one["count"] for one in left) == len(readings)
    assert {"reason": "pumping", "count": sum(one.state == "pumping" for one in readings)} in left
    assert found["suggested_verdict"] in {"holds", "holds in part"}


def test_too_little_is_not_known_and_no_error(tmp_path, capsys):
    """Oracle: the interface, effect null and the reason as a caution, exit 0."""
    readings, completed = programme(3, coefficient=0.3, years=(1, 1))
    path = written(tmp_path / "r.csv", readings)
    found = answer(capsys, path, "--completed", completed.isoformat())
    assert found.keys() >= KEYS
    nulls = ("effect_m", "low_m", "high_m", "smallest_seen_m")
    assert [found[key] for key in nulls] == [None] * 4
    assert [one["share_m"] for one in found["rivals"]] == [None, None]
    assert found["suggested_verdict"] == "not known"
    assert [one["code"] for one in found["cautions"]] == ["effect-too-short"]
    call_command("assess_effect", path, "--completed", completed.isoformat())
    assert "effect not known" in capsys.readouterr().out
    eased = answer(capsys, path, "--completed", completed.isoformat(), "--least-years", "1")
    assert eased["effect_m"] is not None


def test_without_controls_it_is_not_known(tmp_path, capsys):
    readings, completed = programme(3, coefficient=0.3)
    lone = [one for one in readings if one.role == "affected"]
    found = answer(capsys, written(tmp_path / "r.csv", lone), "--completed", completed.isoformat())
    assert found["suggested_verdict"] == "not known"
    assert "effect-no-control" in [one["code"] for one in found["cautions"]]


def test_the_water_year_may_begin_on_another_day(tmp_path, capsys):
    """Oracle: two calendar years from June to May hold one full year from January only."""
    readings, completed = programme(3, coefficient=0.3, years=(2, 2))
    path = written(tmp_path / "r.csv", readings)
    found = answer(capsys, path, "--completed", completed.isoformat(), "--year-starts", "01-01")
    assert found["suggested_verdict"] == "not known"
    assert (found["before"]["full_years"], found["after"]["full_years"]) == (1, 1)


def test_the_text_says_answer_grounds_and_doubts(tmp_path, capsys):
    readings, completed = programme(3, coefficient=0.3)
    path = written(tmp_path / "r.csv", readings)
    call_command("assess_effect", path, "--completed", completed.isoformat())
    out = " ".join(capsys.readouterr().out.split())
    for words in (
        "effect +0.",
        "with 90% confidence between +0.",
        "would have been seen 4 times in 5, with 2 more years of readings",
        "suggested verdict: holds",
        "an engineer's signature come before it",
        "rests on 3 affected and 2 control wells",
        "readings taken:",
        "pumping",
        "share of rain: not known",
        "share of measuring point: 0.00 m",
        "Method: Difference of half-month pairs",
    ):
        assert words in out


@pytest.mark.parametrize(
    ("rows", "said"),
    [
        (
            "W1,affected,2027-06-03,static,no,-1,431\n",
            "r.csv line 2, depth_m: -1 m is above the mark",
        ),
        ("W1,affected,2027-06-03,static,no,431,431\n", "looks like a level"),
        ("W1,affected,03/04/27,static,no,8,431\n", "day first or month first?"),
        ("W1,beside,2027-06-03,static,no,8,431\n", "One of: affected, control."),
        ("", "Only headings are here, no row."),
    ],
)
def test_wrong_readings_end_with_status_1_and_a_sentence(rows, said, tmp_path, capsys):
    path = tmp_path / "r.csv"
    path.write_text(HEAD + rows)
    with pytest.raises(SystemExit) as ended:
        call_command("assess_effect", str(path), "--completed", "2027-06-01", "--json")
    out, err = capsys.readouterr()
    assert (ended.value.code, out) == (1, "")
    assert said in err


def test_wrong_rain_ends_with_status_1(tmp_path, capsys):
    readings, completed = programme(3, coefficient=0.3)
    rain = tmp_path / "rain.csv"
    rain.write_text("month,rain_mm\n2027-13,5\n")
    path = written(tmp_path / "r.csv", readings)
    with pytest.raises(SystemExit) as ended:
        call_command(
            "assess_effect", path, "--completed", completed.isoformat(), "--rain", str(rain)
        )
    assert ended.value.code == 1
    assert "rain.csv line 2, month" in capsys.readouterr().err


@pytest.mark.parametrize(
    "arguments",
    [
        (),
        ("--completed", "1 June"),
        ("--completed", "2027-06-01", "--least-years", "0"),
        ("--completed", "2027-06-01", "--year-starts", "02-29"),
    ],
)
def test_wrong_use_is_told_by_the_parser(arguments):
    """Oracle: from a shell such a CommandError ends with status 2 (Django's parser)."""
    with pytest.raises(CommandError):
        call_command("assess_effect", "r.csv", *arguments)
