"""The gate shared by tables, forms and serializers; None passes, the field has already spoken."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Any, Final
from zoneinfo import available_timezones

from django.core.exceptions import ValidationError

from structures.errors import Refused
from structures.ground.angle import LATITUDE_MOST, LONGITUDE_MOST
from structures.intake.defaults import EVERY

if TYPE_CHECKING:
    from structures.intake.defaults import Default

CURRENCY: Final = re.compile(r"[A-Z]{3}")  # letters of ISO 4217
DRAWS: Final = "risk_draws"
CHANGEABLE: Final[dict[str, Default]] = EVERY  # defaults that an office may change


def validate_latitude(lat: float | None) -> None:
    if lat is not None and not abs(lat) <= LATITUDE_MOST:
        raise ValidationError(f"{lat:g} is no latitude: -90 to 90 degrees.")


def validate_longitude(lon: float | None) -> None:
    if lon is not None and not abs(lon) <= LONGITUDE_MOST:
        raise ValidationError(f"{lon:g} is no longitude: -180 to 180 degrees.")


def validate_outline(outline: Any) -> None:
    from structures.ground.place import read_outline  # noqa: PLC0415 -- 0.3 s, for outlines only

    if outline is None:
        return
    try:
        read_outline(outline, "outline")
    except Refused as refused:
        raise ValidationError(refused.sentence()) from refused


def validate_course(course: Any) -> None:
    from structures.ground.course import read_course  # noqa: PLC0415 -- 0.3 s, for courses only

    if course is None:
        return
    try:
        read_course(course, "course")
    except Refused as refused:
        raise ValidationError(refused.sentence()) from refused


def validate_zone(zone: str) -> None:
    if zone not in available_timezones():
        raise ValidationError(f"{zone} is no time zone. Write it like Asia/Kolkata.")


def validate_currency(currency: str) -> None:
    if not CURRENCY.fullmatch(currency):
        raise ValidationError(f"{currency} is no currency. Write its three capital letters.")


def validate_setting(key: str, value: float | None) -> None:
    """Insist on the accepted range of the default (handbook 12)."""
    default = CHANGEABLE.get(key)
    if default is None:
        raise ValidationError(f"There is no setting {key}. Known: {', '.join(CHANGEABLE)}.")
    if value is None:
        return
    if not default.low <= value <= default.high:
        raise ValidationError(
            f"{default.written(value)} is outside {default.low:.15g} to {default.high:.15g}."
        )
    if default.whole and value != int(value):
        raise ValidationError(f"{value:g} is not a whole number.")
