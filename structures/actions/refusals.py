"""One refusal that carries every finding, the blocking ones first."""

from __future__ import annotations

from dataclasses import asdict
from typing import TYPE_CHECKING, Any

from django.core.exceptions import ValidationError

from structures.errors import LEVELS, Finding, Refused

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from django.db.models import Model


def refusal(findings: Iterable[Finding], thing: str) -> Refused:
    """Give the refusal of what was handed in; a single cause speaks for itself."""
    ordered = tuple(sorted(findings, key=lambda one: LEVELS.index(one.level)))
    blocking = [one for one in ordered if one.level == "block"]
    if len(blocking) == 1:
        where = ", ".join(part for part in (blocking[0].where, blocking[0].field) if part)
        return Refused(blocking[0].what, where=where, remedy=blocking[0].remedy, findings=ordered)
    what = f"{len(blocking)} things are wrong in this {thing}. Nothing was kept."
    return Refused(what, remedy="Put right what is listed and send it again.", findings=ordered)


def blocking(findings: Iterable[Finding]) -> bool:
    return any(one.level == "block" for one in findings)


def as_documents(findings: Iterable[Finding]) -> list[dict[str, Any]]:
    """Give findings as the tables keep them."""
    return [asdict(one) for one in findings]


def as_findings(documents: Iterable[Mapping[str, Any]]) -> tuple[Finding, ...]:
    """Give findings back as records."""
    return tuple(Finding(**document) for document in documents)


def field_findings(row: Model, where: str) -> tuple[Finding, ...]:
    """Judge a row by its own fields and gate; what points to other rows is looked at elsewhere."""
    links = {field.name for field in row._meta.fields if field.is_relation}
    found: list[Finding] = []
    for judge in (lambda: row.clean_fields(exclude=links), row.clean):
        try:
            judge()
        except ValidationError as error:
            by_field = error.message_dict if hasattr(error, "error_dict") else {"": error.messages}
            for name, messages in by_field.items():
                found += [Finding(where, name, message, "Put it right.") for message in messages]
    return tuple(found)
