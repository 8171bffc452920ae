"""The drawings and files of one appraisal: the same drawing serves page, file and PDF."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Any, Final

from costing.documents.drawings import appraised_section, appraised_soundings
from costing.documents.estimate_workbook import estimate_xlsx
from costing.documents.report import report_pdf
from costing.documents.result import refraction_json
from structures.documents.sounding_result import depth_lines, sounding_json
from structures.drawing.numbers import section_numbers
from structures.drawing.section import draw_section
from structures.drawing.standalone import standalone

if TYPE_CHECKING:
    from costing.appraisal import Appraisal
    from structures.drawing.view import SectionView

COLUMNS: Final = {
    "offset m": "offset_m",
    "ground m": "ground_m",
    "rock 10 % m": "rock_low_m",
    "rock 50 % m": "rock_m",
    "rock 90 % m": "rock_high_m",
    "top of wall m": "top_m",
    "bottom of key m": "bottom_m",
}
UNSAFE: Final = re.compile(r"[^\w.-]+")


def documents_of(found: Appraisal) -> dict[str, bytes]:
    """Give the files by name: the drawing (SVG), the workbook (XLSX), the report (PDF)."""
    stem = UNSAFE.sub("-", found.pack.site.code).strip(".-") or "site"
    drawing = standalone(draw_section(appraised_section(found)))
    return {
        f"{stem}-section.svg": drawing.encode(),
        f"{stem}-estimate.xlsx": estimate_xlsx(found),
        f"{stem}-report.pdf": report_pdf(found),
    }


def figures_of(found: Appraisal) -> dict[str, Any]:
    """Give the drawings as a page takes them in, with their table twin."""
    view = appraised_section(found)
    sheets = (appraised_soundings(found), appraised_soundings(found, narrow=True))
    drawn = zip(found.soundings, *sheets, strict=True)
    return {
        "wide": draw_section(view),
        "narrow": draw_section(view, name="section-narrow", narrow=True),
        "numbers": {"heads": [*COLUMNS, "what"], "rows": _numbers(view)},
        "soundings": [
            {
                "label": said.label,
                "drawing": wide,
                "narrow": narrow,
                "words": " ".join(depth_lines(sounding_json(said))),
            }
            for said, wide, narrow in drawn
        ],
        "refraction": [
            {"label": said.label, "words": " ".join(depth_lines(refraction_json(said)))}
            for said in found.refraction
        ],
    }


def _numbers(view: SectionView) -> list[list[str]]:
    """Give every row as text; an empty cell is not known there, or no wall."""
    return [
        [*(_cell(getattr(row, name)) for name in COLUMNS.values()), row.note]
        for row in section_numbers(view)
    ]


def _cell(value: float | None) -> str:
    return "" if value is None else f"{value:.2f}"
