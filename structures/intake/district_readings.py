"""A district's levels, marks and wells as the readings of one site: affected and control wells."""

from __future__ import annotations

import csv
import io
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    Rows = Sequence[Mapping[str, str]]

HEADINGS: Final = ("well", "role", "read_at", "state", "dry", "depth_m", "height_m")
UPSTREAM: Final = "upstream"
CONTROL: Final = "control"


def site_readings_csv(
    site: str, *, wells: Rows, marks: Rows, levels: Rows, also: Iterable[str] = ()
) -> str:
    """Write the readings of a site's wells as `assess_effect` reads them.

    Upstream wells of the site are affected; control wells are all those of its watershed. A reading
    takes the level of the mark that was valid that day, whatever mark it names; without one its
    height stays blank.

    Parameters
    ----------
    wells, marks, levels
        Rows of the district's tables.
    also
        Wells that are written as affected beside these, for a look at one of them.
    """
    watershed = next((row["watershed"] for row in wells if row["site_id"] == site), "")
    roles = {
        row["well_id"]: "control" if row["role"] == CONTROL else "affected"
        for row in wells
        if (row["role"] == CONTROL and row["watershed"] == watershed)
        or (row["role"] == UPSTREAM and row["site_id"] == site)
        or row["well_id"] in set(also)
    }
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(HEADINGS)
    for row in levels:
        if row["well_id"] in roles:
            writer.writerow(
                [
                    row["well_id"],
                    roles[row["well_id"]],
                    row["read_at"],
                    row["state"],
                    row["dry"],
                    row["depth_below_mark_m"],
                    _height(row, marks),
                ]
            )
    return text.getvalue()


def gauge_days_csv(gauge: str, rain: Rows) -> str:
    """Write a gauge's days as `assess_effect` reads them; blank days stay blank."""
    lines = [f"{row['day']},{row['rain_mm']}\n" for row in rain if row["gauge_id"] == gauge]
    return "day,rain_mm\n" + "".join(lines)


def _height(reading: Mapping[str, str], marks: Rows) -> str:
    day = reading["read_at"][:10]
    valid = (
        mark["level_m"]
        for mark in marks
        if mark["well_id"] == reading["well_id"]
        and mark["valid_from"] <= day
        and (not mark["valid_to"] or day <= mark["valid_to"])
    )
    return next(valid, "")
