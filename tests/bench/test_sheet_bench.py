"""The sheet of a read site and a tried wall: server time against what was promised."""

from __future__ import annotations

from pathlib import Path
from time import process_time

import pytest

from structures.actions.surveys import accept_survey
from structures.queries.survey_reading import reading_of
from structures.runs.queue import execute
from tests import factories as make

pytestmark = [pytest.mark.benchmark, pytest.mark.django_db]
PACK = Path("fixtures/packs/OD-01.json")
SHEET_SECONDS = 0.3  # the page waits no longer for computed values
TRIED_SECONDS = 0.1  # look: a change of an input redraws in under 100 ms on the server's side
REPEATS = 7


def best_s(call):
    times = []
    for _ in range(REPEATS):
        start = process_time()
        assert call().status_code == 200
        times.append(process_time() - start)
    return min(times)


def test_sheet_and_tried_wall(client, settings, tmp_path, capsys):
    settings.MEDIA_ROOT = tmp_path
    site = make.a_site(code="OD-01")
    engineer = make.an_engineer(site.watershed.district)
    data = PACK.read_bytes()
    survey = accept_survey(site_id=site.pk, name=PACK.name, data=data, by=engineer)
    execute(str(reading_of(survey).pk))
    client.force_login(engineer)
    sheet_s = best_s(lambda: client.get("/sites/OD-01/"))
    tried_s = best_s(lambda: client.get("/sites/OD-01/try/?thickness_m=0.75"))
    with capsys.disabled():
        print(f"\nsheet {1e3 * sheet_s:.0f} ms, tried wall {1e3 * tried_s:.0f} ms")  # noqa: T201 -- read
    assert sheet_s < SHEET_SECONDS
    assert tried_s < TRIED_SECONDS
