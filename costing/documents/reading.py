"""What a survey says without any price, as plain values that a run keeps and pages show."""

from __future__ import annotations

from dataclasses import asdict, replace
from typing import TYPE_CHECKING, Any, Final

from costing.documents.bundle import figures_of
from costing.documents.drawings import appraised_section
from costing.documents.result import as_json
from structures.documents.sounding_result import sounding_whole_json
from structures.ground.rock import estimate_rock

if TYPE_CHECKING:
    from costing.appraisal import Appraisal

UNPRICED: Final = "rates-not-given"  # a reading is made without rates; that is no doubt of it


def reading_json(found: Appraisal, *, draws: int, seed: int) -> dict[str, Any]:
    """Give appraisal, drawings, tests as drawn, whole soundings, and the line the tests give.

    `estimated` is that line even where another one was settled; empty where no line is known.
    """
    appraisal = as_json(found)
    appraisal["cautions"] = [one for one in appraisal["cautions"] if one["code"] != UNPRICED]
    pairs = zip(found.soundings, found.pack.soundings, strict=True)
    return {
        "appraisal": appraisal,
        "figures": figures_of(found),
        "tests": [asdict(test) for test in appraised_section(found).tests],
        "soundings": [sounding_whole_json(said, sounding) for said, sounding in pairs],
        "estimated": _estimated(found, draws=draws, seed=seed),
    }


def _estimated(found: Appraisal, *, draws: int, seed: int) -> list[dict[str, float]]:
    rock = found.rock
    if rock.source == "given":
        rock = estimate_rock(
            replace(found.pack, rock_line=None),
            soundings=found.soundings,
            refraction=found.refraction,
            draws=draws,
            seed=seed,
            practice=found.practice,
        )
    if rock.source == "none":
        return []
    names = ("offset_m", "level_m", "low_m", "high_m")
    columns = (getattr(rock, name).tolist() for name in names)
    return [dict(zip(names, row, strict=True)) for row in zip(*columns, strict=True)]
