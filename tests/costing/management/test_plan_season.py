"""The command as a person calls it: what is printed where, and the exit status."""

from __future__ import annotations

import ctypes
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest
from django.core.management import call_command

from costing.management.commands.plan_season import solver_silenced

EXAMPLE = Path("fixtures/seasons/example.json")


def called(capsys, *words):
    """Exit status, standard output, standard error."""
    try:
        call_command("plan_season", *map(str, words))
    except SystemExit as ended:
        return ended.code, *capsys.readouterr()
    return 0, *capsys.readouterr()


def written(folder, **changes):
    """The example with changes, and with changes of its sites by code."""
    season = json.loads(EXAMPLE.read_text())
    for site in season["sites"]:
        site.update(changes.get(site["site"], {}))
    path = folder / "season.json"
    path.write_text(json.dumps(season))
    return path


def test_one_json_document_and_nothing_else(capsys):
    code, out, err = called(capsys, EXAMPLE, "--json")
    assert (code, err) == (0, "")
    plan = json.loads(out)
    assert list(plan) == ["chosen", "left_out", "objective", "bound", "gap"]
    assert (plan["objective"], plan["gap"]) == (76.0, 0.0)
    assert len(plan["chosen"]) + len(plan["left_out"]) == 8


def test_the_sheet_on_standard_output(capsys):
    code, out, err = called(capsys, EXAMPLE)
    assert (code, err) == (0, "")
    assert out.startswith("SEASON PLAN: 20 weeks, 3 gangs\n")
    assert "KE-04: ready week 12 + 6 weeks passes week 16\n" in out


def test_a_date_that_is_moved_is_kept(capsys, tmp_path):
    path = written(tmp_path, **{"TA-02": {"open_week": 7}})
    code, out, _ = called(capsys, path, "--json")
    assert code == 0
    assert {"site": "TA-02", "open_week": 7, "close_week": 10} in json.loads(out)["chosen"]


def test_dates_that_cannot_stand_together_are_told(capsys, tmp_path):
    moved = {code: {"open_week": 4} for code in ("OD-03", "BI-03", "TA-02")}
    code, out, err = called(capsys, written(tmp_path, **moved))
    assert (code, out) == (1, "")
    assert err.splitlines() == [
        (
            "season.json, open_week: OD-03 (opens in week 4) and BI-03 (opens in week 4) need "
            "4 gangs in weeks 4 to 9; there are 3 gangs. "
            "Move or free one of them (leave open_week out), or raise the limit."
        ),
        (
            "season.json, open_week: OD-03 (opens in week 4) and BI-03 (opens in week 4) need "
            "4 pumps in weeks 4 to 9; there are 3 pumps. "
            "Move or free one of them (leave open_week out), or raise the limit."
        ),
    ]


def test_wrong_input_is_told_by_site_and_field(capsys, tmp_path):
    path = written(tmp_path, **{"TA-02": {"duration_weeks": 0, "gang": 1}})
    code, out, err = called(capsys, path)
    assert (code, out) == (1, "")
    assert err.splitlines() == [
        (
            "season.json $.sites[4] (TA-02), duration_weeks: A work of 0 weeks cannot be planned. "
            "Give whole weeks, at least 1."
        ),
        "season.json $.sites[4] (TA-02), gang: There is no such setting. Was gangs meant?",
    ]


def test_what_the_solver_prints_past_python_stays_off_the_result(capfd):
    """The solver's own code prints by C; what waits in its buffer must not come out later."""
    libc = ctypes.CDLL(None)
    with solver_silenced():
        libc.puts(b"from the solver")
    libc.puts(b"after it")
    libc.fflush(None)
    assert capfd.readouterr().out == "after it\n"


@pytest.mark.parametrize(
    ("words", "code"),
    [
        ((EXAMPLE, "--json"), 0),
        (("no-such-season.json",), 1),
        ((), 2),
        ((EXAMPLE, "--unknown"), 2),
        ((EXAMPLE, EXAMPLE), 2),
    ],
)
def test_exit_status_through_the_one_door(words, code):
    """Oracle: the interface: 0 done, 1 the input is wrong, 2 wrong use; no traceback, no database."""
    ended = subprocess.run(
        [sys.executable, "manage.py", "plan_season", *map(str, words)],
        capture_output=True,
        text=True,
        check=False,
        timeout=120,
        env=os.environ | {"DATABASE_URL": "postgres://nobody@127.0.0.1:9/nothing"},
    )
    assert ended.returncode == code
    assert bool(ended.stdout) == (code == 0)
    assert bool(ended.stderr) == (code != 0)
    assert "Traceback" not in ended.stderr
