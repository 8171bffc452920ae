"""The result of an appraisal as one JSON document; its keys are an interface and only ever grow.

Keys are always present. What is not known is null, never zero, and a caution says why. Money is a
string with two decimals.
"""

from __future__ import annotations

from dataclasses import asdict
from typing import TYPE_CHECKING, Any, Final

from costing.price.abstract import NOT_INCLUDED
from costing.price.money import money_text
from structures.documents.sounding_result import refusal_json, sounding_json

if TYPE_CHECKING:
    from decimal import Decimal

    from costing.appraisal import Appraisal
    from costing.price.abstract import Abstract, Line
    from costing.risk import Spread
    from structures.ground.refraction import RefractionReading
    from structures.ground.rock_line import RockLine
    from structures.takeoff.quantity import Quantity
    from structures.takeoff.takings import Takings
    from structures.wall.wall import Wall
    from structures.water.water import Water

WALL_KEYS: Final = (
    "bed_level_m",
    "crest_level_m",
    "closing_level_m",
    "left_end_m",
    "right_end_m",
    "length_m",
    "face_area_m2",
    "face_above_rock_m2",
    "greatest_height_m",
    "greatest_depth_m",
    "greatest_depth_to_key_m",
)
SUMS: Final = ("subtotal", "contingency", "overhead", "total", "sanction")
WATER_KEYS: Final = (
    "section_area_m2",
    "underflow_m3_per_day",
    "storage_m3",
    "leakage_m3_per_day",
)


def as_json(appraisal: Appraisal) -> dict[str, Any]:
    """Give the result as plain values that the json library writes as they are.

    Source: the interface of `appraise --json`.
    """
    design, estimate = appraisal.design, appraisal.estimate
    return {
        "site": appraisal.pack.site.code,
        "rock": {
            "source": appraisal.rock.source,
            "line": _line(appraisal.rock),
            "soundings": [sounding_json(one) for one in appraisal.soundings],
            "refraction": [refraction_json(one) for one in appraisal.refraction],
            "evidence": [asdict(one) for one in appraisal.rock.evidence],
            "seed": appraisal.rock.seed,
        },
        "wall": None if design is None else _wall(design.wall),
        "quantities": None if design is None else [_quantity(one) for one in design.quantities],
        "clay_to_dig": None if design is None else _clay(design.takings),
        "estimate": None if estimate is None else _estimate(estimate, appraisal),
        "water": _water(appraisal.water),
        "cautions": [
            {"code": one.code, "level": one.level, "text": one.text} for one in appraisal.cautions
        ],
        "method": appraisal.method,
        "digest": appraisal.digest,
        "on": appraisal.on.isoformat(),
    }


def _line(rock: RockLine) -> list[dict[str, float | None]]:
    """Give the line point by point; a given line has no spread."""
    names = ("offset_m", "level_m", "sd_m", "low_m", "high_m")
    nothing = [None] * rock.offset_m.size
    columns = (getattr(rock, name) for name in names)
    lists = (nothing if column is None else column.tolist() for column in columns)
    return [dict(zip(names, row, strict=True)) for row in zip(*lists, strict=True)]


def refraction_json(read: RefractionReading) -> dict[str, Any]:
    """Give one element of `rock.refraction`; a refused line has null depths and says why."""
    return asdict(read) | {"refusal": refusal_json(read.refusal)}


def _wall(wall: Wall) -> dict[str, Any]:
    return {key: getattr(wall, key) for key in WALL_KEYS} | {
        "closed": {"left": wall.closed_left, "right": wall.closed_right},
        "bars": [asdict(bar) for bar in wall.bars],
        "low_ground": [asdict(low) for low in wall.low_ground],
    }


def _quantity(quantity: Quantity) -> dict[str, Any]:
    return {
        "item": quantity.item,
        "from_m": quantity.from_m,
        "to_m": quantity.to_m,
        "unit": quantity.unit,
        "quantity": quantity.quantity,
        "working": quantity.working,
    }


def _clay(takings: Takings) -> dict[str, float]:
    """Give the clay at the borrow and on carts, which no item measures (handbook 6.1)."""
    return {
        "borrow_m3": float(takings.works.clay_borrow_m3[0]),
        "loose_m3": float(takings.works.clay_loose_m3[0]),
    }


def _estimate(estimate: Abstract, appraisal: Appraisal) -> dict[str, Any]:
    return {
        "currency": estimate.currency,
        "complete": appraisal.complete,
        "lines": [_estimate_line(line) for line in estimate.lines],
        **{key: _money(getattr(estimate, key)) for key in SUMS},
        **_spread(appraisal.spread),
        "spread_note": appraisal.spread_note,
        "not_included": NOT_INCLUDED,
    }


def _estimate_line(line: Line) -> dict[str, Any]:
    return {
        "item": line.item,
        "from_m": line.from_m,
        "to_m": line.to_m,
        "unit": line.unit,
        "quantity": _money(line.quantity),
        "rate": _money(line.rate),
        "amount": _money(line.amount),
    }


def _spread(spread: Spread | None) -> dict[str, Any]:
    keys = {"total_p10": "p10", "total_p50": "p50", "total_p90": "p90"}
    if spread is None:
        return dict.fromkeys((*keys, "open_flank_share", "draws"))
    percentiles = {key: _money(getattr(spread, name)) for key, name in keys.items()}
    return percentiles | {
        "open_flank_share": spread.open_flank_share,
        "draws": spread.draws,
    }


def _water(water: Water) -> dict[str, Any]:
    return {key: getattr(water, key) for key in WATER_KEYS} | {"reasons": dict(water.reasons)}


def _money(value: Decimal | None) -> str | None:
    return None if value is None else money_text(value)
