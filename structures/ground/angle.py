"""Longitude and latitude as people write them: plain degrees, or degrees, minutes and seconds."""

from __future__ import annotations

import re
from typing import Final

LATITUDE_MOST: Final = 90.0  # degrees, by definition
LONGITUDE_MOST: Final = 180.0  # degrees, by definition
SEXAGESIMAL: Final = 60.0  # minutes of a degree, seconds of a minute
PLAIN: Final = re.compile(r"[+-]?\d{1,3}(\.\d+)?", re.ASCII)
# Degrees, then minutes, then seconds if there are any, with the marks people use or blanks.
PARTED: Final = re.compile(
    r"(\d{1,3})\s*[°º:d\s]\s*(\d{1,2}(?:\.\d+)?)\s*"
    r"(?:['\u2032\u2019:m\s]\s*(?:(\d{1,2}(?:\.\d+)?)\s*[\"\u2033\u201ds]?)?)?",
    re.ASCII,
)
HALVES: Final = {"latitude": ("N", "S"), "longitude": ("E", "W")}


def read_angle(text: str, axis: str) -> float | None:
    """Read one angle in degrees: plain, or in degrees, minutes and seconds with its half.

    Source: definition of the degree's parts.

    Parameters
    ----------
    text
        `15.7237`, `15°43'25.5" N`, `N 15 43 25.5`.
    axis
        `latitude` or `longitude`: says which letters of a half are meant.

    Returns
    -------
    float or None
        Degrees, minus in the south and west; None where the text is no such angle.
    """
    bare, sign = _without_half(text.strip(), axis)
    if bare is None:
        return None
    if PLAIN.fullmatch(bare):
        degrees = float(bare)
        return sign * degrees if degrees >= 0 or sign > 0 else None
    parts = PARTED.fullmatch(bare)
    if parts is None:
        return None
    whole, minutes, seconds = (float(part or 0.0) for part in parts.groups())
    if minutes >= SEXAGESIMAL or seconds >= SEXAGESIMAL:
        return None
    return sign * (whole + (minutes + seconds / SEXAGESIMAL) / SEXAGESIMAL)


def read_position(text: str) -> tuple[float, float] | None:
    """Read `N 15°43'25.5" E 67°26'32.7"` or `15.72, 67.44` as longitude and latitude.

    Source: latitude stands first where people write both in one cell (ISO 6709).
    """
    parts = text.split(",") if "," in text else _at_the_second_half(text.strip())
    if len(parts) != len(HALVES):
        return None
    lat, lon = (read_angle(part, axis) for part, axis in zip(parts, HALVES, strict=True))
    return None if lat is None or lon is None else (lon, lat)


def _without_half(text: str, axis: str) -> tuple[str | None, float]:
    """Take the letter of the half off, before or behind; None where it is another axis's."""
    letters = {end for end in (text[:1].upper(), text[-1:].upper()) if end.isalpha()}
    north, south = HALVES[axis]
    if not letters:
        return text, 1.0
    if len(letters) > 1 or not letters <= {north, south}:
        return None, 1.0
    return text.strip("NSEWnsew ").strip(), -1.0 if south in letters else 1.0


def _at_the_second_half(text: str) -> list[str]:
    """Cut before the letter of the longitude, or behind that of the latitude."""
    if text[:1].upper() in HALVES["latitude"]:
        return re.split(r"\s*(?=[EWew])", text, maxsplit=1)
    return re.split(r"(?<=[NSns])\s*", text, maxsplit=1)
