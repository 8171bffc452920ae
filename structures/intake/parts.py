"""The parts of a pack, read one by one from the neutral tree into records with their places."""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise
from typing import TYPE_CHECKING, Final, Generic, NamedTuple, TypeVar

from structures.intake import fields
from structures.intake.defaults import WALL
from structures.intake.pack import (
    GroundPoint,
    GroundWater,
    Probe,
    RefractionLine,
    RefractionPick,
    RockLinePoint,
    RockTest,
    Site,
    SlopeStation,
    Sounding,
    SoundingReading,
    Toes,
    WallSettings,
    Works,
)
from structures.intake.refraction_checks import check_spread
from structures.intake.sounding_checks import check_sounding, leave_out_wide
from structures.intake.tree import Node, shown
from structures.intake.values import read_fields, read_value, tell_unknown

if TYPE_CHECKING:
    from structures.intake.fields import Field
    from structures.intake.tree import Ledger

ROWS_MOST: Final = 5000  # rows of one list; a survey has some hundreds
HEADINGS_SHOWN: Final = 12  # a pack's tables have no more
Record = TypeVar("Record")


class Placed(NamedTuple, Generic[Record]):
    """A record and the place from which it was read."""

    record: Record
    node: Node


def read_elements(node: Node, least: int, ledger: Ledger) -> list[Node]:
    """Give the elements of a list; none, with a finding, where it is no list or of a wrong length."""
    if node.value is None:
        ledger.add(node, "This is missing.", "Give its rows.")
        return []
    if not isinstance(node.value, list):
        ledger.add(node, f"A list is wanted, not {shown(node.value)}.", "Write a list.")
        return []
    count = len(node.value)
    if count > ROWS_MOST:
        ledger.add(node, f"{count} rows are more than {ROWS_MOST}.", "Send one site's survey.")
        return []
    if count < least:
        what = f"Rows here: {count}; {least} are the least."
        ledger.add(node, what, "Give the missing ones.")
        return []
    return node.elements()


def read_list(
    node: Node,
    table: tuple[Field, ...],
    make: Callable[..., Record],
    ledger: Ledger,
    *,
    least: int = 0,
    closed: bool = False,
) -> list[Placed[Record]]:
    """Read a list of flat objects; those that are blocked are left out."""
    elements = read_elements(node, least, ledger)
    if elements and _columns_missing(node, elements[0], table, ledger):
        return []
    placed = []
    for element in elements:
        values = read_fields(element, table, ledger, closed=closed)
        if values is not None:
            placed.append(Placed(make(**values), element))
    return placed


def _columns_missing(node: Node, first: Node, table: tuple[Field, ...], ledger: Ledger) -> bool:
    """Tell of a column that a table lacks once, not in each of its rows."""
    if not first.tabular:
        return False
    missing = [field for field in table if field.required and field.key not in first.value]
    for field in missing:
        place = Node(None, node.where, first.named(field.key).field)
        remedy = f"Headings here: {', '.join([*first.value][:HEADINGS_SHOWN])}."
        ledger.add(place, f"There is no column {field.key}.", remedy)
    return bool(missing)


def read_site(node: Node, ledger: Ledger) -> Site | None:
    """Read the place."""
    values = read_fields(node, fields.SITE, ledger)
    return Site(**values) if values is not None else None


def read_ground(node: Node, ledger: Ledger) -> list[Placed[GroundPoint]]:
    """Read the ground points in the order given."""
    return read_list(node, fields.GROUND, GroundPoint, ledger, least=2)


def read_toes(node: Node, ledger: Ledger) -> Toes | None:
    """Read the feet of the banks."""
    values = read_fields(node, fields.TOES, ledger)
    return Toes(**values) if values is not None else None


def read_rock(node: Node, ledger: Ledger) -> list[Placed[RockTest]]:
    """Read what was seen or proved; an outcrop lies at the surface and is rock."""
    placed = read_list(node, fields.ROCK, RockTest, ledger)
    for test, place in placed:
        if test.method != "outcrop":
            continue
        if test.depth_m != 0:
            what = f"An outcrop has depth 0, not {test.depth_m:g} m."
            ledger.add(place.named("depth_m"), what, "Write 0, or pit or bore as the method.")
        if not test.met_rock:
            what = "An outcrop is rock that was met."
            ledger.add(place.named("met_rock"), what, "Write yes, or pit or bore as the method.")
    return placed


def read_probes(node: Node, ledger: Ledger) -> list[Placed[Probe]]:
    """Read the driven or pushed rods."""
    return read_list(node, fields.PROBES, Probe, ledger)


def read_rock_line(node: Node, ledger: Ledger) -> list[Placed[RockLinePoint]]:
    """Read the settled rock line."""
    return read_list(node, fields.ROCK_LINE, RockLinePoint, ledger, least=2)


def read_soundings(node: Node, ledger: Ledger) -> list[Placed[Sounding]]:
    """Read the soundings, each with its readings in the order of the sheet."""
    placed = []
    for place, element in enumerate(read_elements(node, 0, ledger), start=1):
        values = read_fields(element, fields.SOUNDING, ledger, apart=("readings",))
        if not isinstance(element.value, dict):
            continue
        array = _array(element, values)
        readings = read_readings(element.named("readings"), array, ledger)
        if values is not None:
            label = values.get("sounding") or f"S{place}"
            placed.append(Placed(Sounding(values["offset_m"], array, readings, label), element))
    return placed


