"""Rows of a list of sites or of long profiles as values; every finding names its cell."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from structures.ground.angle import LATITUDE_MOST, LONGITUDE_MOST, read_angle, read_position
from structures.intake.archive import BOOK, entry_names, is_packed
from structures.intake.delimited import read_delimited
from structures.intake.fields import LEVEL_MOST_M, Field
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_value, tell_missing, tell_spare

if TYPE_CHECKING:
    from structures.intake.tables import Table

NAME_MOST: Final = 120  # characters of a name
BENCHMARK_MOST: Final = 300  # characters that describe a bench mark
DISTANCE_MOST_M: Final = 20_000.0  # of a bed point from its site; farther ones are slips
ALIASES: Final = {"site_id": "code", "latitude": "lat", "longitude": "lon"}


def _level(key: str, words: str) -> Field:
    return Field(key, words, unit="m", low=-LEVEL_MOST_M, high=LEVEL_MOST_M)


SITE_FIELDS: Final = (
    Field("code", "code of the site", "code", required=True),
    Field("watershed", "code of the watershed", "code", required=True),
    Field("name", "name of the place", "text"),
    Field("stream", "name of the stream", "text"),
    Field("accuracy_m", "accuracy of the position", unit="m", low=0, high=10_000, open_low=True),
    Field("benchmark", "where the bench mark is", "text"),
    _level("benchmark_level_m", "level of the bench mark"),
    _level("bed_level_m", "level of the bed"),
    Field("bed_slope", "fall of the bed", unit="m per m", low=0, high=0.5, open_low=True),
    Field("catchment_km2", "catchment above the site", unit="km2", low=0, high=1e6, open_low=True),
    _level("water_level_m", "level of the ground water"),
    Field("village_upstream", "village upstream", "text"),
    Field("village_downstream", "village downstream", "text"),
    Field("downstream_users", "who uses the water below", "text"),
)
LONGEST: Final = {
    "name": NAME_MOST,
    "stream": NAME_MOST,
    "village_upstream": NAME_MOST,
    "village_downstream": NAME_MOST,
    "benchmark": BENCHMARK_MOST,
}
POSITION: Final = ("lat", "lon", "position")
PROFILE_FIELDS: Final = (
    Field("code", "code of the site", "code", required=True),
    Field(
        "distance_upstream_m",
        "distance upstream of the site, minus downstream",
        unit="m",
        low=-DISTANCE_MOST_M,
        high=DISTANCE_MOST_M,
        required=True,
    ),
    Field(
        "bed_level_m",
        "level of the bed",
        unit="m",
        low=-LEVEL_MOST_M,
        high=LEVEL_MOST_M,
        required=True,
    ),
)

Values = dict[str, Any]


def read_rows(name: str, data: bytes, title: str, ledger: Ledger) -> list[Node]:
    """Read a list, CSV or XLSX, into rows under the names the tables use.

    `title` is that of the sheet to read where a workbook has several. None, with findings, where
    the file is no list.
    """
    if is_packed(data) and BOOK in entry_names(data):
        # The workbook library takes a fifth of a second to load; CSV does without it.
        from structures.intake.workbook import read_list_sheet  # noqa: PLC0415 -- see above

        table = read_list_sheet(name, data, title, ledger)
    else:
        table = read_delimited(name, name, data, ledger)
    return [] if table is None else [_renamed(table, place) for place in range(len(table.rows))]


def read_site(row: Node, ledger: Ledger) -> Values | None:
    """Read one site; `lon` and `lat` in degrees. None where a finding blocks it."""
    blocks = ledger.blocks
    values = _fields(row, SITE_FIELDS, ledger)
    for key, most in LONGEST.items():
        text = values.get(key)
        if text is not None and len(text) > most:
            what = f"The text has {len(text)} characters."
            ledger.add(row.named(key), what, f"Keep it to {most}.")
    values |= _position(row, ledger)
    _tell_unknown(row, (*(field.key for field in SITE_FIELDS), *POSITION), ledger)
    return values if ledger.blocks == blocks else None


def read_profile_point(row: Node, ledger: Ledger) -> Values | None:
    """Read one point of a long profile. None where a finding blocks it."""
    blocks = ledger.blocks
    values = _fields(row, PROFILE_FIELDS, ledger)
    return values if ledger.blocks == blocks else None


def row_of(values: Values, where: str) -> Node:
    """Give values typed on a page or sent by a program as a row that can be read."""
    members = {key: Node(value, where, key, tabular=True) for key, value in values.items()}
    return Node(members, where, tabular=True)


def _renamed(table: Table, place: int) -> Node:
    node = table.node(table.rows[place], "")
    members = {
        ALIASES.get(key, key): Node(one.value, one.where, key, tabular=True)
        for key, one in node.members().items()
    }
    return Node(members, node.where, tabular=True)


def _fields(row: Node, fields: tuple[Field, ...], ledger: Ledger) -> Values:
    values: Values = {}
    for field in fields:
        cell = row.named(field.key)
        if not cell.blank:
            values[field.key] = read_value(cell, field, ledger)
        elif field.required:
            tell_missing(cell, field, ledger)
    return values


def _position(row: Node, ledger: Ledger) -> Values:
    whole, lat, lon = (row.named(key) for key in ("position", "lat", "lon"))
    if not whole.blank:
        found = read_position(str(whole.value))
        if found is None:
            _tell_no_angle(whole, "position", ledger)
            return {}
        return {"lon": found[0], "lat": found[1]}
    if lat.blank or lon.blank:
        code = shown(row.named("code").value)[1:-1]
        ledger.add(
            lat if lat.blank else lon,
            f"No position for {code}.",
            "Stand on the line and take it, or type it from the map sheet and say so.",
            rule="PL-01",
        )
        return {}
    return _angles(lat, lon, ledger)


def _angles(lat: Node, lon: Node, ledger: Ledger) -> Values:
    values: Values = {}
    for key, axis, cell, most in (
        ("lat", "latitude", lat, LATITUDE_MOST),
        ("lon", "longitude", lon, LONGITUDE_MOST),
    ):
        degrees = read_angle(str(cell.value), axis)
        if degrees is None:
            _tell_no_angle(cell, axis, ledger)
        elif abs(degrees) > most:
            what = f"{degrees:g} is no {axis}: {-most:g} to {most:g} degrees."
            ledger.add(cell, what, "Exchanged with the other, or not in degrees?", rule="PL-02")
        else:
            values[key] = degrees
    return values


def _tell_no_angle(cell: Node, axis: str, ledger: Ledger) -> None:
    remedy = "Write degrees like 15.7237, or degrees, minutes and seconds with N, S, E or W."
    ledger.add(cell, f"{shown(cell.value)} is no {axis}.", remedy, rule="PL-01")


def _tell_unknown(row: Node, known: tuple[str, ...], ledger: Ledger) -> None:
    """Tell once a file of columns that the table of sites does not have; they stay in the file."""
    for key, cell in row.members().items():
        if key not in known and not cell.blank:
            what = "A site has no such field; it stays in the file as it came."
            tell_spare(key, cell, known, ledger, what=what)
