"""Contract, measurement book, bill, forecast and option paper of a district, for tests that walk every page."""

from __future__ import annotations

from datetime import date
from decimal import Decimal
from typing import Any
from uuid import uuid4

from django.utils import timezone

from costing.models import Bill, BillLine, Contract, ContractRate, Forecast, OptionPaper
from structures.models import MeasurementEntry, Role, Run, Site, User

DAY = date(2026, 4, 9)
LEAK = {"least_m3_per_day": 1.5, "most_m3_per_day": 2.5, "words": "Through sound clay, at most."}


def seed_money(word: str, price: str, people: dict[str, User], site: Site) -> None:
    """Seed one of each; every code holds the word, and film is agreed at the price."""
    structure, engineer = site.structure, people[Role.ENGINEER]
    contract = Contract.objects.create(
        structure=structure,
        number=f"C-{word}",
        contractor=f"CON-{word}",
        signed_on=DAY,
        starts_on=DAY,
        currency="INR",
        deductions=[{"what": f"cess of {word}", "percent": "1"}],
        by=people[Role.DISTRICT],
    )
    ContractRate.objects.create(contract=contract, item="film", unit="m2", rate=Decimal(price))
    entry = MeasurementEntry.objects.create(
        structure=structure,
        strip=structure.strips.get(number=1),
        code=f"{word}-M01-film",
        item="film",
        unit="m2",
        quantity=Decimal("2.00"),
        working=f"by tape at {word}",
        relies_on=["H6", "H8"],
        measured_on=DAY,
        measured_by=engineer,
        checked_by=people[Role.PROGRAMME],
        checked_at=timezone.now(),
    )
    amount = 2 * Decimal(price)
    bill = Bill.objects.create(
        structure=structure,
        contract=contract,
        number=f"RB-{word}",
        kind="running",
        state=Bill.State.HANDED_IN,
        billed_on=DAY,
        currency="INR",
        claimed=amount,
        made_by=engineer,
    )
    BillLine.objects.create(
        bill=bill, order=1, entry=entry, quantity=entry.quantity, rate=Decimal(price), amount=amount
    )
    _paper(word, people, site, Decimal(price))


def money_value(site: Site) -> dict[tuple[str, str], Any]:
    """What stands for the parts of addresses of bills, contracts, measurements and papers."""
    structure = site.structure
    bill = structure.bills.get()
    return {
        ("measurements", "entry_id"): structure.measurements.get().pk,
        ("contracts", "pk"): structure.contracts.get().pk,
        ("bills", "pk"): bill.pk,
        ("lines", "line"): bill.lines.get().pk,
        ("options", "pk"): structure.option_papers.get().pk,
    }


def _paper(word: str, people: dict[str, User], site: Site, price: Decimal) -> None:
    structure, engineer = site.structure, people[Role.ENGINEER]
    run = Run.objects.create(
        kind="works.forecast",
        version="seed",
        params={"structure": structure.pk, "cause": str(uuid4())},
        digest=uuid4().hex,
        subject=f"site {site.code}",
        asked_by=engineer,
        state="done",
        result={},
    )
    forecast = Forecast.objects.create(
        structure=structure,
        run=run,
        input_digest=run.digest,
        method="seed",
        currency="INR",
        total=price,
        technical_excess_percent=7.5,
        asks_for_paper=True,
        result={
            "technical": f"{price:f}",
            "administrative": None,
            "technical_percent": "5",
            "administrative_percent": "10",
            "findings": [],
            "reasons": [f"No range was recorded at {word}."],
            "surprises": [
                {"strip": 1, "offset_m": 9.0, "found_m": 90.1, "low_m": 91.0, "high_m": 92.0}
            ],
        },
    )
    ways = [
        {
            "way": way,
            "words": f"A way at {word}.",
            "total": f"{price:f}",
            "to_complete": None,
            "technical_excess_percent": 7.5,
            "administrative_excess_percent": None,
            "days": 12,
            "depth_m": 5.2,
            "leak": LEAK,
            "findings": [],
            "reasons": [],
            "may_be_chosen": True,
        }
        for way in ("go on", "step", "shift", "close")
    ]
    paper = OptionPaper.objects.create(
        structure=structure,
        version=1,
        forecast=forecast,
        cause=f"Rock at 90.10 m at {word}.",
        ways={"asked": {}, "on": "2026-04-10", "days_left": 40, "why_no_clock": "", "ways": ways},
        digest="4" * 64,
        opened_by=engineer,
    )
    paper.strips.set(structure.strips.filter(number=1))
