"""The stages of a structure. Source: the office's practice, section 3; the demo's settings.json."""

from __future__ import annotations

import json
from pathlib import Path

from structures.life.stages import BESIDE_IT, ON_THE_LINE, STAGES


def test_eighteen_stages_on_the_line_and_two_beside_it_in_their_order():
    told = json.loads(Path("fixtures/demo/settings.json").read_text())
    assert list(ON_THE_LINE) == told["states"]
    assert list(BESIDE_IT) == told["states_beside"]
    assert len(STAGES) == 20
