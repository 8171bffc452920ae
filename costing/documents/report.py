"""The report of one appraisal on A4: answer, cautions, drawing, figures, price, water, soundings."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

from costing.documents.drawings import appraised_section, appraised_soundings
from costing.documents.result import refraction_json
from costing.documents.screen import NOT_KNOWN, SOURCES, WALL_ROWS, WATER_ROWS
from costing.documents.wording import (
    amount_words,
    answer,
    day_words,
    item_words,
    not_known,
    rests_on,
    unit_words,
)
from costing.price.abstract import NOT_INCLUDED
from costing.price.money import measured, money_text
from structures.documents.press import press
from structures.documents.sounding_result import depth_lines, sounding_json
from structures.drawing.numbers import section_numbers
from structures.drawing.section import describe, draw_section
from structures.life.cautions import CLOSING_SENTENCE, WORDS

if TYPE_CHECKING:
    from decimal import Decimal

    from costing.appraisal import Appraisal
    from structures.drawing.view import SectionView

SOURCE: Final = Path(__file__).resolve().parent / "report.typ"
DIGEST_SHOWN: Final = 12  # letters of the digest in the title block; the whole stands at the end
SHEET_LINES: Final = 36  # lines of an estimate that one sheet holds with heading and notes
BESIDE: Final = ("water-not-known",)  # cautions that stand in the list of what is not known
STOPPING: Final = ("block", "hold")
SECTION_HEAD: Final = (
    "offset m",
    "ground m",
    "rock 10 % m",
    "rock m",
    "rock 90 % m",
    "top m",
    "bottom m",
    "",
)
OPEN_NOTE: Final = "With an open flank these are figures of the surveyed part only."


def report_pdf(found: Appraisal) -> bytes:
    """Typeset the report of an appraisal.

    Returns
    -------
    bytes
        A PDF on A4, its drawings as vectors; the same appraisal gives the same bytes.
    """
    view = appraised_section(found)
    drawings = {"section.svg": draw_section(view)}
    for place, markup in enumerate(appraised_soundings(found), 1):
        drawings[f"sounding-{place}.svg"] = markup
    source = SOURCE.read_text(encoding="utf-8")
    return press(source, report_data(found, view), made_on=found.on, drawings=drawings)


def report_data(found: Appraisal, view: SectionView) -> dict[str, Any]:
    """Give all that the report prints, as words."""
    site = found.pack.site
    name = " ".join(part for part in (site.code, site.name) if part)
    return {
        "title": f"{name}: appraisal of a subsurface dam",
        "site": name,
        "stream": site.stream or NOT_KNOWN,
        "document": "appraisal of a subsurface dam",
        "date": day_words(found.on),
        "revision": found.digest[:DIGEST_SHOWN],
        "answer": answer(found),
        "unknown": not_known(found),
        "cautions": [
            {"word": WORDS[one.level], "text": one.text, "stops": one.level in STOPPING}
            for one in found.cautions
            if one.code not in BESIDE
        ],
        "closing": CLOSING_SENTENCE,
        "section": _section(view),
        "rock_note": f"Rock line: {SOURCES[found.rock.source]}.",
        "wall": _wall(found),
        "money": _with_length(_money(found)),
        "water": _water(found),
        "soundings": _soundings(found),
        "refraction": _refraction(found),
        "rests_on": rests_on(found),
    }


def _section(view: SectionView) -> dict[str, Any]:
    rows = [
        [
            *(
                "" if value is None else f"{value:.2f}"
                for value in (
                    row.offset_m,
                    row.ground_m,
                    row.rock_low_m,
                    row.rock_m,
                    row.rock_high_m,
                    row.top_m,
                    row.bottom_m,
                )
            ),
            row.note,
        ]
        for row in section_numbers(view)
    ]
    return {"words": describe(view), "head": SECTION_HEAD, "rows": rows}


def _wall(found: Appraisal) -> list[list[str]] | None:
    if found.design is None:
        return None
    wall = found.design.wall
    ends = {"left_end_m": wall.closed_left, "right_end_m": wall.closed_right}
    return [
        [
            words,
            f"{getattr(wall, key):.2f}",
            unit_words(unit),
            {None: "", True: "closed on rock", False: "OPEN: rock not reached"}[ends.get(key)],
        ]
        for words, key, unit in WALL_ROWS
    ]


def _money(found: Appraisal) -> dict[str, Any]:
    """Give the priced lines with their sums; without rates the quantities alone."""
    if found.design is None:
        heading, note = (
            "Quantities and estimate",
            f"Quantities and cost are {NOT_KNOWN}: there is no wall.",
        )
        return {"heading": heading, "head": [], "lines": None, "bold": [], "note": note}
    if found.estimate is None:
        lines = [
            [
                item_words(one),
                NOT_KNOWN if one.quantity is None else f"{measured(one.quantity):f}",
                unit_words(one.unit),
                "",
                "",
            ]
            for one in found.design.quantities
        ]
        head = ("item", "quantity", "unit", "rate", "amount")
        note = "No rate schedule was given; nothing is priced."
        return {"heading": "Quantities", "head": head, "lines": lines, "bold": [], "note": note}
    return _estimate(found)


def _with_length(money: dict[str, Any]) -> dict[str, Any]:
    """Say whether the lines need more than one sheet."""
    return money | {"long": len(money["lines"] or ()) > SHEET_LINES}


def _estimate(found: Appraisal) -> dict[str, Any]:
    estimate, schedule = found.estimate, found.schedule
    lines = [
        [
            item_words(line),
            _known(line.quantity),
            unit_words(line.unit),
            _known(line.rate),
            _known(line.amount),
        ]
        for line in estimate.lines
    ]
    first_sum = len(lines)
    sums = (
        ("subtotal", estimate.subtotal),
        (f"contingency {schedule.contingency_percent:f} %", estimate.contingency),
        (f"overhead {schedule.overhead_percent:f} %", estimate.overhead),
        ("total", estimate.total),
        ("for sanction, rounded up to the next 100", estimate.sanction),
    )
    lines += [[words, "", "", "", _known(value)] for words, value in sums]
    state = "" if found.complete else ", INCOMPLETE"
    return {
        "heading": f"Quantities and estimate in {estimate.currency}{state}",
        "head": ("item", "quantity", "unit", "rate", f"amount {estimate.currency}"),
        "lines": lines,
        "bold": [first_sum, first_sum + 3, first_sum + 4],
        "note": " ".join(
            part for part in (_spread_words(found), _open_words(found), NOT_INCLUDED) if part
        ),
    }


def _spread_words(found: Appraisal) -> str:
    spread = found.spread
    if spread is None or spread.p50 is None:
        return f"P10, P50, P90 of the total: {NOT_KNOWN}, {found.spread_note}."
    low, middle, high = (money_text(one) for one in (spread.p10, spread.p50, spread.p90))
    return (
        f"Total over {spread.draws} draws of the rock line: P10 {low}, P50 {middle}, P90 {high} "
        f"{found.estimate.currency}. A flank opens in {100.0 * spread.open_flank_share:.0f} of 100 "
        "draws; their cost is a lower bound."
    )


def _open_words(found: Appraisal) -> str:
    return "" if found.design.wall.closed else OPEN_NOTE


def _known(value: Decimal | None) -> str:
    return NOT_KNOWN if value is None else money_text(value)


def _water(found: Appraisal) -> list[list[str]]:
    return [
        [
            words,
            amount_words(getattr(found.water, key)),
            unit_words(unit),
            found.water.reasons.get(key, ""),
        ]
        for words, key, unit in WATER_ROWS
    ]


def _soundings(found: Appraisal) -> list[dict[str, str]]:
    return [
        {
            "name": f"sounding-{place}.svg",
            "words": f"Sounding {one.label}",
            "text": " ".join(depth_lines(sounding_json(one))),
            "prior": " ".join(() if one.prior is None else one.prior.sentences()),
        }
        for place, one in enumerate(found.soundings, 1)
    ]


def _refraction(found: Appraisal) -> list[list[str]]:
    return [
        [
            one.label,
            f"{one.offset_m:.2f}",
            ", ".join(f"{velocity:.0f}" for velocity in one.velocities_m_per_s) or NOT_KNOWN,
            " ".join(depth_lines(refraction_json(one))),
        ]
        for one in found.refraction
    ]
