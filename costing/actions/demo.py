"""The invented district, through the same doors as a user's files: whole or not at all."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import dataclass
from datetime import date
from typing import TYPE_CHECKING, Final

from django.db import transaction

from costing.actions.history import take_over_all
from costing.actions.schedule import import_schedule
from structures.actions.people import invite, set_password, set_posting
from structures.actions.settings import enter_district
from structures.actions.sites import bulk_enter_sites
from structures.actions.surveys import accept_survey
from structures.actions.watersheds import bulk_enter_profiles, bulk_enter_watersheds
from structures.errors import Refused
from structures.intake.district import read_district
from structures.intake.pack_writer import write_json
from structures.models import User
from structures.queries.districts import visible_watersheds
from structures.queries.sites import visible_sites

if TYPE_CHECKING:
    from pathlib import Path

    from structures.models import District

KEEPER: Final = "admin-1"  # keeps the people and settings of every district of the demo
SECOND: Final = {"code": "AV", "name": "Arvenda"}
SECOND_ROLES: Final = ("field", "engineer", "district", "programme", "auditor")
ROLES: Final = ("field", "engineer", "district", "programme", "auditor", "admin")
# Of the tables of sites.csv these stand in the survey packs, not in the list of sites.
IN_THE_PACK: Final = ("left_toe_m", "right_toe_m")


@dataclass(frozen=True, slots=True)
class Loaded:
    """What was loaded: sites, surveys, accounts."""

    district: District
    sites: int
    surveys: int
    logins: tuple[str, ...]


@transaction.atomic
def load_demo(*, folder: Path, password: str) -> Loaded:
    """Load the demo into an empty database; killed in the middle, nothing of it is there.

    Raises
    ------
    Refused
        If somebody has an account already, or the password is too weak.
    """
    if User.objects.exists():
        raise Refused(
            "There are accounts here already. Nothing was added.",
            remedy="Load the demo into an empty database.",
        )
    settings = json.loads((folder / "settings.json").read_text(encoding="utf-8"))
    as_of = date.fromisoformat(settings["as_of"])
    invite(login=KEEPER, role="admin")
    keeper = _account(KEEPER)
    common = {"zone": "Asia/Kolkata", "currency": settings["currency"], "invented": True}
    name = settings["district"].partition(" (")[0]
    district = enter_district(by=keeper, code="QU", name=name, as_of=as_of, **common)
    second = enter_district(by=keeper, **SECOND, as_of=as_of, **common)
    people = list(_rows(folder / "people.csv"))
    for row in people:
        if row["login"] != KEEPER:
            _post(row["login"], row["role"], district, row["active_from"], row["active_to"], keeper)
    for role in SECOND_ROLES:
        _post(f"{SECOND['code'].lower()}-{role}", role, second, settings["as_of"], "", keeper)

    engineer = _account("engineer-4")
    hand = {"district_id": district.pk, "by": engineer}
    for shapes in ("watersheds.geojson", "streams.geojson"):
        bulk_enter_watersheds(**hand, **_file(folder / shapes))
    bulk_enter_sites(**hand, name="sites.csv", data=_without(folder / "sites.csv", IN_THE_PACK))
    bulk_enter_profiles(
        **hand, name="long_profiles.csv", data=_without(folder / "long_profiles.csv", ("line_id",))
    )
    _narrow(people, district, keeper)
    import_schedule(**hand, **_file(folder / "rates.csv"))
    surveys = _surveys(folder, engineer)
    tables = {path.name: path.read_bytes() for path in folder.glob("*.csv")}
    take_over_all(district_id=district.pk, files=tables, by=keeper)
    logins = (*(row["login"] for row in people), *(f"av-{role}" for role in SECOND_ROLES))
    # One word opens all of them, so it is hashed once: a hash is made to be slow.
    set_password(user_id=keeper.pk, password=password)
    keeper.refresh_from_db()
    User.objects.filter(username__in=logins).update(password=keeper.password, must_change=False)
    return Loaded(district, visible_sites(engineer).count(), surveys, logins)


def _account(login: str) -> User:
    return User.objects.get(username=login)


def _post(login: str, role: str, district: District, first: str, last: str, by: User) -> None:
    """Make an account with one posting of the days in the list."""
    invite(login=login, role=role, district=district, by=by)
    user = _account(login)
    posting = user.postings.get()
    days = (date.fromisoformat(first), date.fromisoformat(last) if last else None)
    set_posting(
        user_id=user.pk, role=role, district=district, days=days, by=by, posting_id=posting.pk
    )


def _narrow(people: list[dict[str, str]], district: District, keeper: User) -> None:
    """Give field staff and engineers their watersheds, now that these are there."""
    engineer = _account("engineer-4")
    known = {one.code: one for one in visible_watersheds(engineer)}
    for row in people:
        named = [known[code] for code in row["watersheds"].split(";") if code]
        if row["login"] == KEEPER or len(named) == len(known):
            continue
        user = _account(row["login"])
        posting = user.postings.get()
        set_posting(
            user_id=user.pk,
            role=row["role"],
            district=district,
            days=(posting.valid_from, posting.valid_to),
            by=keeper,
            watersheds=named,
            posting_id=posting.pk,
        )


def _surveys(folder: Path, engineer: User) -> int:
    packs = read_district(folder)
    sites = {site.code: site for site in visible_sites(engineer)}
    for code, pack in packs.items():
        accept_survey(
            site_id=sites[code].pk, name=f"{code}.json", data=write_json(pack), by=engineer
        )
    return len(packs)


def _rows(path: Path) -> csv.DictReader:
    return csv.DictReader(io.StringIO(path.read_text(encoding="utf-8")))


def _file(path: Path) -> dict[str, str | bytes]:
    return {"name": path.name, "data": path.read_bytes()}


def _without(path: Path, columns: tuple[str, ...]) -> bytes:
    """Give a table without some of its columns."""
    rows = list(_rows(path))
    kept = [name for name in rows[0] if name not in columns]
    text = io.StringIO()
    writer = csv.DictWriter(text, kept, extrasaction="ignore", lineterminator="\n")
    writer.writeheader()
    writer.writerows(rows)
    return text.getvalue().encode()
