"""Problem documents: what they hold, and that a defect is told as one too."""

from __future__ import annotations

import pytest

from structures.api.problems import problem
from structures.api.viewsets import Sites
from structures.errors import Finding

pytestmark = pytest.mark.django_db


def test_a_problem_has_the_members_of_the_standard():
    """Oracle: RFC 9457, 3.1 and 4.2.1; the phrase of 409 is that of RFC 9110, 15.5.10."""
    finding = Finding("a.csv line 4", "depth_m", "It is missing.", "Write it.")
    assert problem(409, "words", "/api/v1/sites", (finding,)) == {
        "type": "about:blank",
        "title": "Conflict",
        "status": 409,
        "detail": "words",
        "instance": "/api/v1/sites",
        "findings": [
            {
                "where": "a.csv line 4",
                "field": "depth_m",
                "what": "It is missing.",
                "remedy": "Write it.",
                "level": "block",
                "rule": "",
            }
        ],
    }


def test_a_defect_is_a_problem_that_tells_nothing_of_its_cause(office, monkeypatch):
    def broken(view, user):
        raise ZeroDivisionError("the secret of the cause")

    monkeypatch.setattr(Sites, "visible", broken)
    office.raise_request_exception = False
    answer = office.get("/api/v1/sites")
    assert answer.status_code == 500
    assert answer["Content-Type"] == "application/problem+json"
    assert "secret" not in answer.content.decode()


@pytest.mark.parametrize(
    ("body", "kind", "status"),
    [(b'{"a":', "application/json", 400), (b"a=b", "application/x-www-form-urlencoded", 415)],
)
def test_a_body_that_cannot_be_read_is_a_problem(office, body, kind, status):
    answer = office.post("/api/v1/sites", body, content_type=kind)
    assert answer.status_code == status
    assert answer["Content-Type"] == "application/problem+json"
