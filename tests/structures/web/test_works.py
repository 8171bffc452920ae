"""Pages of the works: what they show, what they let whom do, and that they say what is wrong."""

from __future__ import annotations

import json
from datetime import time

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.test import Client

from structures.actions.alarms import set_alarm
from structures.actions.strips import cover_strip
from structures.models import Clash, HoldPoint, PhoneRecord, Role, Strip, TrenchLook
from tests.factories import a_user
from tests.pictures import jpeg
from tests.structures.actions.test_parcels import a_day_sheet, a_hold, a_look, rock, send
from tests.trench import DAY, TODAY, a_trench, as_drawn, ask, dig, look, see

pytestmark = pytest.mark.django_db
WORKS = "/sites/OD-01/works/"
RECORD = "/today/at/OD-01/"


@pytest.fixture
def trench():
    return a_trench()


def at(user):
    client = Client()
    client.force_login(user)
    return client


def text(answer):
    return " ".join(answer.content.decode().split())


def typed(**changes):
    seen = a_look(day="2026-04-10", **changes)
    return {
        key: seen[key] for key in seen if key not in ("id", "type", "site", "strip", "device_time")
    }


def test_strips_stand_against_hold_points(trench):
    strip = dig(trench)
    ask(trench, strip, "H2", **as_drawn(strip))
    page = text(at(trench.engineer).get(WORKS))
    assert "Which strips are seen, and which are open?" in page
    assert page.count("<tr>") >= 11
    assert f"/holds/{strip.holds.get(hold='H1').pk}/" in page
    assert "waiting" in page
    assert "No trench look today" in page  # the look was yesterday's
    assert "Strip 1 from 8.88 to 14.88 m: open." in page


def test_a_strip_covered_unseen_says_so_on_every_sheet(trench):
    strip = dig(trench)
    cover_strip(strip_id=strip.pk, on=DAY, by=trench.field, knows_unseen=True)
    said = "H3 rock cleaned and seen, H4 key cut, H6 film, lower face, H8 film, upper face and top"
    for place in (WORKS, f"{WORKS}strips/1/", "/sites/OD-01/", "/sites/OD-01/structure/"):
        page = text(at(trench.engineer).get(place))
        assert "covered unseen" in page, place
        assert said in page, place


def test_a_look_on_the_page_is_one_like_from_a_phone(trench):
    dig(trench)
    answer = at(trench.field).post(
        f"{RECORD}strips/1/look/", typed(spoil_back_m="1,2"), follow=True
    )
    assert "Spoil is 1.2 m from the edge; 1.5 m is asked for here." in text(answer)
    row = TrenchLook.objects.get(day=TODAY)
    assert (row.strip.number, row.result, row.spoil_back_m) == (1, "stop", 1.2)
    assert PhoneRecord.objects.get(pk=row.pk).outcome == "kept"


def test_a_form_sent_twice_is_kept_once(trench):
    sent = {"record_id": "dce27fa0-8891-41a6-be12-600763fb47a5", "day": "2026-04-10", "done": "dug"}
    for _ in range(2):
        at(trench.field).post(f"{RECORD}day-sheet/", sent)
    assert trench.structure.day_sheets.count() == 1


def test_a_form_says_what_is_wrong_at_its_field(trench):
    answer = at(trench.field).post(f"{RECORD}day-sheet/", {"day": "2026-04-10", "done": ""})
    assert answer.status_code == 422
    assert answer.context["form"].errors.keys() == {"done"}
    answer = at(trench.field).post(f"{RECORD}look/", typed(depth_m="deep"))
    assert answer.context["form"].errors.keys() == {"depth_m"}
    assert 'value="deep"' in text(answer)
    assert not TrenchLook.objects.exists()


