"""Files received: kept whole, once, with what became of them."""

from __future__ import annotations

import hashlib

import pytest
from django.utils import timezone

from structures.actions.inbox import receive_file
from structures.actions.surveys import accept_survey
from structures.errors import Refused
from structures.intake.archive import FILE_MOST_BYTES
from structures.models import Role, Upload
from structures.queries.uploads import visible_uploads
from structures.runs.files import kept_bytes
from tests.factories import (
    a_district,
    a_site,
    a_survey,
    a_user,
    a_watershed,
    an_engineer,
    pack_bytes,
)

pytestmark = pytest.mark.django_db


@pytest.fixture
def watershed():
    return a_watershed()


@pytest.fixture
def engineer(watershed):
    return an_engineer(watershed.district)


def test_a_file_lies_under_its_digest_and_never_under_its_name(watershed, engineer):
    upload = receive_file(
        kind="survey", name="../../etc\\a\\survey.json", data=b"{}", owner=watershed, by=engineer
    )
    assert (upload.name, upload.size, upload.outcome) == ("survey.json", 2, "received")
    assert upload.sha256 == hashlib.sha256(b"{}").hexdigest()
    assert kept_bytes(upload.sha256) == b"{}"


def test_a_file_over_the_limit_is_not_kept(watershed, engineer):
    data = b" " * (FILE_MOST_BYTES + 1)
    with pytest.raises(Refused) as refused:
        receive_file(kind="survey", name="big.json", data=data, owner=watershed, by=engineer)
    assert refused.value.findings[0].rule == "FI-02"
    assert refused.value.sentence() == (
        "big.json: The file has 20 MB, limit 20. Nothing was read. Split it."
    )
    assert not Upload.objects.exists()


def test_nobody_hands_in_where_they_may_not(watershed):
    for user in (a_user(Role.AUDITOR, watershed.district), an_engineer(a_district("ZZ"))):
        with pytest.raises(Refused, match="You may not hand in a survey here"):
            receive_file(kind="survey", name="x", data=b"{}", owner=watershed, by=user)


def test_a_kept_file_says_its_rows(watershed, engineer):
    survey = a_survey(a_site(watershed), engineer)
    upload = survey.upload
    assert (upload.outcome, upload.rows_refused) == ("kept", 0)
    # Worked example A: six ground points and six points of the rock line.
    assert (upload.rows_in, upload.rows_kept, upload.rows_held) == (12, 12, 0)
    assert upload.findings == survey.findings


def test_this_very_file_is_refused_with_day_and_sender(watershed, engineer):
    site = a_site(watershed)
    a_survey(site, engineer)
    with pytest.raises(Refused) as refused:
        accept_survey(site_id=site.pk, name="other name.json", data=pack_bytes(), by=engineer)
    today = timezone.localdate().isoformat()
    assert refused.value.sentence() == (
        f"other name.json: This very file came on {today} from {engineer.username}. "
        "Nothing was added. Send the file that is new."
    )
    assert refused.value.findings[0].rule == "FI-01"
    assert site.surveys.count() == 1
    assert Upload.objects.count() == 1


def test_the_same_file_elsewhere_is_none_of_this_district(watershed, engineer):
    a_survey(a_site(watershed), engineer)
    other = a_watershed(a_district("ZZ"), "ZA")
    sender = an_engineer(other.district)
    upload = receive_file(
        kind="survey", name="survey.json", data=pack_bytes(), owner=other, by=sender
    )
    assert upload.pk


def test_who_may_not_see_the_first_file_learns_nothing_of_it(watershed, engineer):
    a_survey(a_site(watershed), engineer)
    other = a_watershed(watershed.district, "TA")
    narrow = an_engineer(watershed.district, watersheds=[other])
    with pytest.raises(Refused) as refused:
        receive_file(kind="survey", name="s.json", data=pack_bytes(), owner=other, by=narrow)
    assert "This very file came before. Nothing was added." in refused.value.sentence()


def test_a_refused_file_is_kept_with_its_findings_and_may_come_again(watershed, engineer):
    site = a_site(watershed)
    data = pack_bytes(toes={"left_m": 50.0, "right_m": 30.0})
    for _ in range(2):
        with pytest.raises(Refused):
            accept_survey(site_id=site.pk, name="wrong.json", data=data, by=engineer)
    first, second = Upload.objects.all()
    assert first.sha256 == second.sha256
    assert [(one.outcome, one.rows_in, one.rows_refused) for one in (first, second)] == [
        ("refused", None, 1)
    ] * 2
    assert first.findings[0]["field"] == "toes.left_m"
    assert kept_bytes(first.sha256) == data
    assert not site.surveys.exists()


def test_files_are_seen_by_watershed_and_district(watershed, engineer):
    a_survey(a_site(watershed), engineer)
    other = a_watershed(watershed.district, "TA")
    everywhere = a_user(Role.AUDITOR, watershed.district)
    narrow = a_user(Role.AUDITOR, watershed.district, watersheds=[other])
    foreign = a_user(Role.AUDITOR, a_district("ZZ"))
    assert [visible_uploads(user).count() for user in (everywhere, narrow, foreign)] == [1, 0, 0]