def read_readings(node: Node, array: str, ledger: Ledger) -> tuple[SoundingReading, ...]:
    """Read and check the readings of one sounding as spacings of the array that was laid out."""
    blocks = ledger.blocks
    make = _wenner if array == "wenner" else SoundingReading
    readings = read_list(node, fields.ARRAYS[array], make, ledger, least=1)
    if ledger.blocks == blocks:
        readings = leave_out_wide(readings, ledger)
        check_sounding(array, readings, node, ledger)
    return tuple(reading for reading, _ in readings)


def _wenner(a_m: float, **rest: float) -> SoundingReading:
    """Place a Wenner reading on half spacings (handbook 2.4: AB = 3 a, MN = a)."""
    return SoundingReading(ab2_m=1.5 * a_m, mn2_m=0.5 * a_m, **rest)


def _array(element: Node, values: dict[str, object] | None) -> str:
    """Give the array named, as far as it can be read: readings are judged by it."""
    if values is not None:
        return values.get("array") or "schlumberger"
    named = element.named("array").value
    return named if isinstance(named, str) and named in fields.ARRAYS else "schlumberger"


def read_refraction(node: Node, ledger: Ledger) -> list[Placed[RefractionLine]]:
    """Read the refraction spreads, each with its first arrivals."""
    placed = []
    for place, element in enumerate(read_elements(node, 0, ledger), start=1):
        values = read_fields(element, fields.REFRACTION, ledger, apart=("picks",))
        if not isinstance(element.value, dict):
            continue
        picks = read_list(element.named("picks"), fields.PICKS, RefractionPick, ledger, least=1)
        if picks:
            check_spread(picks, element, ledger)
        if values is not None:
            label = values.get("line") or f"R{place}"
            record = RefractionLine(values["offset_m"], tuple(p.record for p in picks), label)
            placed.append(Placed(record, element))
    return placed


def read_ground_water(node: Node, ledger: Ledger) -> GroundWater | None:
    """Read what is known of the ground water."""
    values = read_fields(node, fields.GROUND_WATER, ledger, closed=True)
    return GroundWater(**values) if values is not None else None


def read_works(node: Node, ledger: Ledger) -> Works | None:
    """Read the plan of work."""
    values = read_fields(node, fields.WORKS, ledger, closed=True)
    return Works(**values) if values is not None else None


def read_wall(node: Node, ledger: Ledger) -> WallSettings | None:
    """Read the overrides of the defaults of handbook 12, each within its accepted range."""
    blocks = ledger.blocks
    stations = _side_slope(node.named("side_slope"), ledger)
    values = read_fields(node, fields.WALL, ledger, closed=True, apart=("side_slope",))
    if values is None or ledger.blocks > blocks:
        return None
    changed = [key for key, value in values.items() if value != WALL[key].value]
    if stations:
        values["side_slope"] = stations
        if any(station.slope != WALL["side_slope"].value for station in stations):
            changed.append("side_slope")
    return WallSettings(**values, changed=tuple(sorted(changed)))


def _side_slope(node: Node, ledger: Ledger) -> tuple[SlopeStation, ...]:
    """Read one slope or a list of stations; nothing where it was left out."""
    if node.blank:
        return ()
    if not isinstance(node.value, list):
        slope = read_value(node, fields.SIDE_SLOPE, ledger)
        return () if slope is None else (SlopeStation(0.0, slope),)
    placed = read_list(node, fields.SLOPE_STATION, SlopeStation, ledger, least=1, closed=True)
    check_rising(placed, ledger)
    return tuple(station for station, _ in placed)


def check_rising(placed: list[Placed], ledger: Ledger, rule: str = "") -> None:
    """Refuse offsets that do not rise strictly (handbook 1.7); nothing is sorted."""
    steps = [later.record.offset_m - one.record.offset_m for one, later in pairwise(placed)]
    if len(steps) > 1 and all(step < 0 for step in steps):
        node = placed[1].node.named("offset_m")
        ledger.add(
            node, "Offsets fall from row to row.", "Measure them from the left bank.", rule=rule
        )
        return
    for step, (one, later) in zip(steps, pairwise(placed), strict=True):
        before, here = one.record.offset_m, later.record.offset_m
        node = later.node.named("offset_m")
        if step == 0:
            ledger.add(
                node, f"Offset {here:g} stands twice.", "Keep one level an offset.", rule=rule
            )
        elif step < 0:
            what = f"Offset goes back ({here:g} after {before:g})."
            ledger.add(node, what, "Wrong order, or measured from the other bank?", rule=rule)


def read_version(node: Node, ledger: Ledger) -> None:
    """Refuse a pack of another version than this reader knows."""
    remedy = f"This reader knows pack {fields.PACK_VERSION}: write it so."
    if node.value is None:
        ledger.add(node, "The version of the pack is missing.", remedy)
        return
    known = (
        (fields.PACK_VERSION, str(fields.PACK_VERSION)) if node.tabular else (fields.PACK_VERSION,)
    )
    if isinstance(node.value, bool) or node.value not in known:
        ledger.add(node, f"Pack {shown(node.value)} is not known.", remedy)


def tell_unknown_parts(root: Node, ledger: Ledger) -> None:
    """Keep parts that a pack does not have as notes."""
    tell_unknown(root, fields.PARTS, ledger)
