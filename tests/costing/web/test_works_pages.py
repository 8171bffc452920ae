"""Measurement book, contract, bills and option papers in the browser, without a script."""

from __future__ import annotations

from decimal import Decimal

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from costing.models import Bill, Contract
from structures.models import MeasurementEntry
from tests.costing.works_office import a_bill, a_works_office, clay_unseen, pipes_and_markers
from tests.trench import DAY, a_trench, dig

pytestmark = pytest.mark.django_db


@pytest.fixture
def office():
    return a_works_office()


def test_what_was_typed_stays_and_the_error_stands_at_its_field(office, client):
    dig(office.trench)
    client.force_login(office.engineer)
    strip = office.structure.strips.get(number=1)
    said = {
        "strip": strip.pk,
        "item": "clay",
        "quantity": "4,865",
        "measured_on": DAY,
        "working": "x",
    }
    answer = client.post("/sites/OD-01/measurements/new/", said)
    assert answer.status_code == 422
    assert "4,865" in answer.content.decode()
    answer = client.post("/sites/OD-01/measurements/new/", said | {"quantity": "4,86"})
    assert answer.status_code == 302
    assert MeasurementEntry.objects.get().quantity == Decimal("4.86")


def test_the_offer_fills_the_form(office, client):
    dig(office.trench)
    client.force_login(office.engineer)
    book = client.get("/sites/OD-01/measurements/")
    clay = next(one for one in book.context["offered"] if one.item == "clay")
    form = client.get(f"/sites/OD-01/measurements/new/?{clay.asked}").content.decode()
    assert f'value="{clay.quantity:f}"' in form
    assert clay.working in form


def test_a_contract_is_entered_with_nothing_that_it_does_not_state(client):
    trench = a_trench(without=("soundings", "refraction"))
    from tests.factories import a_user  # noqa: PLC0415 -- of this test only

    officer = a_user("district", trench.structure.site.watershed.district)
    client.force_login(officer)
    page = client.get("/sites/OD-01/contract/new/")
    said = {}
    for formset in ("rates", "deductions", "parts"):
        for form in (page.context[formset].management_form, *page.context[formset]):
            said |= {box.html_name: box.value() if box.value() is not None else "" for box in form}
    clay = next(n for n, form in enumerate(page.context["rates"]) if form["item"].value() == "clay")
    said |= {
        f"rates-{clay}-rate": "763.00",
        "number": "C-1",
        "contractor": "CON-1",
        "currency": "INR",
        "signed_on": "2026-03-01",
        "starts_on": "2026-03-05",
        "retention_percent": "5",
    }
    answer = client.post("/sites/OD-01/contract/new/", said)
    assert answer.status_code == 302, answer.content.decode()
    contract = Contract.objects.get()
    assert [(one.item, one.rate) for one in contract.rates.all()] == [("clay", Decimal("763.00"))]
    assert (contract.retention_percent, contract.advance, contract.price_index) == (5, None, None)
    assert contract.deductions == []
    assert "not stated" in client.get("/sites/OD-01/contract/").content.decode()


def test_a_contractors_file_goes_through_the_same_act(office, client):
    """Oracle: BL-05; 7 markers were measured, 7.50 are billed."""
    pipes_and_markers(office)
    client.force_login(office.engineer)
    head = "bill,line,entry,quantity,rate,amount\n"

    def send(row):
        file = SimpleUploadedFile("b.csv", (head + row).encode())
        said = {"number": "", "kind": "running", "billed_on": "2026-04-10", "file": file}
        return client.post("/sites/OD-01/bills/new/", said)

    refused = send("RB-9,1,OD-01-wall-marker,7.50,650.00,4875.00\n")
    assert refused.status_code == 422
    assert "Billed 7.50, measured 7.00 each" in refused.content.decode()
    kept = send("RB-9,1,OD-01-wall-marker,7.00,650.00,4550.00\n")
    assert kept.status_code == 302
    assert Bill.objects.get().number == "RB-9"


def test_the_bill_page_decides_line_by_line(office, client):
    """Oracle: 12350.00 payable, 3708.18 held; the reason lifts the hold."""
    clay_unseen(office)
    pipes_and_markers(office)
    bill = a_bill(office)
    client.force_login(office.officer)
    page = client.get(f"/bills/{bill.pk}/")
    assert page.context["payable"] == Decimal("12350.00")
    assert next(one["row"].entry.item for one in page.context["lines"]) == "clay"
    held = page.context["held"][0]["row"].order
    refused = client.post(f"/bills/{bill.pk}/acts/decide/", {f"line-{held}-state": "paid"})
    assert refused.status_code == 422
    assert "write the reason" in refused.content.decode()
    said = {f"line-{held}-state": "paid", f"line-{held}-why": "Seen from the edge by both."}
    assert client.post(f"/bills/{bill.pk}/acts/decide/", said).status_code == 302
    bill.refresh_from_db()
    assert bill.payable == Decimal("16058.18")
    assert "16,058.18" in client.get(f"/bills/{bill.pk}/").content.decode()
