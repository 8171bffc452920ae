"""The register's chain: each entry bound to the one before by its digest, and a short code to print.

A digest is SHA-256 (FIPS 180-4) over canonical JSON: keys in order, no blanks, numbers by their
exact decimal value, so that a database that stores 1.0 as 1 or 1e22 in full changes nothing.
"""

from __future__ import annotations

import hashlib
import json
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from datetime import UTC, datetime
from decimal import Decimal
from typing import Any, Final

from structures.life.short_code import short_code

DIGEST_LONG: Final = 64  # hexadecimal digits of SHA-256


def canonical_bytes(value: Any) -> bytes:
    """Give the one form of a JSON value in bytes.

    Objects have their keys sorted by code point; lists keep their order; a number is written by its
    digits and exponent without zeros at the end.

    Raises
    ------
    ValueError
        If the value is not JSON: a key that is no text, NaN, a surrogate, a day, an object.
    """
    return "".join(_parts(value)).encode()


def content_digest(value: Any) -> str:
    """Give the SHA-256 of a JSON value in its one form, in hexadecimal.

    Raises
    ------
    ValueError
        If the value is not JSON.
    """
    return hashlib.sha256(canonical_bytes(value)).hexdigest()


@dataclass(frozen=True, slots=True)
class Entry:
    """One entry of a register, as it is stored.

    `by` and `structure` are the numbers of the rows, `by_name` the name as it was that day;
    `corrects` is the digest of the entry that this one corrects, "" where it corrects none.
    """

    number: int
    at: datetime
    by: int
    by_name: str
    act: str
    content: Any
    structure: int | None = None
    subject: str = ""
    corrects: str = ""
    content_digest: str = ""
    previous_digest: str = ""
    digest: str = ""
    code: str = ""

    def __post_init__(self) -> None:
        if self.at.tzinfo is None:
            raise ValueError("an entry's time has its zone")


@dataclass(frozen=True, slots=True)
class Misfit:
    """The first entry that does not fit: its number as it should be, and why."""

    number: int
    why: str


def seal(entry: Entry, previous: Entry | None) -> Entry:
    """Give an entry its place after the previous one, its digests and its code.

    Raises
    ------
    ValueError
        If its content is not JSON.
    """
    placed = replace(
        entry,
        number=1 if previous is None else previous.number + 1,
        previous_digest="" if previous is None else previous.digest,
        content_digest=content_digest(entry.content),
    )
    digest = entry_digest(placed)
    return replace(placed, digest=digest, code=short_code(digest))


def entry_digest(entry: Entry) -> str:
    """Give the digest of all of an entry and, through `previous_digest`, of all before it."""
    return content_digest(
        {
            "previous": entry.previous_digest,
            "number": entry.number,
            "at": entry.at.astimezone(UTC).isoformat(timespec="microseconds"),
            "by": entry.by,
            "by_name": entry.by_name,
            "act": entry.act,
            "structure": entry.structure,
            "subject": entry.subject,
            "content": entry.content_digest,
            "corrects": entry.corrects,
        }
    )


def first_misfit(
    entries: Iterable[Entry], *, length: int | None = None, digest: str | None = None
) -> Misfit | None:
    """Walk a chain from its first entry and give the first that does not fit; None if all do.

    `length` and `digest` are what is kept apart of the chain's end: without them nobody can see
    that the last entries were cut off.
    """
    previous_digest, count = "", 0
    for count, entry in enumerate(entries, start=1):
        why = _misfit(entry, count, previous_digest)
        if why:
            return Misfit(count, why)
        previous_digest = entry.digest
    if length is not None and count != length:
        return Misfit(min(count, length) + 1, f"the register has {count} entries, not {length}")
    if digest is not None and previous_digest != digest:
        return Misfit(count, "the register does not end with this entry")
    return None


def _misfit(entry: Entry, number: int, previous_digest: str) -> str:
    if entry.number != number:
        return f"entry {number} is missing; entry {entry.number} stands in its place"
    if entry.previous_digest != previous_digest:
        return "it does not hang on the entry before"
    try:
        inside = content_digest(entry.content)
    except ValueError:
        return "its content cannot be read"
    if inside != entry.content_digest:
        return "its content is not what was signed"
    if entry_digest(entry) != entry.digest:
        return "its time, person, act or subject is not what was signed"
    if short_code(entry.digest) != entry.code:
        return "its short code is not its own"
    return ""


def _parts(value: Any) -> Iterable[str]:
    if value is None or isinstance(value, bool):
        yield {None: "null", True: "true", False: "false"}[value]
    elif isinstance(value, str):
        yield _text(value)
    elif isinstance(value, int | float):
        yield _number(value)
    elif isinstance(value, Mapping):
        yield from _object(value)
    elif isinstance(value, list | tuple):
        yield "["
        for place, member in enumerate(value):
            yield "," if place else ""
            yield from _parts(member)
        yield "]"
    else:
        raise ValueError(f"{type(value).__name__} is not JSON")


def _object(value: Mapping[Any, Any]) -> Iterable[str]:
    if not all(isinstance(key, str) for key in value):
        raise ValueError("a key of JSON is text")
    yield "{"
    for place, key in enumerate(sorted(value)):
        yield f"{',' if place else ''}{_text(key)}:"
        yield from _parts(value[key])
    yield "}"


def _text(value: str) -> str:
    try:
        value.encode()
    except UnicodeEncodeError:
        raise ValueError("the text holds half a sign") from None
    return json.dumps(value, ensure_ascii=False)


def _number(value: float) -> str:
    """Write a number by its exact decimal value: 1 for 1.0, 25e-1 for 2.5, 1e22 for 10**22."""
    exact = Decimal(value) if isinstance(value, int) else Decimal(repr(float(value)))
    if not exact.is_finite():
        raise ValueError("NaN and infinity are not JSON")
    sign, digits, exponent = exact.as_tuple()
    kept = "".join(map(str, digits)).rstrip("0")
    if not kept:
        return "0"
    exponent = int(exponent) + len(digits) - len(kept)
    return f"{'-' if sign else ''}{kept}{f'e{exponent}' if exponent else ''}"
