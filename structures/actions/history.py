"""What happened before a district was kept here: taken over as it stands, nothing blocked by it.

Today's rules speak beside a record, in its findings. A new record meets them in full.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final, NamedTuple
from zoneinfo import ZoneInfo

from django.db import transaction

from structures.access import Act, insist
from structures.actions.history_papers import (
    take_complaints,
    take_moves,
    take_papers,
    take_verdicts,
)
from structures.actions.history_wells import (
    take_rain,
    take_readings,
    take_season_starts,
    take_wells,
)
from structures.actions.history_works import take_holds, take_looks, take_measurements, take_strips
from structures.actions.register import append
from structures.intake.builder import refusal
from structures.intake.history import History, read_history
from structures.intake.history_tables import TABLES
from structures.intake.tree import Ledger
from structures.life.chain import content_digest
from structures.life.stages import STAGES
from structures.life.verdict import VERDICTS
from structures.models import District, Entry, Stream, Structure, User, Watershed

if TYPE_CHECKING:
    from collections.abc import Collection, Mapping, Sequence

    from structures.intake.history import HistoryRow

TAKEN_OVER: Final = "taken over"
THING: Final = "history"


class Taking(NamedTuple):
    """A district that is taken over, by whom; accounts and structures by the names of the tables."""

    district: District
    by: User
    people: dict[str, User]
    structures: dict[str, Structure]
    zone: ZoneInfo


@transaction.atomic
def take_over(*, district_id: int, files: Mapping[str, bytes], by: User) -> History:
    """Take over the history of a district from its tables, all of it or nothing.

    Whoever takes it over ends with `seal_history`, when the money is in as well.

    Returns
    -------
    dict
        The rows by table, as they were read.

    Raises
    ------
    Refused
        If a cell cannot be read or a row names what is nowhere, with file and line of each.
    """
    taking = begin_taking(district_id, by)
    ledger = Ledger()
    history = read_history(files, TABLES, known_here(taking), taking.zone, ledger)
    if ledger.blocks:
        raise refusal(ledger, THING)
    _take_stages(taking, history["structures"])
    take_moves(taking, history["moves"], history["structures"])
    take_papers(taking, history)
    strips = take_strips(taking, history)
    take_holds(taking, history, strips)
    take_looks(taking, history["trench_looks"], strips)
    take_measurements(taking, history["measurements"], strips)
    wells = take_wells(taking, history)
    take_readings(taking, history["levels"], wells)
    take_rain(taking, history)
    take_season_starts(taking, history["season_starts"])
    take_complaints(taking, history["complaints"], wells)
    take_verdicts(taking, history["verdicts"])
    return history


def begin_taking(district_id: int, by: User) -> Taking:
    """Lock a district and gather what its tables may name.

    Raises
    ------
    Refused
        If the user does not keep the district.
    """
    district = District.objects.select_for_update().get(pk=district_id)
    insist(by, Act.MANAGE_DISTRICT, district)
    found = Structure.objects.select_for_update(of=("self",)).filter(
        site__watershed__district=district
    )
    structures = {one.site.code: one for one in found.select_related("site__watershed__district")}
    people = User.objects.filter(postings__district=district).distinct()
    by_login = {one.username: one for one in people}
    return Taking(district, by, by_login, structures, ZoneInfo(district.zone))


def known_here(taking: Taking) -> dict[str, Collection[Any]]:
    """Give what the tables may name and do not hold themselves."""
    district = taking.district
    return {
        "people": taking.people,
        "sites": taking.structures,
        "stages": STAGES,
        "verdicts": VERDICTS,
        "watersheds": set(
            Watershed.objects.filter(district=district).values_list("code", flat=True)
        ),
        "streams": set(
            Stream.objects.filter(watershed__district=district).values_list("name", flat=True)
        ),
    }


@transaction.atomic
def seal_history(*, district_id: int, history: History, by: User) -> list[Entry]:
    """Enter into the register, once for each structure, what was taken over: rows and digest.

    The digest is that of the rows as they stood in the tables, so that the tables prove it. Sums of
    money stand in it by their digest alone.
    """
    taking = begin_taking(district_id, by)
    own: dict[str, dict[str, list[dict[str, str]]]] = {code: {} for code in taking.structures}
    wells = {row["well_id"]: row["site_id"] for row in history["wells"]}
    for table, rows in history.items():
        for row in rows:
            code = _code_of(row, wells)
            if code in own:
                own[code].setdefault(table, []).append(dict(row.told))
    return [
        append(
            district=taking.district,
            by=by,
            act=TAKEN_OVER,
            subject=f"what was kept of {code} before",
            structure=taking.structures[code],
            content={
                "rows": {table: len(rows) for table, rows in tables.items()},
                "digest": content_digest(tables),
            },
        )
        for code, tables in sorted(own.items())
        if tables
    ]


def _code_of(row: HistoryRow, wells: Mapping[str, str | None]) -> str | None:
    """Give the site that a row belongs to, by the first of its columns that says it."""
    values = row.values
    for key in ("structure_id", "site_id"):
        if key in values:
            return values[key]
    return wells.get(values.get("well_id"))


def _take_stages(taking: Taking, rows: Sequence[HistoryRow]) -> None:
    for row in rows:
        structure = taking.structures[row["structure_id"]]
        structure.stage, structure.since = row["state"], row["state_since"]
    Structure.objects.bulk_update(taking.structures.values(), ["stage", "since"])
