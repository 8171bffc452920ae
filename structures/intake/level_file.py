"""An upload of level readings: every row is kept, held or refused for itself, with its reason."""

from __future__ import annotations

import re
from collections import defaultdict
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final, Literal
from uuid import UUID

from structures.intake.builder import refusal
from structures.intake.fields import Field
from structures.intake.readings import (
    DRY_WORDS,
    STATE,
    WELL,
    WITHOUT_DEPTH,
    dry_and_depth,
    given,
    moment,
    needed,
)
from structures.intake.single_table import read_single_table, tell_columns
from structures.intake.tree import Ledger, Node, shown

if TYPE_CHECKING:
    from datetime import datetime, tzinfo

    from structures.errors import Finding
    from structures.intake.tables import Table

COLUMNS: Final = ("id", "well", "mark", "read_at", "state", "dry", "depth_m", "read_by", "note")
NEEDED: Final = ("well", "mark", "read_at", "depth_m")
MARK: Final = Field("mark", "name of the measuring point", "code", required=True)
READ_BY: Final = Field("read_by", "who read the well", "text")
NOTE: Final = Field("note", "remark", "text")
# Words in a remark that tell of another measuring point (field practice 8, no. 10).
MARK_WORDS: Final = re.compile(r"\b(parapet|raised|kerb|new mark|stone ring)\b", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class LevelRow:
    """One row of an upload as it was read; None is what was not given or cannot be used.

    `pile` is kept, held (an engineer decides) or refused (cannot be used), `findings` say why.
    """

    where: str
    id: UUID | None
    well: str | None
    mark: str | None
    read_at: datetime | None
    state: str
    dry: bool
    depth_m: float | None
    read_by: str
    note: str
    pile: Literal["kept", "held", "refused"] = "kept"
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True, slots=True)
class LevelFile:
    """The rows of an upload in their order, and what is said of the file as a whole."""

    rows: tuple[LevelRow, ...]
    findings: tuple[Finding, ...] = ()

    def count(self, pile: str) -> int:
        """How many rows lie on a pile."""
        return sum(row.pile == pile for row in self.rows)


def read_level_file(
    name: str, data: bytes, zone: tzinfo, *, now: datetime | None = None
) -> LevelFile:
    """Read an upload of level readings.

    Source: the interface of readings; field practice, rules LV-01, 05, 09, 11, 12, 13.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    data
        CSV or XLSX with `id,well,mark,read_at,state,dry,depth_m,read_by,note`; metres.
    zone
        Zone of the place, for times without one.
    now
        Readings after it are held; None looks at no clock.

    Raises
    ------
    Refused
        If the file as a whole is no table of readings.
    """
    ledger = Ledger()
    table = read_single_table(name, data, "levels", ledger)
    if table is None or not tell_columns(table, COLUMNS, NEEDED, ledger):
        raise refusal(ledger, "file of readings")
    whole = tuple(ledger.findings)
    rows = [_row(table, place, zone, now, ledger) for place in range(len(table.rows))]
    return LevelFile(tuple(_hold_doubles(rows)), whole)


def _row(table: Table, place: int, zone: tzinfo, now: datetime | None, whole: Ledger) -> LevelRow:
    ledger = Ledger(told=whole.told)  # what is told once a column is told on its first row
    row = table.node(table.rows[place], "")
    read_at = moment(row, zone, ledger)
    state = given(row, STATE, ledger) or "not known"
    dry, depth_m = dry_and_depth(row, ledger)
    read = LevelRow(
        where=row.where,
        id=_identifier(row.named("id"), ledger),
        well=needed(row, WELL, ledger),
        mark=needed(row, MARK, ledger),
        read_at=read_at,
        state=state,
        dry=dry,
        depth_m=depth_m,
        read_by=given(row, READ_BY, ledger) or "",
        note=given(row, NOTE, ledger) or "",
    )
    _check_depth(read, row, ledger)
    if read_at is not None and now is not None and read_at > now:
        what = f"Reading dated {read_at.isoformat(timespec='minutes')}, which is still to come."
        node = row.named("read_at")
        ledger.add(node, what, "Phone clock? Decide.", level="hold", rule="LV-11")
    if MARK_WORDS.search(read.note):
        what = f"The remark {shown(read.note)} tells of another measuring point."
        remedy = "Enter the new mark from that day on, or say that it is the old one."
        ledger.add(row.named("note"), what, remedy, level="hold", rule="LV-03")
    levels = {finding.level for finding in ledger.findings}
    pile = "refused" if "block" in levels else "held" if "hold" in levels else "kept"
    return replace(read, pile=pile, findings=tuple(ledger.findings))


def _identifier(node: Node, ledger: Ledger) -> UUID | None:
    if node.blank:
        return None
    try:
        return UUID(str(node.value))
    except ValueError:
        what = f"{shown(node.value)} is no identifier."
        ledger.add(node, what, "Leave it out, or send the one made on the phone.")
        return None


def _check_depth(read: LevelRow, row: Node, ledger: Ledger) -> None:
    """Look for a depth where the state gives one, and nowhere else."""
    node = row.named("depth_m")
    if read.state in WITHOUT_DEPTH:
        if read.depth_m is not None:
            what = f"The well is {read.state}, yet {read.depth_m:g} m was written."
            ledger.add(node, what, "Which of the two? Decide.", level="hold")
    elif read.depth_m is None and str(node.value or "").strip().lower() not in DRY_WORDS:
        if not any(finding.field == node.field for finding in ledger.findings):
            what = "No depth was read. A blank is not zero."
            ledger.add(node, what, "Write the depth, or say obstructed, flowing or flooded.")
    elif read.dry and read.depth_m is not None:
        what = f"{read.well} dry: the level is deeper than {read.depth_m:g} m."
        ledger.add(node, what, "It counts as a bound, not as a depth.", level="note", rule="LV-05")


def _hold_doubles(rows: list[LevelRow]) -> list[LevelRow]:
    """Keep one of rows that say the same; hold those that say different things of one time."""
    same: dict[tuple[object, ...], list[int]] = defaultdict(list)
    for place, row in enumerate(rows):
        if row.pile != "refused":
            same[row.well, row.read_at].append(place)
    kept = list(rows)
    for places in (places for places in same.values() if len(places) > 1):
        first = rows[places[0]]
        alike = len({(rows[one].mark, rows[one].depth_m, rows[one].dry) for one in places}) == 1
        for place in places[1:] if alike else places:
            other = rows[places[1]] if place == places[0] else first
            kept[place] = _doubled(rows[place], other, alike=alike)
    return kept


def _doubled(row: LevelRow, other: LevelRow, *, alike: bool) -> LevelRow:
    ledger = Ledger(findings=list(row.findings))
    node = Node(None, row.where, "depth_m")
    if alike:
        what = f"The same reading of {row.well} stands at {other.where}."
        ledger.add(node, what, "It is kept once.", rule="PC-01")
        return replace(row, pile="refused", findings=tuple(ledger.findings))
    what = f"Another reading of {row.well} at this time stands at {other.where}."
    ledger.add(node, what, "Both are kept, choose one for use.", level="hold", rule="LV-13")
    return replace(row, pile="held", findings=tuple(ledger.findings))
