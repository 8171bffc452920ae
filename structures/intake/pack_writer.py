"""A survey pack written out again in each of its forms; reading it back gives the same pack."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import asdict
from typing import TYPE_CHECKING, Final

import openpyxl

from structures.intake.fields import (
    GROUND,
    GROUND_WATER,
    PACK_VERSION,
    PICKS,
    PROBES,
    REFRACTION,
    ROCK,
    ROCK_LINE,
    SCHLUMBERGER,
    SITE,
    SLOPE_STATION,
    SOUNDING,
    TOES,
    WORKS,
)

if TYPE_CHECKING:
    from collections.abc import Iterable

    from structures.intake.fields import Field
    from structures.intake.pack import Sounding, SurveyPack, WallSettings

FORMULA_SIGNS: Final = ("=", "+", "-", "@", "'")  # a spreadsheet would run or swallow these
READING_COLUMNS: Final = (
    "ab2_m",
    "mn2_m",
    "a_m",
    "apparent_resistivity_ohm_m",
    "sd_percent",
)

Sheet = tuple[tuple[str, ...], list[tuple[object, ...]]]


def pack_document(pack: SurveyPack) -> dict[str, object]:
    """Give the pack as the JSON document that reads back to it; what is not known is left out."""
    document: dict[str, object] = {
        "pack": PACK_VERSION,
        "site": _known(pack.site, SITE),
        "ground": [_known(point, GROUND) for point in pack.ground],
        "toes": _known(pack.toes, TOES),
        "rock": [_known(test, ROCK) for test in pack.rock],
        "probes": [_known(probe, PROBES) for probe in pack.probes],
        "soundings": [
            {
                "sounding": sounding.label,
                "offset_m": sounding.offset_m,
                "array": sounding.array,
                "readings": _readings(sounding),
            }
            for sounding in pack.soundings
        ],
        "refraction": [
            {
                "line": line.label,
                "offset_m": line.offset_m,
                "picks": [_known(pick, PICKS) for pick in line.picks],
            }
            for line in pack.refraction
        ],
        "rock_line": [_known(point, ROCK_LINE) for point in pack.rock_line or ()],
        "ground_water": _known(pack.ground_water, GROUND_WATER),
        "wall": _changed(pack.wall),
        "works": _known(pack.works, WORKS),
    }
    return {key: value for key, value in document.items() if value}


def write_json(pack: SurveyPack) -> bytes:
    """Write the pack as JSON, one row of a list on a line."""
    parts = [f'"{key}": {_json(value)}' for key, value in pack_document(pack).items()]
    return ("{\n" + ",\n".join(parts) + "\n}\n").encode()


def write_csv(pack: SurveyPack) -> dict[str, bytes]:
    """Write the pack as CSV files, file name to bytes (RFC 4180, UTF-8)."""
    return {f"{part}.csv": _csv(sheet) for part, sheet in _sheets(pack).items()}


def write_xlsx(pack: SurveyPack) -> bytes:
    """Write the pack as a workbook; text stays text, whatever sign it begins with."""
    book = openpyxl.Workbook()
    book.remove(book.active)
    for part, (headings, rows) in _sheets(pack).items():
        sheet = book.create_sheet(part)
        for line, row in enumerate((headings, *rows), start=1):
            for column, value in enumerate(row, start=1):
                cell = sheet.cell(line, column, value)
                if isinstance(value, str):
                    cell.data_type = "s"
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def _known(record: object, table: tuple[Field, ...]) -> dict[str, object]:
    values = {field.key: getattr(record, field.key) for field in table}
    return {key: value for key, value in values.items() if value is not None}


def _readings(sounding: Sounding) -> list[dict[str, float]]:
    rows = []
    for reading in sounding.readings:
        row = _known(reading, SCHLUMBERGER)
        if sounding.array == "wenner":
            del row["ab2_m"]
            row = {"a_m": 2.0 * row.pop("mn2_m"), **row}  # MN = a
        rows.append(row)
    return rows


def _changed(wall: WallSettings) -> dict[str, object]:
    values = {key: getattr(wall, key) for key in wall.changed if key != "side_slope"}
    if "side_slope" in wall.changed:
        stations = [asdict(station) for station in wall.side_slope]
        flat = len(stations) == 1 and stations[0]["offset_m"] == 0
        values["side_slope"] = stations[0]["slope"] if flat else stations
    return values


def _json(value: object) -> str:
    if not isinstance(value, list):
        return json.dumps(value, ensure_ascii=False)
    rows = ",\n  ".join(json.dumps(row, ensure_ascii=False) for row in value)
    return f"[\n  {rows}]"


def _sheets(pack: SurveyPack) -> dict[str, Sheet]:
    """Give the tables of the pack: one row an object, nested lists one row a reading."""
    document = pack_document(pack)
    document["site"] = {"pack": document.pop("pack"), **document["site"]}
    sheets: dict[str, Sheet] = {}
    for part, value in document.items():
        if part == "soundings":
            sheets[part] = _nested(value, SOUNDING, "readings", READING_COLUMNS)
        elif part == "refraction":
            sheets[part] = _nested(value, REFRACTION, "picks", tuple(f.key for f in PICKS))
        elif isinstance(value, list):
            sheets[part] = _flat(value)
        else:
            sheets |= _one_row(part, value)
    return sheets


def _one_row(part: str, value: dict[str, object]) -> dict[str, Sheet]:
    lists = {key: rows for key, rows in value.items() if isinstance(rows, list)}
    row = {key: cell for key, cell in value.items() if key not in lists}
    sheets = {part: _flat([row])} if row else {}
    for key, rows in lists.items():
        headings = tuple(field.key for field in SLOPE_STATION)
        sheets[key] = (headings, [tuple(station[name] for name in headings) for station in rows])
    return sheets


def _flat(rows: list[dict[str, object]]) -> Sheet:
    headings = tuple(dict.fromkeys(key for row in rows for key in row))
    return headings, [tuple(row.get(key) for key in headings) for row in rows]


def _nested(
    elements: list[dict], outer: tuple[Field, ...], inner: str, columns: Iterable[str]
) -> Sheet:
    keys = tuple(field.key for field in outer)
    headings = (*keys, *columns)
    rows = [
        tuple({**element, **reading}.get(key) for key in headings)
        for element in elements
        for reading in element[inner]
    ]
    return headings, rows


def _csv(sheet: Sheet) -> bytes:
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\r\n")
    headings, rows = sheet
    writer.writerow(headings)
    writer.writerows([[_cell(value) for value in row] for row in rows])
    return stream.getvalue().encode()


def _cell(value: object) -> object:
    """Give a cell as CSV writes it: yes/no in words, text guarded so that no spreadsheet runs it."""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, str) and value.startswith(FORMULA_SIGNS):
        return f"'{value}"
    return value
