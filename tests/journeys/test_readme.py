"""What the README shows is what the program does."""

from __future__ import annotations

import re
from datetime import date
from pathlib import Path

import pytest
from django.core.management import call_command
from django.utils import timezone

from config.env import VARIABLES

README = Path("README.md").read_text(encoding="utf-8")
EXAMPLE = ("fixtures/packs/OD-01.json", "--rates", "fixtures/rates/RS-2025-26.csv")
COMPUTED = re.compile(r"^computed (\d{4}-\d\d-\d\d),", flags=re.MULTILINE)


def same(text):
    """The output less what a sampler read, whose last digits differ by processor."""
    return [line for line in text.splitlines() if not line.startswith("  sounding ")]


def test_the_printed_example_is_the_real_output(capsys, monkeypatch):
    assert f"python3 manage.py appraise {' '.join(EXAMPLE)}" in README
    # The day is that of the printed call: on another one the schedule may be valid.
    day = date.fromisoformat(COMPUTED.search(README)[1])
    monkeypatch.setattr(timezone, "localdate", lambda: day)
    call_command("appraise", *EXAMPLE)
    printed = README.partition("```text\n")[2].partition("```")[0]
    assert same(capsys.readouterr().out) == same(printed)


def test_the_drawing_says_what_the_real_drawing_says(tmp_path, capsys):
    call_command("appraise", *EXAMPLE, "--out", str(tmp_path))
    words = [
        re.search("<desc[^>]*>(.*?)</desc>", path.read_text(encoding="utf-8"))[1]
        for path in (tmp_path / "OD-01-section.svg", Path("fixtures/drawings/OD-01-section.svg"))
    ]
    assert words[0] == words[1]


@pytest.mark.parametrize("link", re.findall(r"\]\(([^)#:]+)\)", README))
def test_every_link_leads_somewhere(link):
    assert Path(link).exists()


def test_the_table_of_variables_is_whole():
    """Oracle: the one table that the program reads."""

    named = set(re.findall(r"^\| `([A-Z_]+)`", README, flags=re.MULTILINE))
    later = {"DEMO_PASSWORD"}  # of the demo, which is loaded once accounts exist
    assert named == {one.name for one in VARIABLES} - later
