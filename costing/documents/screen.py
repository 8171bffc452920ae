"""The result of an appraisal as text for a terminal: cautions first, units and ranges beside it."""

from __future__ import annotations

from textwrap import wrap
from typing import Any, Final

from structures.documents.sounding_result import depth_lines
from structures.life.cautions import CLOSING_SENTENCE, WORDS

WIDTH: Final = 88  # characters a line; fits a terminal of 90 and a page of 10 pt letters
NOT_KNOWN: Final = "not known"
SOURCES: Final = {
    "given": "settled by an engineer, used as given; it carries no range here",
    "estimated": "estimated from the tests; 10 % and 90 % points beside it",
    "none": "not known",
}
WALL_ROWS: Final = (
    ("bed level, closing level", "bed_level_m", "m"),
    ("crest level", "crest_level_m", "m"),
    ("left end at offset", "left_end_m", "m"),
    ("right end at offset", "right_end_m", "m"),
    ("length in plan", "length_m", "m"),
    ("greatest height, key included", "greatest_height_m", "m"),
    ("greatest depth to rock", "greatest_depth_m", "m"),
    ("greatest depth to the bottom of the key", "greatest_depth_to_key_m", "m"),
    ("face, key included", "face_area_m2", "m2"),
    ("face above rock", "face_above_rock_m2", "m2"),
)
WATER_ROWS: Final = (
    ("saturated section", "section_area_m2", "m2"),
    ("underflow before the wall", "underflow_m3_per_day", "m3/day"),
    ("held behind the wall, at most", "storage_m3", "m3"),
    ("through sound clay, at most", "leakage_m3_per_day", "m3/day"),
)


def screen_text(
    result: dict[str, Any], *, name: str | None = None, stream: str | None = None
) -> str:
    """Give the text of a result as `as_json` makes it.

    Parameters
    ----------
    result
        The JSON document of an appraisal.
    name, stream
        Names of the site and its stream, where known.
    """
    title = " ".join(part for part in (result["site"], name) if part)
    if stream:
        title += f", stream {stream}"
    blocks = [
        [title, f"computed {result['on']}, method {result['method']}"],
        _cautions(result["cautions"]),
        _rock(result["rock"]),
        _wall(result["wall"]),
        _quantities(result["quantities"], result["estimate"]),
        _money(result["estimate"], known=result["wall"] is not None),
        _water(result["water"]),
        [CLOSING_SENTENCE],
    ]
    return "\n\n".join("\n".join(block) for block in blocks if block) + "\n"


def _cautions(cautions: list[dict[str, str]]) -> list[str]:
    lines = ["CAUTIONS"] if cautions else []
    for one in cautions:
        head = f"  {WORDS[one['level']]:<6}"
        lines += wrap(one["text"], WIDTH, initial_indent=head, subsequent_indent=" " * len(head))
    return [*lines, f"  {CLOSING_SENTENCE}"] if lines else []


def _rock(rock: dict[str, Any]) -> list[str]:
    lines = [f"ROCK LINE: {SOURCES[rock['source']]}"]
    if rock["line"]:
        lines.append(f"  {'offset m':>9} {'rock m':>9} {'10 % m':>9} {'90 % m':>9}")
    lines += [
        f"  {point['offset_m']:>9.2f} {point['level_m']:>9.2f}"
        f" {_number(point['low_m'], 2, '-'):>9} {_number(point['high_m'], 2, '-'):>9}"
        for point in rock["line"]
    ]
    for kind, read in (
        *(("sounding", one) for one in rock["soundings"]),
        *(("refraction", one) for one in rock["refraction"]),
    ):
        first, *rest = depth_lines(read)
        lines.append(f"  {kind} {read['label']} at {_number(read['offset_m'], 1)} m: {first}")
        lines += [f"    {line}" for line in rest]
    return lines


def _wall(wall: dict[str, Any] | None) -> list[str]:
    if wall is None:
        return [f"WALL: {NOT_KNOWN}"]
    lines = ["WALL"]
    for words, key, unit in WALL_ROWS:
        state = ""
        if key in ("left_end_m", "right_end_m"):
            side = key.removesuffix("_end_m")
            state = "  closed on rock" if wall["closed"][side] else "  OPEN: rock not reached"
        lines.append(f"  {words:<42}{wall[key]:>12.2f} {unit}{state}")
    return lines


def _quantities(quantities: list[dict] | None, estimate: dict | None) -> list[str]:
    if quantities is None:
        return [f"QUANTITIES: {NOT_KNOWN}"]
    if estimate is not None:
        return []
    rows = [
        f"  {_item(one):<34}{_number(one['quantity'], 2):>14} {one['unit']}" for one in quantities
    ]
    return ["QUANTITIES", *rows]


def _money(estimate: dict[str, Any] | None, *, known: bool) -> list[str]:
    if estimate is None:
        return ["ESTIMATE: no rate schedule was given" if known else f"ESTIMATE: {NOT_KNOWN}"]
    state = "" if estimate["complete"] else ", INCOMPLETE"
    lines = [
        f"QUANTITIES AND ESTIMATE in {estimate['currency']}{state}",
        f"  {'item':<28}{'quantity':>12} {'unit':<6}{'rate':>12}{'amount':>16}",
    ]
    lines += [
        f"  {_item(line):<28}{_known(line['quantity']):>12} {line['unit']:<6}"
        f"{_known(line['rate']):>12}{_known(line['amount']):>16}"
        for line in estimate["lines"]
    ]
    sums = (
        ("subtotal", "subtotal"),
        ("contingency", "contingency"),
        ("overhead", "overhead"),
        ("total", "total"),
        ("for sanction, rounded up", "sanction"),
    )
    lines += [f"  {words:<60}{_known(estimate[key]):>16}" for words, key in sums]
    notes = [*_spread(estimate), estimate["not_included"]]
    return lines + [f"  {line}" for note in notes for line in wrap(note, WIDTH - 2)]


def _spread(estimate: dict[str, Any]) -> list[str]:
    low, middle, high = (estimate[f"total_p{percent}"] for percent in (10, 50, 90))
    said = [f"P10, P50, P90: {estimate['spread_note']}"]
    if middle is not None:
        said = [f"total at P10 {low}, P50 {middle}, P90 {high}"]
    if estimate["open_flank_share"] is None:
        return said
    share = (
        f"a flank opens in {100 * estimate['open_flank_share']:.0f} of 100 draws of the rock line"
    )
    return [*said, share if middle is None else f"{share}; their cost is a lower bound"]


def _water(water: dict[str, Any]) -> list[str]:
    lines = ["WATER"]
    for words, key, unit in WATER_ROWS:
        value = water[key]
        if value is None:
            lines += wrap(
                f"{words}: {NOT_KNOWN}, {water['reasons'].get(key, '')}",
                WIDTH,
                initial_indent="  ",
                subsequent_indent="    ",
            )
        else:
            lines.append(f"  {words:<42}{value:>12.{2 if value >= 1 else 4}f} {unit}")
    return lines


def _item(line: dict[str, Any]) -> str:
    if line["from_m"] is None:
        return line["item"]
    return f"{line['item']} {line['from_m']:.1f}-{line['to_m']:.1f} m"


def _known(text: str | None) -> str:
    return NOT_KNOWN if text is None else text


def _number(value: float | None, places: int, otherwise: str = NOT_KNOWN) -> str:
    return otherwise if value is None else f"{value:.{places}f}"
