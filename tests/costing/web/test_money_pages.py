"""Money in the browser: an uploaded survey is priced, frozen, compared; rates come in with a look."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.core.management import call_command
from django.test import Client

from costing.models import Estimate, RateSchedule
from structures.actions.surveys import accept_survey
from structures.models import Run
from structures.runs.queue import execute
from tests import factories

pytestmark = pytest.mark.django_db
EXAMPLE = Path("fixtures/packs/example-b.json")
RATES = Path("fixtures/rates/examples.csv")


@pytest.fixture
def place(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path
    return factories.a_site(code="EX-B")


@pytest.fixture
def engineer(place):
    return factories.a_user("engineer", place.watershed.district)


def bring_rates(client, district, data=None):
    file = SimpleUploadedFile("examples.csv", data or RATES.read_bytes())
    looked = client.post("/rates/new/", {"district": district.pk, "rates": file})
    assert looked.status_code == 200, looked.content.decode()
    assert RateSchedule.objects.filter(district=district).count() < 2
    return client.post("/rates/new/", {"looked_at": looked.context["looked_at"]})


@pytest.fixture
def priced(client, place, engineer):
    """The engineer's path: rates in, survey in, estimate asked for and computed."""
    client.force_login(engineer)
    bring_rates(client, place.watershed.district)
    accept_survey(site_id=place.pk, name=EXAMPLE.name, data=EXAMPLE.read_bytes(), by=engineer)
    asked = client.post(f"/sites/{place.code}/estimates/")
    assert asked.status_code == 302
    execute(str(Run.objects.get(kind="estimate.price").pk))
    return Estimate.objects.get()


def test_page_and_command_give_the_same_figures(client, priced, capsys):
    """Oracle: `appraise --json` on the same files."""
    call_command("appraise", str(EXAMPLE), "--rates", str(RATES), "--json")
    command = json.loads(capsys.readouterr().out)
    for key in ("rock", "wall", "quantities", "estimate", "water"):
        assert priced.result[key] == command[key], key
    text = client.get(f"/estimates/{priced.pk}/").content.decode()
    assert "693,762.60" in text
    assert "693,800.00" in text
    assert text.count("<svg") >= 2


def test_documents_are_those_of_the_frozen_inputs(client, priced):
    page = client.get(f"/estimates/{priced.pk}/")
    assert {name.rpartition(".")[2] for name in page.context["documents"]} == {"pdf", "svg", "xlsx"}
    for name in page.context["documents"]:
        assert client.get(f"/estimates/{priced.pk}/{name}").status_code == 200
    assert client.get(f"/estimates/{priced.pk}/other.pdf").status_code == 404


def test_asking_again_with_the_same_inputs_leads_to_the_estimate(client, priced):
    again = client.post(f"/sites/{priced.site.code}/estimates/")
    assert again.url == f"/estimates/{priced.pk}/"


def test_newer_rates_make_it_stale_and_never_alter_it(client, priced):
    district = priced.site.watershed.district
    dearer = RATES.read_bytes().replace(b"820", b"900")
    bring_rates(client, district, dearer)
    page = " ".join(client.get(f"/estimates/{priced.pk}/").content.decode().split())
    assert "Other rates hold today" in page
    assert "693,762.60" in page
    client.post(f"/sites/{priced.site.code}/estimates/")
    execute(str(Run.objects.filter(kind="estimate.price", state="queued").get().pk))
    new = Estimate.objects.exclude(pk=priced.pk).get()
    both = " ".join(
        client.get(f"/estimates/{new.pk}/against/{priced.pk}/").content.decode().split()
    )
    # Hand sum: 160.16 m3 of clay at 80.00 more each.
    assert "12,812.80" in both


def test_a_schedule_shows_its_differences_before_it_is_kept(client, place, engineer):
    client.force_login(engineer)
    bring_rates(client, place.watershed.district)
    changed = SimpleUploadedFile("examples.csv", RATES.read_bytes().replace(b"820", b"900"))
    looked = client.post("/rates/new/", {"district": place.watershed.district_id, "rates": changed})
    change = looked.context["read"].changes
    assert [(one.item, str(one.before), str(one.after)) for one in change] == [
        ("clay", "820.00", "900.00")
    ]
    assert RateSchedule.objects.count() == 1


def test_wrong_rates_are_refused_at_their_line(client, place, engineer):
    client.force_login(engineer)
    file = SimpleUploadedFile("r.csv", b"item,unit,rate\nclai,m3,100\n")
    page = client.post("/rates/new/", {"district": place.watershed.district_id, "rates": file})
    text = page.content.decode()
    assert page.status_code == 422
    assert "r.csv line 2" in text
    assert "clai" in text


def test_without_rates_no_estimate_is_started(client, place, engineer):
    client.force_login(engineer)
    accept_survey(site_id=place.pk, name=EXAMPLE.name, data=EXAMPLE.read_bytes(), by=engineer)
    page = client.post(f"/sites/{place.code}/estimates/")
    assert page.status_code == 422
    assert not Run.objects.filter(kind="estimate.price").exists()


@pytest.mark.parametrize("role", ["field", "admin"])
def test_who_may_not_see_money_sees_none(client, priced, role):
    client.force_login(factories.a_user(role, priced.site.watershed.district))
    for address in (
        f"/sites/{priced.site.code}/estimates/",
        f"/estimates/{priced.pk}/",
        f"/estimates/{priced.pk}/EX-B-report.pdf",
        f"/rates/{priced.schedule_id}/",
    ):
        assert client.get(address).status_code == 404, address
    assert "693" not in client.get(f"/sites/{priced.site.code}/").content.decode()


def test_another_district_finds_nothing(priced):
    client = Client()
    stranger = factories.a_user("engineer", factories.a_district("ZZ"))
    client.force_login(stranger)
    assert client.get(f"/estimates/{priced.pk}/").status_code == 404
    assert client.post(f"/sites/{priced.site.code}/estimates/").status_code == 404
    assert priced.schedule.code not in client.get("/rates/").content.decode()


def test_an_auditor_reads_and_starts_nothing(client, priced):
    client.force_login(factories.a_user("auditor", priced.site.watershed.district))
    assert client.get(f"/estimates/{priced.pk}/").status_code == 200
    assert client.post(f"/sites/{priced.site.code}/estimates/").status_code == 422


def test_runs_show_what_was_asked_and_can_be_cancelled(client, place, engineer):
    client.force_login(engineer)
    bring_rates(client, place.watershed.district)
    accept_survey(site_id=place.pk, name=EXAMPLE.name, data=EXAMPLE.read_bytes(), by=engineer)
    where = client.post(f"/sites/{place.code}/estimates/").url
    assert "Waiting for a worker" in client.get(where).content.decode()
    assert "Estimate" in client.get("/runs/").content.decode()
    client.post(f"{where}cancel/")
    assert "Cancelled" in client.get(where).content.decode()
