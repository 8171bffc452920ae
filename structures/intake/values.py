"""One value under one field: the value, or a finding that says what is wrong and what to do."""

from __future__ import annotations

import difflib
import math
import re
import unicodedata
from typing import TYPE_CHECKING, Final

from structures.intake.fields import CODE_PATTERN, TEXT_MOST
from structures.intake.tree import Node, shown

if TYPE_CHECKING:
    from collections.abc import Callable

    from structures.intake.fields import Field
    from structures.intake.tree import Ledger

NUMBER: Final = re.compile(r"[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d{1,3})?", re.ASCII)
NUMBER_LONGEST: Final = 40  # characters; no measured number is longer
# What a number cell often holds instead, most telling first: (pattern, what, remedy).
SLIPS: Final = tuple(
    (re.compile(pattern, re.ASCII), what, remedy)
    for pattern, what, remedy in (
        (r"(?i)[+-]?(nan|inf|infinity)", "is not a number", "Leave out what was not measured."),
        (r"[=@].*|[+-].*[A-Za-z(].*", "is a formula", "Type the number itself."),
        (r"[+-]?\d[\d ,.']*,[\d ,.']+", "has a comma", "Write a decimal point, no thousands mark."),
        (
            r"(?=.*[oOlI])[+-]?[\doOlI]*[\d.][\doOlI.]*",
            "has a letter in place of a digit",
            "Look at the field sheet and type the digits.",
        ),
        (r"[<>~].*|.*[+]", "is a limit, not a number", "Type the number; say the rest in a note."),
        (
            r"[+-]?[\d.]+\s*[^\d\s].*",
            "has words behind the number",
            "Type the number alone, in the unit of the heading.",
        ),
    )
)
DECIMAL_COMMA: Final = re.compile(r"\s*([+-]?\d*),(\d+)\s*")
# Three digits behind one comma may be thousands: such a number stays as it is and is asked about.
EITHER: Final = re.compile(r"\s*[+-]?0*[^\D0]\d{0,2},\d{3}\s*")
MEMBERS_MOST: Final = 200  # fields of one object; a pack's have a dozen
KEY_MOST: Final = 60  # characters of a key that are compared with known ones
FORMULA_SIGNS: Final = ("=", "+", "-", "@")
YES: Final = {"yes": True, "true": True, "1": True, "no": False, "false": False, "0": False}


def with_point(text: str) -> str:
    """Give a number with a plain decimal comma its point; any other text stays."""
    matched = DECIMAL_COMMA.fullmatch(text)
    if matched is None or EITHER.fullmatch(text):
        return text
    return f"{matched[1]}.{matched[2]}"


def read_value(node: Node, field: Field, ledger: Ledger) -> object:
    """Read one value; None, with a finding in the ledger, where it cannot be used."""
    return READERS[field.kind](node, field, ledger)


def read_fields(
    node: Node,
    fields: tuple[Field, ...],
    ledger: Ledger,
    *,
    closed: bool = False,
    apart: tuple[str, ...] = (),
) -> dict[str, object] | None:
    """Read an object's fields into a dict without what was left out.

    An unknown key is kept as a note and told; in a `closed` object it is an error, since a misspelt
    setting must not fall back to a default. Keys read `apart` are known and left alone. None where
    a finding blocks the object.
    """
    if not isinstance(node.value, dict):
        ledger.add(node, f"Fields were expected here, not {shown(node.value)}.", "Write an object.")
        return None
    blocks = ledger.blocks
    values: dict[str, object] = {}
    for field in fields:
        member = node.named(field.key)
        if not member.blank:
            values[field.key] = read_value(member, field, ledger)
        elif field.required:
            tell_missing(member, field, ledger)
    tell_unknown(node, (*(field.key for field in fields), *apart), ledger, closed=closed)
    return values if ledger.blocks == blocks else None


def tell_missing(node: Node, field: Field, ledger: Ledger) -> None:
    """Write down that a required field was left out."""
    what, remedy = field.missing_says or ("This is missing.", f"Give the {field.words}.")
    ledger.add(node, what, remedy, rule=field.rule if field.missing_says else "")


def tell_unknown(
    node: Node, known: tuple[str, ...], ledger: Ledger, *, closed: bool = False
) -> None:
    """Keep members that nobody knows as notes and tell of each name once."""
    if len(node.value) > MEMBERS_MOST:
        what = f"{len(node.value)} fields are more than {MEMBERS_MOST}."
        ledger.add(node, what, "Send one site's survey.")
        return
    for key, member in node.members().items():
        if key in known or (member.tabular and member.blank):
            continue
        if closed:
            remedy = _meant(key, known) or f"Known here: {', '.join(known)}."
            ledger.add(member, "There is no such setting.", remedy)
            continue
        ledger.keep(member)
        tell_spare(key, member, known, ledger, what="A pack has no such field; kept as a note.")


def tell_spare(
    key: str,
    member: Node,
    known: tuple[str, ...],
    ledger: Ledger,
    *,
    what: str,
    rule: str = "FI-03",
) -> None:
    """Tell once of a name that nobody knows: it may be a slip where a known one is near."""
    if member.field in ledger.told:
        return
    ledger.told.add(member.field)
    hint = _meant(key, known)
    remedy = hint or "Nothing to do if it is only a remark."
    ledger.add(member, what, remedy, level="warn" if hint else "note", rule=rule)


def _meant(key: str, known: tuple[str, ...]) -> str:
    near = difflib.get_close_matches(key[:KEY_MOST], known, n=1)
    return f"Was {near[0]} meant?" if near else ""


