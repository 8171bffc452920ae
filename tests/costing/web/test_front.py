"""The first page: a pack goes in, a run works, its page, documents and refusals come out."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from structures.models.run import Run
from structures.runs.queue import execute

pytestmark = pytest.mark.django_db
PACKS, RATES = Path("fixtures/packs"), Path("fixtures/rates")


@pytest.fixture(autouse=True)
def _own_files(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path


def hand_in(client, pack="example-b.json", rates="examples.csv", content=None):
    files = {"pack": SimpleUploadedFile(pack, content or (PACKS / pack).read_bytes())}
    if rates:
        files["rates"] = SimpleUploadedFile(rates, (RATES / rates).read_bytes())
    return client.post("/", files)


def appraised(client, **files):
    answer = hand_in(client, **files)
    assert answer.status_code == 302
    execute(str(Run.objects.get().pk))
    return client.get(answer.url), answer.url


def test_the_first_page_says_what_this_is_and_how_it_is_doing(client):
    page = client.get("/").content.decode()
    assert "Will a wall close here, and what does it cost?" in page
    assert "worker: <b>has never been seen</b>" in " ".join(page.split())
    assert "raw water" in page


def test_a_pack_becomes_a_page_with_the_printed_figures(client):
    """Oracle: handbook example B."""
    page, _ = appraised(client)
    text = " ".join(page.content.decode().split())
    assert page.status_code == 200
    for printed in ("693,762.60", "693,800.00", "131,331.20", "249.70", "59.00"):
        assert printed in text
    assert "needs a licensed design" in text
    assert text.count("<svg") == 2
    assert "As numbers" in text


def test_an_appraisal_waits_for_its_worker_and_can_be_cancelled(client):
    url = hand_in(client).url
    page = client.get(url).content.decode()
    assert "Waiting for a worker" in page
    assert client.post(f"{url}cancel").url == url
    assert "Cancelled" in client.get(url).content.decode()


def test_the_same_files_show_the_same_appraisal(client):
    assert hand_in(client).url == hand_in(client).url


def test_every_document_can_be_fetched(client):
    _, url = appraised(client)
    names = Run.objects.get().result["documents"]
    assert {name.rpartition(".")[2] for name in names} == {"svg", "pdf", "xlsx"}
    for name in names:
        answer = client.get(f"{url}{name}")
        assert answer.status_code == 200
        assert name in answer["Content-Disposition"]
    assert client.get(f"{url}other.pdf").status_code == 404


def test_a_wrong_pack_is_refused_whole_and_nothing_is_kept(client, tmp_path):
    wrong = json.dumps({"pack": 1, "site": {"code": "K"}, "ground": [], "wall": {"thicknes_m": 1}})
    page = hand_in(client, content=wrong.encode())
    text = " ".join(page.content.decode().split())
    assert page.status_code == 422
    for said in ("toes.left_m", "wall.thicknes_m", "ground", "example-b.json"):
        assert said in text
    assert (Run.objects.count(), list(tmp_path.iterdir())) == (0, [])


def test_a_form_without_a_file_says_so(client):
    page = client.post("/", {})
    assert page.status_code == 422
    assert "No survey pack was chosen" in page.content.decode()


def test_the_schema_of_packs_is_served(client):
    schema = client.get("/survey-pack.schema.json")
    assert schema["Content-Type"] == "application/schema+json"
    assert schema.json()["$schema"].endswith("2020-12/schema")