def test_a_hold_point_is_asked_for_and_seen_on_pages(trench):
    """The way from asking to seeing, without a script."""
    strip = dig(trench)
    look(trench, day=TODAY, strip=strip, at=time(7, 0))
    form = f"{RECORD}strips/1/hold-asked/"
    page = text(at(trench.field).get(form))
    assert "H2 of strip 1: trench to rock" in page
    assert 'name="rock_start_m"' in page
    assert 'name="lap_m"' not in page
    levels = {key: f"{value:.2f}" for key, value in as_drawn(strip).items()}
    at(trench.field).post(form, {"hold": "H2", **levels, "photo": jpeg_file()})
    hold = HoldPoint.objects.get(hold="H2")
    assert hold.photos.count() == 1
    desk = text(at(trench.engineer).get("/holds/"))
    assert "H2 of strip 1" in desk
    assert "H2 of strip 1" not in text(at(trench.field).get("/holds/"))
    place = f"/holds/{hold.pk}/"
    assert "What you say here goes into the register" in text(at(trench.engineer).get(place))
    answer = at(trench.engineer).post(place, {"result": "no", "note": ""})
    assert answer.status_code == 422
    at(trench.engineer).post(place, {"result": "go", "note": "as drawn"})
    assert HoldPoint.objects.get(pk=hold.pk).result == "go"


def jpeg_file():
    return SimpleUploadedFile("strip.jpg", jpeg(), "image/jpeg")


def test_the_seers_own_photo_says_its_place(trench):
    strip = dig(trench)
    see(trench, ask(trench, strip, "H2", **as_drawn(strip)))
    hold = ask(trench, strip, "H3", photos=[])
    sent = {"result": "go", "note": "", "photo": jpeg_file()}
    assert at(trench.engineer).post(f"/holds/{hold.pk}/", sent).status_code == 422
    assert not hold.photos.exists()
    sent |= {"photo": jpeg_file(), "taken_at": "2026-04-09T06:00:00.000Z"}
    answer = at(trench.engineer).post(f"/holds/{hold.pk}/", {**sent, "lat": 15.7, "lon": 77.4})
    assert answer.status_code == 302
    assert hold.photos.get().lat == 15.7


def test_a_strip_is_opened_and_covered_on_its_page(trench):
    strip = trench.strips[0]
    see(trench, ask(trench, strip, "H1"))
    place = f"{WORKS}strips/1/"
    answer = at(trench.field).post(place, {"on": "2026-04-10"})
    assert answer.status_code == 422
    assert "No trench look today. Nobody goes in." in text(answer)
    look(trench, day=TODAY, strip=strip)
    at(trench.field).post(place, {"on": "2026-04-10"})
    assert Strip.objects.get(pk=strip.pk).opened_on == TODAY
    answer = at(trench.field).post(place, {"on": "2026-04-10"})
    assert "marked covered unseen for ever" in text(answer)
    at(trench.field).post(place, {"on": "2026-04-10", "knows_unseen": "on"})
    assert Strip.objects.get(pk=strip.pk).covered_unseen


def test_the_wall_is_cut_on_its_page():
    trench = a_trench()
    Strip.objects.filter(structure=trench.structure).delete()
    answer = at(trench.engineer).post(WORKS, {"act": "cut"}, follow=True)
    assert "The wall is cut into 10 strips." in text(answer)
    assert at(trench.field).post(WORKS, {"act": "cut"}).status_code == 422


def test_an_alarm_is_set_by_anybody_and_lifted_by_an_engineer(trench):
    answer = at(trench.field).post("/today/at/OD-01/alarm/", {"why": "rain"}, follow=True)
    assert "The alarm of OD-01 is set." in text(answer)
    assert "An alarm is set. Nobody goes in." in text(at(trench.field).get(WORKS))
    assert at(trench.field).post(WORKS, {"act": "lift", "why": "over"}).status_code == 422
    at(trench.engineer).post(WORKS, {"act": "lift", "why": "the watch is back"})
    assert trench.structure.alarms.get().lifted_by == trench.engineer


def test_todays_round_goes_strip_by_strip(trench):
    dig(trench)
    page = text(at(trench.field).get("/today/"))
    assert page.index("Look into strip 1") < page.index("Ask for H2 of strip 1")
    assert "not looked" in page
    assert "Ask for H1 of strip 2" in page
    auditor = a_user(Role.AUDITOR, trench.structure.site.watershed.district)
    assert "No trench is worked on where you are posted" in text(at(auditor).get("/today/"))


def test_two_forms_of_a_record_stand_side_by_side(trench):
    dig(trench)
    first = rock(423.0)
    send([first], trench.field)
    send([{**first, "level_m": 421.0}], trench.field)
    clash = Clash.objects.get()
    page = text(at(trench.engineer).get(f"/clashes/{clash.pk}/"))
    assert "423.0" in page
    assert "<b>421.0</b>" in page
    assert f"/clashes/{clash.pk}/" in text(at(trench.engineer).get("/holds/"))
    assert f"/clashes/{clash.pk}/" in text(at(trench.engineer).get(WORKS))
    sent = {"counts": "first", "why": "The second was read from the edge."}
    assert at(trench.field).post(f"/clashes/{clash.pk}/", sent).status_code == 422
    assert at(trench.engineer).post(f"/clashes/{clash.pk}/", sent).status_code == 302
    page = text(at(trench.engineer).get(f"/clashes/{clash.pk}/"))
    assert "read from the edge" in page


