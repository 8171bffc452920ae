"""Papers as lines to read."""

from __future__ import annotations

from structures.life.paper_reader import blank_content
from structures.life.papers import PAPERS
from structures.web.paper_forms import told


def test_a_filed_paper_is_told_field_by_field():
    """Oracle: by hand: numbers stand as values, rows as rows, what is blank as nothing."""
    paper = PAPERS["walk-over"]
    content = blank_content(paper) | {
        "bed_width_m": 48.0,
        "no_wells": True,
        "downstream": [{"settlement": "Hesgodi", "use": "2 dug wells", "distance_km": 1.5}],
    }
    lines = {line["field"].name: (line["rows"], line["value"]) for line in told(paper, content)}
    assert list(lines) == [field.name for field in paper.fields]
    assert lines["bed_width_m"] == ([], "48")
    assert lines["no_wells"] == ([], "yes")
    assert lines["downstream"] == ([["Hesgodi", "2 dug wells", "1.5"]], "")
    assert lines["wells"] == ([], "")
    assert lines["bed_material"] == ([], "")
