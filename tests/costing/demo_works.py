"""The invented district's records of works, read from its tables into the records of `billing`."""

from __future__ import annotations

import csv
from datetime import date, datetime
from decimal import ROUND_HALF_UP, Decimal
from fractions import Fraction
from functools import cache
from math import ceil
from pathlib import Path

from costing.price.billing import Billed, BillLineAsked, Measured
from costing.price.contract import ContractTerms
from costing.price.payable import BillAsked
from costing.price.rates import read_rates
from costing.price.sanctioned import Sums
from structures.ground.found import FoundLevel
from structures.ground.found_lines import DrawnRange
from structures.intake.district import read_district
from structures.life.measuring import HoldSeen

DEMO = Path(__file__).parents[2] / "fixtures" / "demo"


@cache
def table(name):
    with (DEMO / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return tuple(csv.DictReader(file))


def rows(name, site):
    return [row for row in table(name) if site in (row.get("structure_id"), row.get("site_id"))]


@cache
def demo_rates():
    return read_rates("rates.csv", (DEMO / "rates.csv").read_bytes())


def contract(**terms):
    """The district's rates as a contract; nothing else is stated unless the test says so."""
    return ContractTerms("INR", demo_rates().rates, **terms)


@cache
def holds(site, strip):
    return tuple(
        HoldSeen(
            row["hold"],
            datetime.fromisoformat(row["seen_at"]).date()
            if row["seen_at"] and row["result"].startswith("go")
            else None,
        )
        for row in rows("hold_points", site)
        if row["strip_no"] == strip
    )


def book(site, billed_before=()):
    """The measurement book by entry; `billed_before` names bills that were decided."""
    billed = {
        row["entry_id"]: Billed(row["bill_id"], int(row["line_no"]))
        for row in rows("bills", site)
        if row["bill_id"] in billed_before
    }
    return {
        row["entry_id"]: Measured(
            entry_id=row["entry_id"],
            strip=int(row["strip_no"]) or None,
            item=row["item"],
            from_m=float(row["from_m"]) if row["from_m"] else None,
            to_m=float(row["to_m"]) if row["to_m"] else None,
            quantity=Decimal(row["quantity"]),
            unit=row["unit"],
            measured_on=date.fromisoformat(row["measured_on"]),
            covered_on=date.fromisoformat(row["covered_on"]) if row["covered_on"] else None,
            measured_by=row["measured_by"],
            checked_by=row["checked_by"] or None,
            relies_on=tuple(filter(None, row["relies_on"].split(";"))),
            holds=holds(site, row["strip_no"]),
            billed_in=billed.get(row["entry_id"]),
        )
        for row in rows("measurements", site)
    }


def bill(site, bill_id, **changes):
    """One bill as it stands in the table, its total that of its lines."""
    taken = [row for row in rows("bills", site) if row["bill_id"] == bill_id]
    lines = tuple(
        BillLineAsked(
            int(row["line_no"]),
            row["entry_id"],
            *(Decimal(row[key]) for key in ("quantity", "rate", "amount")),
        )
        for row in taken
    )
    total = sum((Decimal(row["amount"]) for row in taken), start=Decimal(0))
    said = {"kind": taken[0]["kind"], "currency": taken[0]["currency"], "total": total}
    return BillAsked(bill_id, **said | {"lines": lines} | changes)


@cache
def survey(site):
    return read_district(DEMO)[site]


def found(site):
    """Rock as the hold points H2 have it: at the start, the middle and the end of a strip."""
    strips = {row["strip_no"]: row for row in rows("strips", site)}
    levels = []
    for row in rows("hold_points", site):
        if row["hold"] == "H2":
            first, last = (float(strips[row["strip_no"]][key]) for key in ("from_m", "to_m"))
            offsets = (first, round((first + last) / 2, 6), last)
            seen = map(float, row["reading_m"].split(";"))
            levels += [
                FoundLevel(offset, level, int(row["strip_no"]))
                for offset, level in zip(offsets, seen, strict=True)
            ]
    return tuple(levels)


def ranges(site):
    columns = ("offset_m", "rock_low_m", "rock_likely_m", "rock_high_m")
    return tuple(
        DrawnRange(*(float(row[key]) for key in columns)) for row in rows("drawings", site)
    )


def sums(site):
    amounts = {row["kind"]: Decimal(row["amount"]) for row in rows("sanctions", site)}
    return Sums(amounts["technical"], amounts["administrative"])


def cents(value):
    return Decimal(value.numerator) / Decimal(value.denominator)


def hundredths(value):
    six = cents(value).quantize(Decimal("0.000001"), ROUND_HALF_UP)
    return six.quantize(Decimal("0.01"), ROUND_HALF_UP)


def by_hand(wall, settings, hours):
    """Total of an exact wall by the conventions of the demo: in fractions, priced line by line."""
    t, key = Fraction(str(settings.thickness_m)), Fraction(str(settings.key_m))
    clay = t * wall.face_area_m2
    dug = sum(wall.lifts_m3)
    folds = Fraction("0.6") * wall.length_m
    film = 2 * (wall.face_area_m2 + folds) * Fraction(6) / Fraction("5.7")
    quantities = [
        *(("excavation", lift) for lift in wall.lifts_m3),
        ("rock_key", t * key * wall.length_m),
        ("dewatering", Fraction(hours)),
        ("clay", clay),
        ("film", film),
        ("centering", 2 * wall.face_above_rock_m2),
        ("backfill", dug - t * wall.face_above_rock_m2),
        ("surplus", clay * Fraction("1.25")),
        ("marker", Fraction(1 + ceil((wall.right_m - wall.left_m) / 10))),
        ("observation_pipe", Fraction(2)),
    ]
    price = {one.item: one.rate for one in demo_rates().rates}
    cent = Decimal("0.01")
    subtotal = sum(
        (hundredths(amount) * price[item]).quantize(cent, ROUND_HALF_UP)
        for item, amount in quantities
    )
    added = [(subtotal * p / 100).quantize(cent, ROUND_HALF_UP) for p in (5, 2)]
    return subtotal + sum(added)