def test_the_box_tells_what_the_office_has_had(trench):
    send([a_day_sheet(), a_look(result="safe")], trench.field)
    page = text(at(trench.field).get("/today/parcel/"))
    assert "is not known here" in page
    assert page.count("OD-01</b>") == 2


def test_the_worker_names_every_file_of_the_shell(trench):
    answer = at(trench.field).get("/today/worker.js")
    assert answer["Content-Type"].startswith("text/javascript")
    assert "no-store" in answer["Cache-Control"]
    head = answer.content.decode().splitlines()[0]
    shell = json.loads(head.removeprefix("const SHELL = ").partition(", EDITION")[0])
    page = at(trench.field).get("/today/").content.decode()
    for name in shell:
        if name.endswith((".js", ".css")) and "form.js" not in name:
            assert name in page, name
    manifest = at(trench.field).get("/today/app.webmanifest").json()
    assert manifest["start_url"] == "/today/"


def test_a_parcel_over_the_wire(trench):
    dig(trench)
    client = at(trench.field)
    sent = {"by": trench.field.username, "records": [a_look(), a_hold()]}
    answer = client.post("/api/v1/parcels", sent, content_type="application/json")
    assert answer.status_code == 200
    assert [one["result"] for one in answer.json()["records"]] == ["kept", "kept"]
    again = client.post("/api/v1/parcels", sent, content_type="application/json").json()
    assert [one["result"] for one in again["records"]] == ["already here", "already here"]
    other = {**sent, "by": trench.engineer.username}
    answer = client.post("/api/v1/parcels", other, content_type="application/json")
    assert (answer.status_code, answer["Content-Type"]) == (422, "application/problem+json")


def test_a_photo_over_the_wire_once(trench):
    client = at(trench.field)
    name = "15ccef6b-4f65-48d6-aa31-f87f0cdd685f"
    for _ in range(2):
        sent = {"id": name, "site": "OD-01", "photo": jpeg_file(), "lat": "15.7", "lon": "77.4"}
        answer = client.post("/api/v1/photos", sent)
        assert (answer.status_code, answer.json()["id"]) == (201, name)
    assert trench.structure.site.photos.count() == 1
    wrong = {"id": name, "site": "OD-01", "photo": jpeg_file(), "lat": "15.7"}
    assert client.post("/api/v1/photos", wrong).status_code == 400


def test_strips_over_the_wire(trench):
    dig(trench)
    found = at(trench.engineer).get("/api/v1/strips?site=OD-01&open=true").json()
    assert [(one["number"], one["stands"]) for one in found["results"]] == [(1, "open")]


def test_an_alarm_stops_the_round(trench):
    strip = dig(trench)
    look(trench, day=TODAY, strip=strip)
    set_alarm(structure_id=trench.structure.pk, why="The stream rises", by=trench.field)
    assert "An alarm is set: The stream rises." in text(at(trench.field).get("/today/"))


def test_a_pit_too_near_a_bund_asks_for_consent(trench):
    """Rule DW-07."""
    place = f"{WORKS}clay/"
    sent = {"name": "Tank bed", "proven_m3": "900", "distance_km": "1,5", "from_bund_m": "40"}
    answer = at(trench.field).post(place, sent)
    assert answer.status_code == 422
    assert answer.context["form"].errors.keys() == {"from_bund_m"}
    assert not trench.structure.site.photos.exists()
    at(trench.field).post(place, {**sent, "photo": jpeg_file()})
    source = trench.structure.site.clay_sources.get()
    assert (source.distance_km, source.consent is not None) == (1.5, True)
    assert "Tank bed" in text(at(trench.engineer).get(place))


def test_photos_of_a_strip_are_shown_with_it(trench):
    dig(trench)
    at(trench.field).post(f"{RECORD}strips/1/look/", typed(photo=jpeg_file()))
    assert "does not say where" in text(at(trench.engineer).get(f"{WORKS}strips/1/"))
