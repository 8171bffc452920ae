"""Level readings as programs and phones send them: one record or many, each read by itself."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, Final
from uuid import UUID

from structures.errors import Refused
from structures.intake.doubt import Doubt
from structures.intake.fields import DEPTH_MOST_M, Field
from structures.intake.level_file import MARK, MARK_WORDS, NOTE, READ_BY
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
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import tell_spare

if TYPE_CHECKING:
    from collections.abc import Mapping
    from datetime import datetime, tzinfo

    from structures.errors import Finding

RECORDS_MOST: Final = 5000  # of one sending; more come as a file
NOTE_MOST: Final = 300  # characters of a remark that are kept
READER_MOST: Final = 60
KEYS: Final = (
    *("id", "well", "mark", "read_at", "state", "dry", "depth_m", "read_by", "note"),
    *("again_m", "hold_m", "wet_m", "tape_below_mark_m", "photo", "device_time"),
)
LOOSE_DEPTH: Final = Field(
    "depth_m", "depth below the measuring point", unit="m", low=-1e5, high=1e5
)


def _tape(key: str, words: str) -> Field:
    return Field(key, words, unit="m", low=-DEPTH_MOST_M, high=DEPTH_MOST_M)


HOLD: Final = _tape("hold_m", "tape held at the measuring point")
WET: Final = _tape("wet_m", "length of tape that came up wet")
BELOW: Final = _tape("tape_below_mark_m", "how far below the measuring point the tape was held")
AGAIN: Final = _tape("again_m", "second reading")


@dataclass(frozen=True, slots=True)
class LevelRecord:
    """One reading as it was read from what was sent; None is what was not given.

    `doubts` are what the record itself makes doubtful, `findings` what is told; one that blocks
    says that the record cannot be kept. `row` is its line in a file.
    """

    where: str
    id: UUID | None
    well: str | None
    mark: str | None
    read_at: datetime | None
    state: str
    dry: bool
    depth_m: float | None
    read_by: str = ""
    note: str = ""
    again_m: float | None = None
    photo: UUID | None = None
    row: int | None = None
    doubts: tuple[Doubt, ...] = ()
    findings: tuple[Finding, ...] = ()

    @property
    def blocked(self) -> bool:
        """Whether it cannot be kept."""
        return any(one.level == "block" for one in self.findings)


def read_level_records(document: object, zone: tzinfo) -> tuple[LevelRecord, ...]:
    """Read one record or a list of them.

    Source: the interface of readings (`POST levels`); field practice, rules LV-01, LV-12, LV-15.

    Parameters
    ----------
    document
        An object, or a list of objects, with the keys of an upload of readings; metres. A reading
        by chalked tape has `hold_m`, `wet_m` and perhaps `tape_below_mark_m` in place of `depth_m`.
    zone
        Zone of the place, for times without one.

    Raises
    ------
    Refused
        If it is neither, or too much at once.
    """
    records = document if isinstance(document, list) else [document]
    if not records or not all(isinstance(one, dict) for one in records):
        raise Refused("A reading is an object.", remedy="Send one reading, or a list of them.")
    if len(records) > RECORDS_MOST:
        what = f"{len(records)} readings are more than {RECORDS_MOST} at once."
        raise Refused(what, remedy="Send them as a file.")
    ledger = Ledger()  # what is told once a column is told once a sending
    return tuple(
        read_level_record(row_of(one, f"record {place}"), zone, told=ledger.told)
        for place, one in enumerate(records, start=1)
    )


def row_of(values: Mapping[str, Any], where: str) -> Node:
    """Give the values of a record as a row that can be read; nested ones are not looked into."""
    members = {
        str(key)[:40]: Node(value, where, str(key)[:40], tabular=True)
        for key, value in values.items()
    }
    return Node(members, where, tabular=True)


def read_level_record(row: Node, zone: tzinfo, *, told: set[str]) -> LevelRecord:
    """Read one record; whatever is wrong stands in its findings."""
    ledger = Ledger(told=told)
    state = given(row, STATE, ledger) or "not known"
    dry, depth_m, doubts = _depth(row, state, ledger)
    mark = row.named("mark")
    record = LevelRecord(
        where=row.where,
        id=_identifier(row.named("id"), ledger),
        well=needed(row, WELL, ledger),
        mark=None if mark.blank else given(row, MARK, ledger),
        read_at=moment(row, zone, ledger),
        state=state,
        dry=dry,
        depth_m=depth_m,
        read_by=(given(row, READ_BY, ledger) or "")[:READER_MOST],
        note=(given(row, NOTE, ledger) or "")[:NOTE_MOST],
        again_m=given(row, AGAIN, ledger),
        photo=_identifier(row.named("photo"), ledger),
        doubts=(*doubts, *remark_doubts(row.named("note").value)),
    )
    for key, member in row.members().items():
        if key not in KEYS and not member.blank:
            what = "A reading has no such field; it is left out."
            tell_spare(key, member, KEYS, ledger, what=what)
    return replace(record, findings=tuple(ledger.findings))


def remark_doubts(remark: object) -> tuple[Doubt, ...]:
    """Search a remark for words that tell of another measuring point (field practice 8, no. 10)."""
    text = str(remark or "")
    if not MARK_WORDS.search(text):
        return ()
    what = f"The remark {shown(text)} tells of another measuring point."
    remedy = "Enter the new mark from that day on, or say that it is the old one."
    return (Doubt("LV-03", "note", "hold", what, remedy, text[:60]),)


def tape_depth(
    hold_m: float, wet_m: float, below_m: float | None
) -> tuple[float, tuple[Doubt, ...]]:
    """Depth by a chalked tape, and the doubt where the tape was not held at the mark (LV-15).

    Source: field practice 8, no. 12: depth = hold - wet, plus the distance to the mark, once.
    """
    depth_m = round(hold_m - wet_m, 4)
    if not below_m:
        return depth_m, ()
    meant = round(depth_m + below_m, 4)
    what = f"Tape was held {below_m:.2f} m below the parapet. Reading {depth_m:.2f} is {meant:.2f} below the mark."
    return depth_m, (
        Doubt("LV-15", "depth_m", "hold", what, "Already corrected?", f"{depth_m:g}", f"{meant:g}"),
    )


def _depth(row: Node, state: str, ledger: Ledger) -> tuple[bool, float | None, tuple[Doubt, ...]]:
    hold, wet = (given(row, field, ledger) for field in (HOLD, WET))
    if hold is not None and wet is not None:
        depth_m, doubts = tape_depth(hold, wet, given(row, BELOW, ledger))
        return False, depth_m, doubts
    blocks = ledger.blocks
    node = row.named("depth_m")
    dry, depth_m = dry_and_depth(row, ledger, field=LOOSE_DEPTH)
    word = str(node.value or "").strip().lower()
    if state in WITHOUT_DEPTH:
        if depth_m is not None:
            what = f"The well is {state}, yet {depth_m:g} m was written."
            ledger.add(node, what, "Leave one of the two out.")
    elif depth_m is None and not dry and ledger.blocks == blocks and word not in DRY_WORDS:
        what = "No depth was read. A blank is not zero."
        ledger.add(node, what, "Write the depth, or say obstructed, flowing or flooded.")
    return dry, depth_m, ()


def _identifier(node: Node, ledger: Ledger) -> UUID | None:
    if node.blank:
        return None
    try:
        return UUID(str(node.value))
    except ValueError:
        what = f"{shown(node.value)} is no identifier."
        ledger.add(node, what, "Leave it out, or send the one made on the phone.")
        return None
