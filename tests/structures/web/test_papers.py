"""Papers, photos, questions and the register on their pages."""

from __future__ import annotations

from datetime import date

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.test import Client

from structures.models import Entry, Move, Paper, Photo, Role
from tests.factories import a_district, a_site, a_user, a_watershed
from tests.papers import GIVEN, People, a_paper, a_photo
from tests.pictures import jpeg

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    return a_site(a_watershed(a_district()))


@pytest.fixture
def people(site):
    return People(site.watershed.district)


def desk(user):
    client = Client()
    client.force_login(user)
    return client


def page(answer):
    return " ".join(answer.content.decode().split())


def flat(given):
    """What a browser sends for a paper."""
    sent = {}
    for name, value in given.items():
        if isinstance(value, list):
            for at, row in enumerate(value):
                sent |= {f"{name}-{at}-{key}": one for key, one in row.items()}
        else:
            sent[name] = value
    return sent


def scan(name="sheet.jpg"):
    return SimpleUploadedFile(name, jpeg(), "image/jpeg")


def test_a_paper_is_filed_with_its_photo(site, people):
    client = desk(people.district)
    url = "/sites/EX-A/papers/hearing/"
    answer = client.post(url, {**flat(GIVEN["hearing"]), "photo": scan()}, follow=True)
    assert "Filed: minutes of the hearing, version 1." in page(answer)
    paper = Paper.objects.get()
    assert paper.content["settlements"][0]["settlement"] == "Pirrumad"
    text = page(client.get(f"/papers/{paper.pk}/"))
    for words in ("Who was heard", "gauge read weekly", paper.digest, Entry.objects.get().code):
        assert words in text
    assert "gauge read weekly" in page(client.get(url))


def test_what_was_typed_and_sent_is_not_lost_when_it_is_refused(site, people):
    client = desk(people.engineer)
    sent = flat({**GIVEN["underflow"], "shares": []})
    answer = client.post("/sites/EX-A/papers/underflow/", {**sent, "photo": scan()})
    assert answer.status_code == 422
    text = page(answer)
    assert "keeps in a dry year" in text
    assert "Test of the well at the ford, 3 days" in text
    photo = Photo.objects.get()
    assert f'name="photo_id" value="{photo.pk}"' in text
    again = {**flat(GIVEN["underflow"]), "photo_id": str(photo.pk)}
    client.post("/sites/EX-A/papers/underflow/", again)
    assert list(Paper.objects.get().photos.all()) == [photo]


def test_a_field_that_does_not_belong_is_refused(site, people):
    sent = {**flat(GIVEN["survey-permission"]), "benchmrk": "x"}
    answer = desk(people.engineer).post("/sites/EX-A/papers/survey-permission/", sent)
    assert answer.status_code == 422
    assert "Was benchmark meant?" in page(answer)


@pytest.mark.parametrize("kind", ["estimate", "nothing"])
def test_there_is_no_form_for_what_is_made_elsewhere(site, people, kind):
    assert desk(people.engineer).get(f"/sites/EX-A/papers/{kind}/").status_code == 404


def test_a_blank_sheet_has_room_for_signatures(site, people):
    text = page(desk(people.field).get("/sites/EX-A/papers/handover/sheet/"))
    assert "Signature or thumb" in text
    assert "Who does not object has not agreed by that." in text


def test_a_photo_is_shown_to_those_who_may_see_its_site(site, people):
    photo = a_photo(site, people.field)
    answer = desk(people.engineer).get(f"/photos/{photo.pk}/")
    assert answer["Content-Type"] == "image/jpeg"
    assert answer["X-Content-Type-Options"] == "nosniff"
    assert b"".join(answer.streaming_content) == jpeg()
    stranger = a_user(Role.ENGINEER, a_district("NX"))
    assert desk(stranger).get(f"/photos/{photo.pk}/").status_code == 404


def test_the_structure_says_what_it_waits_for_and_offers_the_paper(site, people):
    text = page(desk(people.field).get("/sites/EX-A/structure/"))
    assert "Missing for walked" in text
    assert "/sites/EX-A/papers/walk-over/" in text
    assert "Move to walked" not in text
    a_paper(site.structure, "walk-over", people.field, photos=[a_photo(site, people.field).pk])
    client = desk(people.field)
    assert "Move to walked" in page(client.get("/sites/EX-A/structure/"))
    shown = page(client.get("/sites/EX-A/moves/walked/"))
    assert "It cannot be taken back; another move can follow." in shown
    client.post("/sites/EX-A/moves/walked/")
    site.structure.refresh_from_db()
    assert site.structure.stage == "walked"


def test_a_move_that_is_blocked_says_why_before_and_after(site, people):
    client = desk(people.field)
    assert "walk-over sheet" in page(client.get("/sites/EX-A/moves/walked/"))
    answer = client.post("/sites/EX-A/moves/walked/")
    assert answer.status_code == 422
    assert "Missing for walked: walk-over sheet." in page(answer)
    assert client.get("/sites/EX-A/moves/priced/").status_code == 404


def test_questions_and_answers_carry_names(site, people):
    desk(people.district).post(
        "/sites/EX-A/questions/", {"about": "check sheet", "text": "Who saw the right bank?"}
    )
    asked = site.structure.questions.get()
    desk(people.engineer).post(f"/questions/{asked.pk}/", {"text": "Both engineers, in the pit."})
    text = page(desk(people.field).get("/sites/EX-A/structure/"))
    for words in (
        "Who saw the right bank?",
        "Both engineers, in the pit.",
        people.district.username,
        people.engineer.username,
    ):
        assert words in text
    auditor = desk(a_user(Role.AUDITOR, site.watershed.district))
    assert auditor.post(f"/questions/{asked.pk}/", {"text": "x"}).status_code == 422


def test_the_thread_and_an_entry_by_the_code_on_paper(site, people):
    a_photo(site, people.field, what="both banks")
    a_paper(site.structure, "survey-permission", people.engineer)
    entry = Entry.objects.get()
    client = desk(a_user(Role.AUDITOR, site.watershed.district))
    text = page(client.get("/sites/EX-A/thread/"))
    assert text.index("both banks") < text.index("paper filed")
    typed = entry.code.lower().replace("-", " ")
    answer = client.get("/register/", {"q": typed}, follow=True)
    assert entry.digest in page(answer)
    assert "BM 1 on the culvert" in page(answer)
    assert client.get("/register/0000-0000-0001/").status_code == 404
    assert "paper filed" in page(client.get("/register/", {"q": "survey plan"}))
    assert "No entry is found." in page(client.get("/register/", {"q": "nothing of the kind"}))


def test_moves_from_before_stand_in_the_thread_on_their_day(site, people):
    Move.objects.create(
        structure=site.structure,
        number=1,
        from_stage="",
        to_stage="noted",
        day=date(2024, 3, 1),
        by=people.field,
    )
    a_paper(site.structure, "survey-permission", people.engineer)
    text = page(desk(people.engineer).get("/sites/EX-A/thread/"))
    assert text.index("1 Mar 2024") < text.index("paper filed")
    assert "taken over from before" in text
