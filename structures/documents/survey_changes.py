"""What differs between two surveys of one site, place by place, as words."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

# Tables of a pack whose rows lie at an offset, and those that carry a name.
AT_OFFSETS: Final = ("ground", "rock", "probes", "rock_line")
LABELLED: Final = {"soundings": ("sounding", "readings"), "refraction": ("line", "picks")}
RECORDS: Final = ("site", "toes", "ground_water", "wall", "works")
ORDER: Final = (*RECORDS[:2], *AT_OFFSETS, *LABELLED, *RECORDS[2:])


@dataclass(frozen=True, slots=True)
class SurveyChange:
    """One place of a table that differs; None stands for "not there"."""

    part: str
    where: str
    old: str | None
    new: str | None


def survey_changes(before: Mapping[str, Any], after: Mapping[str, Any]) -> tuple[SurveyChange, ...]:
    """Compare two surveys by their canonical documents.

    Source: the tables of a survey pack; rows are matched by offset, or by their name.

    Parameters
    ----------
    before, after
        Documents as `pack_document` gives them.
    """
    old, new = dict(_entries(before)), dict(_entries(after))
    places = [*old, *(place for place in new if place not in old)]
    return tuple(
        SurveyChange(*place, old.get(place), new.get(place))
        for place in sorted(places, key=lambda place: ORDER.index(place[0]))
        if old.get(place) != new.get(place)
    )


def _entries(document: Mapping[str, Any]) -> Iterator[tuple[tuple[str, str], str]]:
    for part in RECORDS:
        for key, value in (document.get(part) or {}).items():
            yield (part, key), _text(value)
    for part in AT_OFFSETS:
        seen: dict[str, int] = {}
        for row in document.get(part) or []:
            where = " ".join(filter(None, (f"{row['offset_m']:g} m", row.get("method"))))
            seen[where] = seen.get(where, 0) + 1
            if seen[where] > 1:
                where = f"{where} ({seen[where]})"
            yield (part, where), _row(row, ("offset_m", "method"))
    for part, (name, rows) in LABELLED.items():
        for one in document.get(part) or []:
            values = [_row(row, ()) for row in one[rows]]
            place = f"at {one['offset_m']:g} m"
            yield (part, one[name]), f"{place}, {len(values)} {rows}"
            for number, value in enumerate(values, start=1):
                yield (part, f"{one[name]}, {number}"), value


def _row(row: Mapping[str, Any], left_out: tuple[str, ...]) -> str:
    return ", ".join(f"{key} {_text(value)}" for key, value in row.items() if key not in left_out)


def _text(value: Any) -> str:
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float):
        return f"{value:.10g}"
    if isinstance(value, list):
        return "; ".join(_row(one, ()) for one in value)
    return str(value)
