"""A paper as a form: its fields with what was typed, what is wrong with it, and blank rows."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from structures.errors import Finding
    from structures.life.paper import Paper, PaperField

SPARE_ROWS: Final = 3  # blank rows below those that are filled


@dataclass(frozen=True, slots=True)
class Box:
    """One field of the form: its name in what is sent, its value as typed, its errors."""

    field: PaperField
    name: str
    value: str
    errors: tuple[str, ...]

    @property
    def options(self) -> tuple[str, ...]:
        return ("yes", "no") if self.field.kind == "yes no" else self.field.choices


@dataclass(frozen=True, slots=True)
class Rows:
    """A list of rows; each row is the boxes of its columns."""

    field: PaperField
    rows: tuple[tuple[Box, ...], ...]
    errors: tuple[str, ...]


def boxes(
    paper: Paper, typed: Mapping[str, str], findings: Iterable[Finding] = ()
) -> list[Box | Rows]:
    """Give the boxes of a paper; `typed` is what was sent, by its flat names."""
    said: dict[str, list[str]] = {}
    for one in findings:
        if one.level == "block":
            said.setdefault(one.field, []).append(f"{one.what} {one.remedy}".strip())
    return [
        _rows(field, typed, said) if field.kind == "rows" else _box(field, field.name, typed, said)
        for field in paper.fields
    ]


def typed_of(content: Mapping[str, Any]) -> dict[str, str]:
    """Give the content of a filed paper as if it had been typed."""
    typed = {}
    for name, value in content.items():
        if isinstance(value, list):
            for at, row in enumerate(value):
                typed |= {f"{name}-{at}-{key}": _text(one) for key, one in row.items()}
        else:
            typed[name] = _text(value)
    return typed


def told(paper: Paper, content: Mapping[str, Any]) -> list[dict[str, Any]]:
    """Give a filed paper as lines to read: label, value with its unit, rows as a table."""
    return [_told(field, content.get(field.name)) for field in paper.fields]


def _told(field: PaperField, value: Any) -> dict[str, Any]:
    if field.kind != "rows":
        return {"field": field, "rows": [], "value": _text(value)}
    rows = [[_text(row.get(column.name)) for column in field.columns] for row in value or ()]
    return {"field": field, "rows": rows, "value": ""}


def _box(
    field: PaperField, name: str, typed: Mapping[str, str], said: Mapping[str, list[str]]
) -> Box:
    return Box(field, name, typed.get(name, ""), tuple(said.get(name, ())))


def _rows(field: PaperField, typed: Mapping[str, str], said: Mapping[str, list[str]]) -> Rows:
    places = {
        int(key.split("-")[-2])
        for key, value in typed.items()
        if key.startswith(f"{field.name}-") and key.count("-") >= 2 and value.strip()
        if key.split("-")[-2].isdigit()
    }
    count = max(places, default=-1) + 1 + SPARE_ROWS
    rows = tuple(
        tuple(_box(one, f"{field.name}-{at}-{one.name}", typed, {}) for one in field.columns)
        for at in range(count)
    )
    return Rows(field, rows, tuple(said.get(field.name, ())))


def _text(value: Any) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float):
        return f"{value:.15g}"
    return str(value)
