"""The command as a person calls it: what is printed where, and the exit status."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest
from django.core.management import call_command

from tests.structures.intake.wrong_packs import WRONG_PACKS

PACKS, RATES = Path("fixtures/packs"), "fixtures/rates/examples.csv"


def called(capsys, *words):
    """Exit status, standard output, standard error."""
    try:
        call_command(*[str(word) for word in words])
    except SystemExit as ended:
        return ended.code, *capsys.readouterr()
    return 0, *capsys.readouterr()


def test_one_json_document_and_nothing_else(capsys):
    code, out, err = called(
        capsys, "appraise", PACKS / "example-b.json", "--rates", RATES, "--json"
    )
    assert (code, err) == (0, "")
    assert json.loads(out)["estimate"]["total"] == "693762.60"


def test_text_says_cautions_first_then_figures_with_units(capsys):
    code, out, err = called(capsys, "appraise", PACKS / "example-c.json", "--rates", RATES)
    assert (code, err) == (0, "")
    lines = out.splitlines()
    assert lines[0].startswith("EX-C")
    assert lines[3] == "CAUTIONS"
    assert "OPEN right flank" in out
    assert "in INR, INCOMPLETE" in out
    assert max(map(len, lines)) <= 90
    assert lines[-1] == "Local codes and licensed practice decide; this sheet does not."


def test_out_writes_drawing_workbook_and_report(capsys, tmp_path):
    out = tmp_path / "made" / "here"
    code, *_ = called(capsys, "appraise", PACKS / "example-b.json", "--rates", RATES, "--out", out)
    assert code == 0
    made = {path.name: path.read_bytes()[:5] for path in out.iterdir()}
    assert made == {
        "EX-B-section.svg": b"<?xml",
        "EX-B-estimate.xlsx": b"PK\x03\x04\x14",
        "EX-B-report.pdf": b"%PDF-",
    }


def test_a_folder_that_cannot_be_written_is_named(capsys, tmp_path):
    (tmp_path / "file").write_text("")
    code, out, err = called(
        capsys, "appraise", PACKS / "example-a.json", "--out", tmp_path / "file"
    )
    assert (code, out) == (1, "")
    assert "Nothing can be written there" in err


@pytest.mark.parametrize("wrong", WRONG_PACKS, ids=lambda wrong: wrong.name)
def test_wrong_packs_end_with_one_and_say_where(wrong, capsys, tmp_path):
    path = wrong.write(tmp_path)
    code, out, err = called(capsys, "appraise", path)
    assert (code, out) == (1, "")
    assert wrong.where.format(folder=path.name) in err
    assert wrong.field in err
    assert "Traceback" not in err


def test_unknown_rate_items_are_named(capsys, tmp_path):
    rates = tmp_path / "rates.csv"
    rates.write_text("item,unit,rate\nclai,m3,100\n")
    code, out, err = called(capsys, "appraise", PACKS / "example-a.json", "--rates", rates)
    assert (code, out) == (1, "")
    assert "rates.csv line 2" in err
    assert "clai" in err


def test_a_lift_without_a_rate_is_an_error(capsys, tmp_path):
    rates = tmp_path / "rates.csv"
    rates.write_text("item,from_m,unit,rate\nexcavation,0,m3,100\nclay,,m3,100\n")
    code, out, err = called(capsys, "appraise", PACKS / "example-a.json", "--rates", rates)
    assert (code, out) == (1, "")
    assert "from 1.5 to 3 m below ground has no rate" in err


def manage(*words, **environment):
    return subprocess.run(
        [sys.executable, "manage.py", *map(str, words)],
        capture_output=True,
        text=True,
        check=False,
        timeout=120,
        env=os.environ | environment,
    )


@pytest.mark.parametrize(
    ("words", "code"),
    [
        (("appraise", PACKS / "example-a.json", "--json"), 0),
        (("appraise", "no-such-pack"), 1),
        (("appraise",), 2),
        (("appraise", PACKS / "example-a.json", "--unknown"), 2),
        (("interpret_sounding", "no-such-file.csv"), 1),
        (("interpret_sounding", RATES, "--array", "square"), 2),
    ],
)
def test_exit_status_through_the_one_door(words, code):
    """Oracle: the interface: 0 done, 1 the input is wrong, 2 wrong use; no traceback, no database."""
    ended = manage(*words, DATABASE_URL="postgres://nobody@127.0.0.1:9/nothing")
    assert ended.returncode == code
    assert bool(ended.stdout) == (code == 0)
    assert bool(ended.stderr) == (code != 0)
    assert "Traceback" not in ended.stderr
