"""Papers filed: by whom, in versions, with their photos, entered in the register."""

from __future__ import annotations

import uuid

import pytest
from django.db import connection

from structures.actions.papers import file_paper
from structures.actions.photos import PHOTO_MOST_BYTES, Position, keep_photo
from structures.errors import Refused
from structures.models import Entry, Paper, Photo
from structures.queries.register import check_registers
from structures.runs.files import kept_bytes
from tests.factories import a_district, a_site, a_watershed, an_engineer
from tests.papers import GIVEN, People, a_paper, a_photo
from tests.pictures import GPS_MARK, exif, jpeg, png, segment

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    return a_site(a_watershed(a_district()))


@pytest.fixture
def people(site):
    return People(site.watershed.district)


class TestPhotos:
    def test_a_photo_is_kept_once_without_its_place(self, site, people):
        data, name = jpeg(segment(0xE1, exif())), uuid.uuid4()
        said = {"site_id": site.pk, "photo_id": name, "data": data, "by": people.field}
        first, again = keep_photo(**said), keep_photo(**said)
        assert first == again
        assert Photo.objects.count() == 1
        assert GPS_MARK not in kept_bytes(first.sha256)
        assert (first.lat, first.lon, first.form) == (None, None, "image/jpeg")

    def test_a_position_said_openly_stays(self, site, people):
        photo = a_photo(site, people.field, position=Position(15.75, 77.44, 6.0))
        assert (photo.lat, photo.lon, photo.accuracy_m) == (15.75, 77.44, 6.0)

    def test_another_photo_under_the_same_identifier_is_refused(self, site, people):
        name = uuid.uuid4()
        keep_photo(site_id=site.pk, photo_id=name, data=jpeg(), by=people.field)
        with pytest.raises(Refused, match="Another photo came"):
            keep_photo(site_id=site.pk, photo_id=name, data=png(), by=people.field)

    @pytest.mark.parametrize(
        ("data", "words"),
        [
            (b"MZ\x90\x00", "no photo and no scan"),
            (b"<svg onload=alert(1)>", "no photo and no scan"),
            (jpeg()[:30], "cannot be read"),
            (b"\xff\xd8\xff" + bytes(PHOTO_MOST_BYTES), "limit 10"),
        ],
    )
    def test_what_is_no_photo_is_refused(self, site, people, data, words):
        with pytest.raises(Refused, match=words):
            keep_photo(site_id=site.pk, photo_id=uuid.uuid4(), data=data, by=people.field)
        assert not Photo.objects.exists()

    def test_nobody_from_elsewhere_adds_one(self, site):
        with pytest.raises(Refused, match="You may not"):
            a_photo(site, an_engineer(a_district("NX")))


def test_a_paper_is_kept_in_versions_and_entered(site, people):
    structure = site.structure
    first = a_paper(structure, "survey-permission", people.engineer)
    same = a_paper(structure, "survey-permission", people.engineer)
    second = a_paper(structure, "survey-permission", people.engineer, services_asked="Again")
    assert (first, first.version, second.version) == (same, 1, 2)
    entries = Entry.objects.filter(act="paper filed").order_by("number")
    assert [one.content["version"] for one in entries] == [1, 2]
    assert entries[0].content["content"] == first.content
    assert entries[1].content["digest"] == second.digest


@pytest.mark.parametrize(
    ("kind", "who", "words"),
    [
        ("underflow", "field", "Field staff does not write the underflow sheet."),
        ("hearing", "programme", "does not write the minutes"),
        ("estimate", "engineer", "There is no form for estimate"),
    ],
)
def test_only_its_makers_write_a_paper(site, people, kind, who, words):
    """Oracle: column "moved in by" and the makers of each paper in the office's practice."""
    with pytest.raises(Refused, match=words):
        file_paper(
            structure_id=site.structure.pk,
            kind=kind,
            given=GIVEN.get(kind, {}),
            by=getattr(people, who),
        )


def test_a_signed_sheet_needs_its_photo(site, people):
    with pytest.raises(Refused, match="No photo of the signed minutes"):
        a_paper(site.structure, "hearing", people.district)
    assert not Paper.objects.exists()
    photo = a_photo(site, people.district)
    paper = a_paper(site.structure, "hearing", people.district, photos=[photo.pk])
    assert list(paper.photos.all()) == [photo]
    assert paper.about == "Pirrumad"


def test_a_photo_of_another_site_is_none_of_this_paper(site, people):
    other = a_site(site.watershed, "EX-B", lat=15.76)
    with pytest.raises(Refused, match="not one of this site"):
        a_paper(
            site.structure, "hearing", people.district, photos=[a_photo(other, people.field).pk]
        )


def test_what_the_rules_block_is_not_kept(site, people):
    """Oracle: UF-05 of the office's practice."""
    with pytest.raises(Refused) as refused:
        a_paper(site.structure, "underflow", people.engineer, shares=[])
    assert "UF-05" in {one.rule for one in refused.value.findings}
    assert not Paper.objects.exists()


def test_a_drawing_is_not_checked_before_it_is_there(site, people):
    with pytest.raises(Refused, match="There is no drawing yet"):
        a_paper(site.structure, "check", people.checker)


@pytest.mark.parametrize("column", ["content", "about"])
def test_a_paper_altered_past_the_program_is_found(site, people, column):
    paper = a_paper(site.structure, "survey-permission", people.engineer)
    on = " ON structures_paper" if connection.vendor == "postgresql" else ""
    value = {"content": '{"plan": "another"}', "about": "else"}[column]
    with connection.cursor() as cursor:
        cursor.execute(f"DROP TRIGGER structures_paper_unchanging{on}")
        statement = f"UPDATE structures_paper SET {column} = %s WHERE id = %s"  # noqa: S608 -- of the list above
        cursor.execute(statement, (value, paper.pk))
    [checked] = list(check_registers())
    assert checked.number == Entry.objects.get().number
    assert "survey-permission 1" in checked.why