def _number(node: Node, field: Field, ledger: Ledger) -> float | None:
    value = _plain_number(node, ledger)
    if value is None:
        return None
    if not math.isfinite(value):
        what = "NaN is not a number." if math.isnan(value) else "The number is too large."
        ledger.add(node, what, "Leave out what was not measured.")
        return None
    if field.low is not None and (value < field.low or (field.open_low and value == field.low)):
        _tell_range(node, field, value, field.low_says, ledger)
        return None
    if field.high is not None and value > field.high:
        _tell_range(node, field, value, field.high_says, ledger)
        return None
    return value


def _tell_range(
    node: Node, field: Field, value: float, says: tuple[str, str] | None, ledger: Ledger
) -> None:
    if says:
        ledger.add(node, says[0].format(value=value), says[1], rule=field.rule)
        return
    unit = f" {field.unit}" if field.unit not in {"", "-"} else ""
    least = "above " if field.open_low else ""
    what = f"{value:g} is outside what is accepted, {least}{field.low:g} to {field.high:g}{unit}."
    ledger.add(node, what, "Look for a slip in the decimal point or the unit.", rule=field.rule)


def _plain_number(node: Node, ledger: Ledger) -> float | None:
    value = node.value
    if isinstance(value, int | float) and not isinstance(value, bool):
        return float(value)
    if not isinstance(value, str):
        ledger.add(node, f"A number is wanted, not {shown(value)}.", "Write the number.")
        return None
    text = value.strip()
    if node.tabular and len(text) <= NUMBER_LONGEST:
        digits = _plain_digits(node, text, ledger)
        if NUMBER.fullmatch(digits):
            return float(digits)
    if not node.tabular and NUMBER.fullmatch(text[:NUMBER_LONGEST]):
        ledger.add(node, f"{shown(value)} stands in quotes.", "Write the number without quotes.")
        return None
    ledger.add(node, *_slip(text))
    return None


def _plain_digits(node: Node, text: str, ledger: Ledger) -> str:
    """Turn digits of other scripts into 0 to 9 by their Unicode value, told once a column."""
    digits = "".join(str(unicodedata.decimal(sign, sign)) for sign in text)
    told = f"digits of {node.field}"
    if digits != text and NUMBER.fullmatch(digits) and told not in ledger.told:
        what = f"{shown(text)} stands in digits of another script, read by their value as {digits}."
        ledger.add(node, what, "Say so if that is wrong.", level="note", rule="FI-04")
        ledger.told.add(told)
    return digits


def _slip(text: str) -> tuple[str, str]:
    for pattern, what, remedy in SLIPS:
        if pattern.fullmatch(text[:NUMBER_LONGEST]):
            return f"{shown(text)} {what}.", remedy
    return f"{shown(text)} is not a number.", "Type the number, or leave out what was not measured."


def _whole(node: Node, field: Field, ledger: Ledger) -> int | None:
    value = _number(node, field, ledger)
    if value is None:
        return None
    if value != int(value):
        ledger.add(node, f"{value:g} is not a whole number.", "Write a whole number.")
        return None
    return int(value)


def _text(node: Node, _field: Field, ledger: Ledger) -> str | None:
    value = node.value
    if node.tabular and isinstance(value, int | float) and not isinstance(value, bool):
        value = f"{value:.15g}"  # a spreadsheet turns the text 12 into a number
    if not isinstance(value, str):
        ledger.add(node, f"Text is wanted, not {shown(value)}.", "Write it in quotes.")
        return None
    text = value.strip()
    if len(text) > TEXT_MOST:
        ledger.add(node, f"The text has {len(text)} characters.", f"Keep it to {TEXT_MOST}.")
        return None
    if any(not sign.isprintable() and sign not in "\n\r\t" for sign in text):
        ledger.add(
            node, f"{shown(text)} holds characters that cannot be printed.", "Type it again."
        )
        return None
    if node.tabular and text.startswith(FORMULA_SIGNS):
        what = f"{shown(text)} begins like a formula; kept as text."
        ledger.add(node, what, "Nothing is computed from it.", level="note")
    return text or None


def _code(node: Node, field: Field, ledger: Ledger) -> str | None:
    blocks = ledger.blocks
    text = _text(node, field, ledger)
    if ledger.blocks > blocks:
        return None
    if not text:
        tell_missing(node, field, ledger)
        return None
    if not re.match(CODE_PATTERN, text):
        what = f"{shown(text)} cannot be a code."
        ledger.add(node, what, "Up to 40 letters, digits, - _ or . without blanks.")
        return None
    return text


def _choice(node: Node, field: Field, ledger: Ledger) -> str | None:
    value = (
        node.value.strip().lower() if node.tabular and isinstance(node.value, str) else node.value
    )
    if isinstance(value, str) and value in field.choices:
        return value
    ledger.add(
        node, f"{shown(node.value)} is not known here.", f"One of: {', '.join(field.choices)}."
    )
    return None


def _yes_no(node: Node, field: Field, ledger: Ledger) -> bool | None:
    value = node.value
    if isinstance(value, bool):
        return value
    if node.tabular:
        word = f"{value:g}" if isinstance(value, int | float) else str(value).strip().lower()
        if word in YES:
            return YES[word]
    remedy = "Write yes or no." if node.tabular else "Write true or false, without quotes."
    ledger.add(node, f"{shown(value)} is neither yes nor no.", remedy, rule=field.rule)
    return None


READERS: Final[dict[str, Callable[[Node, Field, Ledger], object]]] = {
    "number": _number,
    "whole": _whole,
    "text": _text,
    "code": _code,
    "choice": _choice,
    "yes_no": _yes_no,
}
