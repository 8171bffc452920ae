"""The smallest records that the database and the rules accept; each test says what it changes."""

from __future__ import annotations

import io
import json
from datetime import date
from itertools import count
from pathlib import Path

import openpyxl

from costing.actions.schedule import import_schedule
from structures.actions.surveys import accept_survey
from structures.ground.place import read_outline
from structures.models import District, Posting, Role, Site, Structure, User, Watershed

FIXTURES = Path("fixtures")
SQUARE = [[77.4, 15.7], [77.5, 15.7], [77.5, 15.8], [77.4, 15.8], [77.4, 15.7]]
PASSWORD = "puddle-clay-and-film"
_numbers = count(1)


def a_district(code="QU", **changes):
    return District.objects.create(
        code=code, **{"name": "Quenharra", "zone": "Asia/Kolkata", "currency": "INR", **changes}
    )


def a_watershed(district=None, code="OD", **changes):
    outline = read_outline({"type": "Polygon", "coordinates": [SQUARE]}, code)
    values = {"name": "Odremma", "outline": outline.geometry, "area_km2": outline.area_km2}
    return Watershed.objects.create(
        district=district or a_district(), code=code, **{**values, **changes}
    )


def a_user(role=None, district=None, *, watersheds=(), login=None, **days):
    """An account, with a posting where a role is given."""
    user = User(username=login or f"{role or 'nobody'}-{next(_numbers)}")
    user.set_unusable_password()
    user.save()
    if role is not None:
        a_posting(user, role, district, watersheds=watersheds, **days)
    return user


def a_posting(user, role, district, *, watersheds=(), **days):
    posting = Posting.objects.create(
        user=user, role=role, district=district, **{"valid_from": date(2022, 1, 1), **days}
    )
    posting.watersheds.set(watersheds)
    return posting


def an_engineer(district, **more):
    return a_user(Role.ENGINEER, district, **more)


def a_site(watershed=None, code="EX-A", **changes):
    values = {
        "lat": 15.75,
        "lon": 77.45,
        "name": "the ford",
        "downstream_users": "none found within 2 km",
    }
    owner = watershed or a_watershed()
    by = changes.pop("changed_by", None) or a_user()
    site = Site.objects.create(watershed=owner, code=code, changed_by=by, **{**values, **changes})
    Structure.objects.create(site=site, since=date(2026, 1, 1))
    return site


def pack_bytes(code="EX-A", letter="a", **changes):
    """A worked example of the handbook as the survey of a site; a part set to None is left out."""
    document = json.loads((FIXTURES / "packs" / f"example-{letter}.json").read_text())
    document["site"]["code"] = code
    parts = {**document, **changes}
    return json.dumps({key: part for key, part in parts.items() if part is not None}).encode()


def book_bytes(**sheets):
    """A workbook with a list of rows for each sheet."""
    book = openpyxl.Workbook()
    book.remove(book.active)
    for title, rows in sheets.items():
        sheet = book.create_sheet(title)
        for row in rows:
            sheet.append(row)
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def a_survey(site, by, **changes):
    data = pack_bytes(site.code, **changes)
    return accept_survey(site_id=site.pk, name="survey.json", data=data, by=by)


def rates_bytes(**changes):
    """The rates of the handbook's examples, with other prices where they are named."""
    lines = (FIXTURES / "rates" / "examples.csv").read_text().splitlines()
    for item, rate in changes.items():
        lines = [
            ",".join([*line.split(",")[:3], rate, *line.split(",")[4:]])
            if line.startswith(f"{item},")
            else line
            for line in lines
        ]
    return "\n".join(lines).encode()


def a_schedule(district, by, *, name="RS-1.csv", days="", **changes):
    """Rates; `days` are the columns valid_from and valid_to, like `2026-01-01,2026-12-31`."""
    data = rates_bytes(**changes)
    if days:
        heading, *rows = data.decode().splitlines()
        data = "\n".join(
            [f"{heading},valid_from,valid_to", *(f"{r},{days}" for r in rows)]
        ).encode()
    return import_schedule(district_id=district.pk, name=name, data=data, by=by)
