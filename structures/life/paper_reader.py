"""The one reader of papers: what a page, the interface or the demo hands in, to content.

Content is ready for JSON: every field of the paper in its order, None where nothing was given, days
as "2026-04-10". What is not a field of the paper is refused: a misspelt answer would be a blank.
"""

from __future__ import annotations

import difflib
import re
from datetime import date
from typing import TYPE_CHECKING, Any, Final

from structures.errors import Finding
from structures.intake.fields import Field
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_value
from structures.life.drawing_rules import Limits, drawing_rules
from structures.life.paper_rules import RULES
from structures.life.papers import PAPERS
from structures.life.papers_of_office import DRAWING_SHEET

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.life.paper import Paper, PaperField

Content = dict[str, Any]
STANDARD: Final = Limits()
DAY: Final = re.compile(r"\d{4}-\d{2}-\d{2}", re.ASCII)
DAY_LEAST: Final = date(1950, 1, 1)  # earlier days are slips (project choice)
DAY_MOST: Final = date(2200, 1, 1)
ROWS_MOST: Final = 200  # rows of one list (project choice)
ROW_KEY: Final = re.compile(r"(\w+)-(\d{1,4})-(\w+)", re.ASCII)
KINDS: Final = {
    "text": "text",
    "long text": "text",
    "number": "number",
    "whole": "whole",
    "yes no": "yes_no",
    "choice": "choice",
}


def read_paper(
    kind: str, given: Mapping[str, object], *, limits: Limits = STANDARD
) -> tuple[Content, tuple[Finding, ...]]:
    """Read one paper; its content is to be kept only where no finding blocks.

    Raises
    ------
    KeyError
        If there is no such kind of paper, or it is not written on a form.
    """
    paper = PAPERS[kind]
    if not paper.fields:
        raise KeyError(f"{paper.title} is made elsewhere, not on a form")
    ledger = Ledger()
    whole = Node(dict(given), paper.title, tabular=True)
    content, refused = _read_object(whole, paper.fields, ledger)
    rules = drawing_rules(limits) if kind == DRAWING_SHEET.kind else RULES.get(kind, ())
    for rule in rules:
        if refused.isdisjoint(rule.needs):
            ledger.findings += rule.judge(content)
    return content, tuple(ledger.findings)


def judge_photo(kind: str, photos: int) -> tuple[Finding, ...]:
    """Tell what photo is missing: of the place, or of the signed sheet.

    Raises
    ------
    KeyError
        If there is no such kind of paper.
    """
    paper = PAPERS[kind]
    if not paper.photo or photos > 0:
        return ()
    remedy = (
        "Print the sheet, have it signed, and take a photo of it."
        if paper.signed
        else "Take it on the place; from the edge where a trench is open."
    )
    return (Finding(paper.title, "photo", f"No photo of {paper.photo}.", remedy),)


def from_form(kind: str, flat: Mapping[str, str]) -> dict[str, object]:
    """Put the flat names of a page ("wells-0-well") together to what `read_paper` takes.

    Rows that are blank throughout are left out, and so are blank fields; names that are none of
    the paper's stay, and are refused by the reader.

    Raises
    ------
    KeyError
        If there is no such kind of paper.
    """
    lists = {field.name for field in PAPERS[kind].fields if field.kind == "rows"}
    rows: dict[str, dict[int, dict[str, str]]] = {}
    given: dict[str, object] = {}
    for key, value in flat.items():
        part = ROW_KEY.fullmatch(key)
        if part and part[1] in lists:
            if value.strip():
                rows.setdefault(part[1], {}).setdefault(int(part[2]), {})[part[3]] = value
        elif value.strip() or key not in {field.name for field in PAPERS[kind].fields}:
            given[key] = value
    return given | {name: [found[at] for at in sorted(found)] for name, found in rows.items()}


def blank_content(paper: Paper) -> Content:
    """Give the content of a paper on which nothing was written yet."""
    return {field.name: [] if field.kind == "rows" else None for field in paper.fields}


