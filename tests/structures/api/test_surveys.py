"""Handing a survey in: previewed, kept, refused, sent twice, sent as a form."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from structures.models import Role, Survey, Upload
from tests import factories as make

pytestmark = pytest.mark.django_db
PLACE = "/api/v1/sites/EX-A/surveys"


def send(client, data, **headers):
    return client.post(PLACE, data, content_type="application/json", headers=headers)


def test_a_preview_tells_what_it_read_and_keeps_nothing(office):
    answer = office.post(
        f"{PLACE}?preview=true", make.pack_bytes(), content_type="application/json"
    )
    assert answer.status_code == 200
    told = answer.json()
    sent = json.loads(make.pack_bytes())
    assert told["read"]["ground"] == len(sent["ground"])
    assert told["pack"]["toes"] == sent["toes"]
    assert not Survey.objects.exists()
    assert not Upload.objects.exists()


def test_a_survey_is_kept_byte_for_byte_and_told_back(office):
    data = make.pack_bytes()
    answer = send(office, data)
    assert answer.status_code == 201, answer.content
    survey = Survey.objects.get()
    assert answer["Location"] == f"http://testserver/api/v1/surveys/{survey.pk}"
    told = answer.json()
    assert (told["site"], told["version"], told["digest"]) == ("EX-A", 1, survey.digest)
    assert told["reading"] is not None
    assert survey.upload.size == len(data)
    assert office.get(answer["Location"]).json() == told


def test_a_form_with_one_file_is_taken_like_a_body(site, office):
    book = Path("fixtures/packs/BI-03.xlsx").read_bytes()
    make.a_site(site.watershed, code="BI-03")
    file = SimpleUploadedFile("BI-03.xlsx", book)
    answer = office.post("/api/v1/sites/BI-03/surveys", {"file": file})
    assert answer.status_code == 201, answer.content
    assert answer.json()["file"] == "BI-03.xlsx"


def test_a_refused_survey_names_each_field(office):
    pack = json.loads(make.pack_bytes())
    del pack["toes"]
    pack["ground"][0]["level_m"] = "high"
    answer = send(office, json.dumps(pack).encode())
    assert answer.status_code == 422
    assert answer["Content-Type"] == "application/problem+json"
    fields = {one["field"] for one in answer.json()["findings"]}
    assert "toes.left_m" in fields
    assert any("level_m" in field for field in fields)
    assert Upload.objects.get().outcome == "refused"
    assert not Survey.objects.exists()


def test_sent_twice_under_one_key_is_one_survey(office):
    data = make.pack_bytes()
    first = send(office, data, **{"Idempotency-Key": "a-1"})
    second = send(office, data, **{"Idempotency-Key": "a-1"})
    assert (first.status_code, second.status_code) == (201, 201)
    assert second.json() == first.json()
    assert second["Location"] == first["Location"]
    assert second["Idempotency-Replayed"] == "true"
    assert Survey.objects.count() == Upload.objects.count() == 1


def test_a_key_with_other_contents_is_a_conflict(office):
    send(office, make.pack_bytes(), **{"Idempotency-Key": "a-1"})
    answer = send(office, make.pack_bytes(letter="b"), **{"Idempotency-Key": "a-1"})
    assert answer.status_code == 409
    assert answer["Content-Type"] == "application/problem+json"
    assert Survey.objects.count() == 1


def test_a_refused_write_may_be_mended_under_its_key(office):
    wrong = send(office, b"{}", **{"Idempotency-Key": "a-1"})
    right = send(office, make.pack_bytes(), **{"Idempotency-Key": "a-1"})
    assert (wrong.status_code, right.status_code) == (422, 201)
    assert list(Upload.objects.order_by("pk").values_list("outcome", flat=True)) == [
        "refused",
        "kept",
    ]


def test_without_a_key_the_same_file_is_known_by_its_bytes(office):
    send(office, make.pack_bytes())
    again = send(office, make.pack_bytes())
    assert again.status_code == 422
    assert again.json()["findings"][0]["rule"] == "FI-01"


def test_keys_of_two_people_do_not_meet(site, office, as_user):
    other = as_user(make.an_engineer(site.watershed.district))
    send(office, make.pack_bytes(), **{"Idempotency-Key": "a-1"})
    answer = send(other, make.pack_bytes(letter="b"), **{"Idempotency-Key": "a-1"})
    assert answer.status_code == 201


@pytest.mark.parametrize("role", [Role.DISTRICT, Role.PROGRAMME, Role.AUDITOR])
def test_who_may_see_but_not_hand_in_is_told_so(site, as_user, role):
    client = as_user(make.a_user(role, site.watershed.district))
    answer = send(client, make.pack_bytes())
    assert answer.status_code == 403
    assert "hand in a survey" in answer.json()["detail"]


def test_another_district_has_no_such_site(site, as_user):
    stranger = as_user(make.an_engineer(make.a_district("AV")))
    for answer in (send(stranger, make.pack_bytes()), stranger.get(PLACE)):
        assert answer.status_code == 404
        assert "EX-A" not in answer.json()["detail"]


def test_a_body_over_the_limit_is_turned_away_unread(office):
    answer = office.post(PLACE, b"{}", content_type="application/json", CONTENT_LENGTH=str(10**9))
    assert answer.status_code == 413
    assert answer["Content-Type"] == "application/problem+json"


def test_two_files_in_one_form_are_not_guessed_between(office):
    files = {name: SimpleUploadedFile(name, b"{}") for name in ("a.json", "b.json")}
    answer = office.post(PLACE, files)
    assert answer.status_code == 400
    assert answer.json()["findings"][0]["field"] == "file"
