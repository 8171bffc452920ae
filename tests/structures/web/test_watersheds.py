"""Watersheds, files and entry from a file in the browser."""

from __future__ import annotations

import json

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from structures.models import LongProfilePoint, Role, Site, Upload, Watershed
from tests import factories as make

pytestmark = pytest.mark.django_db
SITES = b"code,watershed,lat,lon,downstream_users\nOD-1,OD,15.75,77.45,none\nOD-2,OD,15.76,77.46,\n"
PROFILE = b"code,distance_upstream_m,bed_level_m\nEX-A,-120,99.1\nEX-A,0,99.5\nEX-A,130,100.2\n"


@pytest.fixture(autouse=True)
def _own_files(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path


@pytest.fixture
def site():
    return make.a_site()


@pytest.fixture
def office(client, site):
    client.force_login(make.an_engineer(site.watershed.district))
    return client


def words(answer):
    return " ".join(answer.content.decode().split())


def hand_in(client, kind, data, name="list.csv", district="QU"):
    file = SimpleUploadedFile(name, data)
    return client.post("/entry/", {"kind": kind, "district": district, "file": file})


def keep(client, page):
    return client.post("/entry/", {"looked_at": page.context["looked_at"]})


def test_a_list_of_sites_is_shown_back_before_it_is_kept(office):
    page = hand_in(office, "sites", SITES)
    assert page.status_code == 200
    assert "2 rows." in words(page)
    assert "Who uses water below OD-2 is blank." in words(page)
    assert (Site.objects.count(), Upload.objects.count()) == (1, 0)
    assert keep(office, page).url == "/sites/"
    assert set(Site.objects.values_list("code", flat=True)) == {"EX-A", "OD-1", "OD-2"}
    assert Upload.objects.get().outcome == "kept"


def test_a_wrong_list_is_refused_whole_with_every_line(office):
    page = hand_in(office, "sites", SITES + b"OD-3,OD,95,77.4,\nEX-A,OD,15.7,77.4,\n")
    assert page.status_code == 422
    for said in ("line 4", "line 5", "EX-A is the ford already"):
        assert said in words(page)
    assert Site.objects.count() == 1


def test_a_file_over_the_limit_is_told_before_it_is_read(office, monkeypatch):
    """Oracle: FI-02, its limit made small here: a sentence at the field, and nothing is kept."""
    monkeypatch.setattr("structures.web.sent_files.FILE_MOST_BYTES", len(SITES) - 1)
    page = hand_in(office, "sites", SITES)
    assert page.status_code == 422
    assert "The file has 0 MB, limit 20. Nothing was read. Split it." in words(page)
    assert (Site.objects.count(), Upload.objects.count()) == (1, 0)


def test_a_body_with_too_many_fields_gets_a_page_of_its_own(office):
    answer = office.post("/entry/", {f"field-{place}": "x" for place in range(1001)})
    assert answer.status_code == 400
    assert "Why could this not be read?" in words(answer)


def test_what_is_sent_after_the_session_ended_is_told_to_be_lost(client, site):
    answer = client.post(f"/sites/{site.code}/edit/", {"name": "the ford below"}, follow=True)
    assert answer.redirect_chain == [("/sign-in/?next=/sites/EX-A/edit/", 302)]
    assert "Your session had ended before this was sent." in words(answer)
    site.refresh_from_db()
    assert site.name == "the ford"
    assert "Your session had ended" not in words(client.get("/sites/", follow=True))


def test_outlines_and_bed_points_come_in_by_the_same_door(office, site):
    ring = [[x + 0.2, y] for x, y in make.SQUARE]
    feature = {
        "type": "Feature",
        "properties": {"code": "TA", "name": "Tavrikond", "stream": "Tavri"},
        "geometry": {"type": "Polygon", "coordinates": [ring]},
    }
    page = hand_in(office, "watersheds", json.dumps(feature).encode(), "outlines.geojson")
    assert keep(office, page).url == "/watersheds/"
    assert Watershed.objects.get(code="TA").area_km2 > 0
    keep(office, hand_in(office, "profiles", PROFILE))
    assert LongProfilePoint.objects.count() == 3
    page = words(office.get("/watersheds/OD/"))
    for said in ("Bed along Odremma", ">EX-A</text>", "100.20"):
        assert said in page


def test_a_kind_that_a_role_may_not_enter_is_not_offered(client, site):
    client.force_login(make.a_user(Role.FIELD, site.watershed.district))
    page = words(client.get("/entry/"))
    assert 'value="sites"' in page
    assert 'value="watersheds"' not in page
    assert hand_in(client, "watersheds", b"{}", "x.geojson").status_code == 422
    client.force_login(make.a_user(Role.AUDITOR, site.watershed.district))
    assert '<form method="post" enctype' not in words(client.get("/entry/"))


def test_a_look_at_a_list_serves_its_own_hand_only(client, office, site):
    page = hand_in(office, "sites", SITES)
    client.force_login(make.an_engineer(site.watershed.district))
    assert keep(client, page).status_code == 422
    assert Site.objects.count() == 1


def test_watersheds_are_listed_with_their_sites(office):
    page = words(office.get("/watersheds/"))
    assert "/watersheds/OD/" in page
    page = words(office.get("/watersheds/OD/"))
    assert "No bed was levelled along a stream." in page
    assert page.count('class="dw dw-wide"') == 1


def test_a_stream_without_a_course_is_named_until_its_line_comes_in(office, site):
    site.watershed.streams.create(name="Odre")
    assert "The course of Odre was not handed in." in words(office.get("/watersheds/OD/"))
    line = {"type": "LineString", "coordinates": [[77.42, 15.72], [77.47, 15.77]]}
    course = {"type": "Feature", "properties": {"stream": "Odre"}, "geometry": line}
    page = hand_in(office, "watersheds", json.dumps(course).encode(), "streams.geojson")
    assert "OD Odre, course" in words(page)
    keep(office, page)
    page = words(office.get("/watersheds/OD/"))
    assert "The course of Odre" not in page
    assert page.count(">Odre</text>") == 2


def test_another_district_sees_neither_watershed_nor_file(client, office, site):
    keep(office, hand_in(office, "sites", SITES))
    upload = Upload.objects.get()
    assert words(office.get("/files/")).count("list.csv") == 1
    client.force_login(make.an_engineer(make.a_district("ZZ", name="elsewhere")))
    for path in ("/watersheds/OD/", f"/files/{upload.pk}/"):
        answer = client.get(path)
        assert answer.status_code == 404
        assert "Odremma" not in words(answer)
    assert "list.csv" not in words(client.get("/files/"))


def test_a_file_says_what_became_of_it(office):
    keep(office, hand_in(office, "sites", SITES))
    page = words(office.get(f"/files/{Upload.objects.get().pk}/"))
    for said in ("list of sites", "Who uses water below OD-2", Upload.objects.get().sha256):
        assert said in page


class TestAsReceived:
    """The file itself, handed back to whoever may know what stands in it."""

    def place(self):
        return f"/files/{Upload.objects.get().pk}/as-received/"

    @pytest.fixture
    def sent(self, office):
        data = SITES + b'OD-3,OD,15.77,77.46,"=HYPERLINK(""http://x"")"\n'
        keep(office, hand_in(office, "sites", data, "<script>\u0939.csv"))
        return data

    def test_the_bytes_are_the_same_and_the_browser_only_saves_them(self, office, sent):
        page = words(office.get(f"/files/{Upload.objects.get().pk}/"))
        assert f'<a href="{self.place()}">' in page
        answer = office.get(self.place())
        assert b"".join(answer.streaming_content) == sent
        assert answer["Content-Type"] == "application/octet-stream"
        assert answer["X-Content-Type-Options"] == "nosniff"
        # Oracle: RFC 6266 4.3 and RFC 8187: what is no ASCII stands in filename*, in percents.
        told = answer["Content-Disposition"]
        assert told == "attachment; filename*=utf-8''%3Cscript%3E%E0%A4%B9.csv"

    @pytest.mark.usefixtures("sent")
    def test_a_name_with_line_ends_makes_no_header(self, office):
        Upload.objects.update(name='a\r\nSet-Cookie: x="1".csv')
        told = office.get(self.place())["Content-Disposition"]
        assert told == 'attachment; filename="aSet-Cookie: x=\\"1\\".csv"'

    @pytest.mark.usefixtures("sent")
    def test_a_list_of_the_district_is_not_handed_to_one_watershed_of_it(self, client, site):
        district = site.watershed.district
        make.a_watershed(district, "TA")
        narrow = make.a_user(Role.FIELD, district, watersheds=[site.watershed])
        client.force_login(narrow)
        page = words(client.get(f"/files/{Upload.objects.get().pk}/"))
        assert "its sender may have it back" in page
        assert self.place() not in page
        assert client.get(self.place()).status_code == 404
        client.force_login(make.a_user(Role.FIELD, district))
        assert client.get(self.place()).status_code == 200
        Upload.objects.update(by=narrow)
        client.force_login(narrow)
        assert client.get(self.place()).status_code == 200

    @pytest.mark.usefixtures("sent")
    def test_bytes_that_are_lost_are_said_to_be_lost(self, office, settings, tmp_path):
        settings.MEDIA_ROOT = tmp_path / "elsewhere"
        answer = office.get(self.place())
        assert answer.status_code == 422
        assert "The bytes of this file are no longer kept." in words(answer)

    def test_a_look_whose_bytes_are_lost_asks_for_the_file_again(self, office, settings, tmp_path):
        page = hand_in(office, "sites", SITES)
        settings.MEDIA_ROOT = tmp_path / "elsewhere"
        answer = keep(office, page)
        assert answer.status_code == 422
        assert "What was looked at is no longer there." in words(answer)


def test_field_people_see_no_file_of_rates(client, site):
    district = site.watershed.district
    make.a_schedule(district, make.an_engineer(district))
    upload = Upload.objects.get(kind="rates")
    client.force_login(make.a_user(Role.FIELD, district))
    assert client.get(f"/files/{upload.pk}/").status_code == 404
    client.force_login(make.a_user(Role.AUDITOR, district))
    assert client.get(f"/files/{upload.pk}/").status_code == 200