def _read_object(
    node: Node, fields: tuple[PaperField, ...], ledger: Ledger
) -> tuple[Content, set[str]]:
    """Read an object's fields in their order, every field with its key; names those refused."""
    content: Content = {}
    refused: set[str] = set()
    for field in fields:
        blocks = ledger.blocks
        member = _member(node, field.name)
        if field.kind == "rows":
            content[field.name] = _read_rows(member, field, ledger)
        elif _blank(member):
            content[field.name] = None
            if field.required:
                what, remedy = field.blank_says or ("This is blank.", _ask(field))
                ledger.add(member, what, remedy, rule=field.rule)
        else:
            content[field.name] = _read_one(member, field, ledger)
        if ledger.blocks > blocks:
            refused.add(field.name)
    known = [field.name for field in fields]
    for key in node.value:
        if key not in known:
            near = difflib.get_close_matches(str(key)[:60], known, n=1)
            remedy = f"Was {near[0]} meant?" if near else f"Known here: {', '.join(known)}."
            ledger.add(_member(node, str(key)), "There is no such field on this paper.", remedy)
    return content, refused


def _read_rows(node: Node, field: PaperField, ledger: Ledger) -> list[Content]:
    """Read a list of rows; the places in findings count from 1, as people do."""
    value = [] if node.value is None or node.value == "" else node.value
    if not isinstance(value, list | tuple):
        ledger.add(node, f"Rows were expected here, not {shown(value)}.", "Write a list.")
        return []
    if len(value) > ROWS_MOST:
        what = f"{len(value)} rows are more than {ROWS_MOST}."
        ledger.add(node, what, "Write the rest on a second sheet.")
        return []
    if len(value) < field.least:
        what, remedy = field.blank_says or ("There is no row.", f"Write {field.least} or more.")
        ledger.add(node, what, remedy, rule=field.rule)
    rows = []
    for place, row in enumerate(value, start=1):
        where = Node(row, f"{node.where}, {field.label.lower()}, row {place}", tabular=True)
        if isinstance(row, dict):
            rows.append(_read_object(where, field.columns, ledger)[0])
        else:
            ledger.add(where, f"Fields were expected here, not {shown(row)}.", "Write an object.")
    return rows


def _read_one(node: Node, field: PaperField, ledger: Ledger) -> object:
    if field.kind == "date":
        return _read_day(node, ledger)
    try:
        value = read_value(node, _as_intake(field), ledger)
    except OverflowError:  # a whole number of hundreds of digits
        ledger.add(node, "The number is too large.", "Leave out what was not measured.")
        return None
    if field.usual and isinstance(value, float | int):
        low, high = field.usual
        if not low <= value <= high:
            what = f"{value:g} is unusual; {low:g} to {high:g}{_unit(field)} is usual."
            ledger.add(node, what, "Look for a slip; it is kept as it is.", level="warn")
    return value


def _read_day(node: Node, ledger: Ledger) -> str | None:
    value = node.value
    if isinstance(value, date):
        value = value.isoformat()[:10]
    text = value.strip() if isinstance(value, str) else ""
    try:
        day = date.fromisoformat(text) if DAY.fullmatch(text) else None
    except ValueError:
        ledger.add(node, f"{shown(text)} does not exist.", "Look at the calendar.", rule="RN-04")
        return None
    if day is None:
        ledger.add(node, f"{shown(value)} is no day.", "Write year-month-day, as 2026-04-10.")
        return None
    if not DAY_LEAST <= day <= DAY_MOST:
        ledger.add(node, f"{text} cannot be.", "Look at the year.")
        return None
    return text


def _as_intake(field: PaperField) -> Field:
    return Field(
        field.name,
        field.label,
        KINDS[field.kind],
        field.unit,
        field.low,
        field.high,
        choices=field.choices,
        rule=field.rule,
    )


def _member(node: Node, key: str) -> Node:
    value = node.value.get(key)
    return Node(value, node.where, shown(key)[1:-1], tabular=True)


def _blank(node: Node) -> bool:
    return node.value is None or (isinstance(node.value, str) and not node.value.strip())


def _ask(field: PaperField) -> str:
    return f"{field.label}: {field.help or 'fill it in'}".rstrip(".") + "."


def _unit(field: PaperField) -> str:
    return f" {field.unit}" if field.unit else ""
