"""From the neutral tree to a SurveyPack, whatever form it came in: one builder, one meaning."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.errors import LEVELS, Refused
from structures.intake import parts
from structures.intake.line_checks import (
    check_depths,
    check_feet,
    check_ground,
    check_inside,
    check_rock_line,
    check_section,
    check_toes,
    check_water_level,
)
from structures.intake.pack import SurveyPack
from structures.intake.probe_checks import check_gaps, check_lone_refusal, check_rod
from structures.intake.tree import Ledger, Node, shown

if TYPE_CHECKING:
    from structures.errors import Finding
    from structures.intake.pack import GroundPoint, Probe, RockLinePoint, RockTest, Toes
    from structures.intake.parts import Placed

SEVERAL: Final = "{count} things are wrong in this {thing}."


def build_pack(root: Node, ledger: Ledger) -> SurveyPack:
    """Build the pack of one site.

    Parameters
    ----------
    root
        An object whose members are the parts of a pack.
    ledger
        Where findings go; those of the form (encoding, decimal comma) may stand there already.

    Raises
    ------
    Refused
        If anything forbids keeping the pack; it carries every finding, those that only doubt too.
    """
    if not isinstance(root.value, dict):
        ledger.add(root, f"A pack is one object, not {shown(root.value)}.", "Send a survey pack.")
        raise refusal(ledger)
    parts.read_version(root.named("pack"), ledger)
    parts.tell_unknown_parts(root, ledger)
    site = None if "site" in ledger.unread else parts.read_site(_open(root, "site"), ledger)
    ground = _ground(root, ledger)
    toes_node = _open(root, "toes")
    toes = None if "toes" in ledger.unread else parts.read_toes(toes_node, ledger)
    read, sound = _tests(root, ledger)
    water_node = _open(root, "ground_water")
    water = parts.read_ground_water(water_node, ledger)
    wall = parts.read_wall(_open(root, "wall"), ledger)
    works = parts.read_works(_open(root, "works"), ledger)
    if ground:
        if toes:
            _check_line(toes, toes_node, ground, ledger)
        placed = _check_places(read, ground, ledger)
        if toes and sound and placed:
            _doubt_tests(read, ground, toes, ledger)
        if water:
            check_water_level(water, water_node, ground, ledger)
    if ledger.blocks:
        raise refusal(ledger)
    return SurveyPack(
        site=site,
        ground=_records(ground),
        toes=toes,
        rock=_records(read["rock"]),
        probes=_records(read["probes"]),
        soundings=_records(read["soundings"]),
        refraction=_records(read["refraction"]),
        rock_line=_records(read["rock_line"]) or None,
        ground_water=water,
        wall=wall,
        works=works,
        findings=tuple(ledger.findings),
        notes=tuple(ledger.notes),
    )


def refusal(ledger: Ledger, thing: str = "survey pack") -> Refused:
    """Give the refusal that carries all findings, the blocking ones first; `thing` names the file."""
    ordered = tuple(sorted(ledger.findings, key=lambda finding: LEVELS.index(finding.level)))
    blocking = [finding for finding in ordered if finding.level == "block"]
    if len(blocking) == 1:
        return _single(blocking[0], ordered)
    what = SEVERAL.format(count=len(blocking), thing=thing)
    return Refused(what, remedy="Put right what is listed and read it again.", findings=ordered)


def _single(finding: Finding, ordered: tuple[Finding, ...]) -> Refused:
    where = ", ".join(part for part in (finding.where, finding.field) if part)
    return Refused(finding.what, where=where, remedy=finding.remedy, findings=ordered)


def _open(root: Node, part: str) -> Node:
    """Give a part that is one object; a missing one is an empty object, so its fields speak."""
    node = root.named(part)
    return Node({}, node.where, node.field, node.tabular) if node.value is None else node


def _ground(root: Node, ledger: Ledger) -> list[Placed[GroundPoint]]:
    """Read the ground; empty where anything in it is wrong, so that nothing is judged by it."""
    node = root.named("ground")
    blocks = ledger.blocks
    if "ground" in ledger.unread:
        return []
    if node.value is None:
        ledger.add(node, "The ground points are missing.", "Give two or more, from the left bank.")
        return []
    ground = parts.read_ground(node, ledger)
    check_ground(ground, ledger)
    return ground if ledger.blocks == blocks else []


def _tests(root: Node, ledger: Ledger) -> tuple[dict[str, list[Placed]], bool]:
    """Read what was found under the ground, and say whether all of it could be read."""
    readers = {
        "rock": parts.read_rock,
        "probes": parts.read_probes,
        "soundings": parts.read_soundings,
        "refraction": parts.read_refraction,
        "rock_line": parts.read_rock_line,
    }
    nodes = {part: root.named(part) for part in readers}
    blocks = ledger.blocks
    read = {
        part: [] if node.value is None else readers[part](node, ledger)
        for part, node in nodes.items()
    }
    return read, ledger.blocks == blocks


def _check_line(toes: Toes, node: Node, ground: list[Placed[GroundPoint]], ledger: Ledger) -> None:
    blocks = ledger.blocks
    check_toes(toes, node, ground, ledger)
    if ledger.blocks == blocks:
        check_section(toes, ground, ledger)


def _check_places(
    read: dict[str, list[Placed]], ground: list[Placed[GroundPoint]], ledger: Ledger
) -> bool:
    """Refuse what lies outside the ground, or a rock line above it; true where nothing does."""
    blocks = ledger.blocks
    for part in ("rock", "probes", "soundings", "refraction"):
        check_inside(read[part], ground, ledger)
    if read["rock_line"]:
        check_rock_line(read["rock_line"], ground, ledger)
    return ledger.blocks == blocks


def _doubt_tests(
    read: dict[str, list[Placed]], ground: list[Placed[GroundPoint]], toes: Toes, ledger: Ledger
) -> None:
    """Doubt tests by their neighbours; only once every one of them stands where it should."""
    rock: list[Placed[RockTest]] = read["rock"]
    probes: list[Placed[Probe]] = read["probes"]
    line: list[Placed[RockLinePoint]] = read["rock_line"]
    check_depths([*rock, *probes], ground, ledger)
    check_lone_refusal(probes, ground, ledger)
    check_rod(probes, ledger)
    check_gaps(probes, rock, toes, ledger)
    if line:
        soil = [placed for placed in rock if not placed.record.met_rock]
        check_feet(line, [*probes, *soil], ground, ledger)


def _records(placed: list[Placed]) -> tuple:
    return tuple(record for record, _ in placed)
