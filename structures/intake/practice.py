"""The defaults in force beside those of the wall, as one record that the calculations are handed.

A command without a database computes with the handbook's own; an office hands down what it has set.
"""

from __future__ import annotations

from dataclasses import asdict, dataclass, fields
from datetime import date
from typing import TYPE_CHECKING, Any, Final

from structures.intake.defaults import EVERY

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.intake.defaults import Default


def _of(key: str) -> float:
    return EVERY[key].value


@dataclass(frozen=True, slots=True)
class Decision:
    """Who decided a default of the licensed engineer: it is printed where the default counted."""

    key: str
    value: float
    name: str
    licence: str
    on: date
    reason: str


@dataclass(frozen=True, slots=True)
class Practice:
    """One value for each default of handbook 12 that an appraisal takes beside the wall's.

    Fields are named like the keys of the defaults. `decisions` names who answers for changed ones,
    those of the wall included.

    Raises
    ------
    ValueError
        If a value lies outside its accepted range.
    """

    sounding_noise: float = _of("sounding_noise")
    sounding_segment_sd: float = _of("sounding_segment_sd")
    sounding_chi_square: float = _of("sounding_chi_square")
    sounding_starts: int = int(_of("sounding_starts"))
    rock_least_ohm_m: float = _of("rock_least_ohm_m")
    rock_least_ratio: float = _of("rock_least_ratio")
    rock_share: float = _of("rock_share")
    rock_range_m: float = _of("rock_range_m")
    rock_least_sill_m2: float = _of("rock_least_sill_m2")
    reciprocity_ms: float = _of("reciprocity_ms")
    se_pit_m: float = _of("se_pit_m")
    se_core_m: float = _of("se_core_m")
    se_refraction_m: float = _of("se_refraction_m")
    se_refraction_share: float = _of("se_refraction_share")
    se_sounding_m: float = _of("se_sounding_m")
    se_sounding_share: float = _of("se_sounding_share")
    specific_yield: float = _of("specific_yield")
    clay_k_m_per_s: float = _of("clay_k_m_per_s")
    sichardt_c: float = _of("sichardt_c")
    first_stage_factor: float = _of("first_stage_factor")
    drawdown_hours: float = _of("drawdown_hours")
    pump_m3_per_hour: float = _of("pump_m3_per_hour")
    depth_without_entry_m: float = _of("depth_without_entry_m")
    licensed_depth_m: float = _of("licensed_depth_m")
    decisions: tuple[Decision, ...] = ()

    def __post_init__(self) -> None:
        for key in KEYS:
            default, value = EVERY[key], getattr(self, key)
            if not default.low <= value <= default.high:
                raise ValueError(
                    f"{default.words}: {value:g}, accepted {default.low:g} to {default.high:g}"
                )
            if default.whole and value != int(value):
                raise ValueError(f"{default.words}: {value:g} is not a whole number")

    @property
    def changed(self) -> tuple[tuple[Default, float], ...]:
        """What differs from the handbook, in the order of the fields."""
        values = ((EVERY[key], getattr(self, key)) for key in KEYS)
        return tuple((default, value) for default, value in values if value != default.value)

    def decision(self, key: str) -> Decision | None:
        """Who decided a default; None where nobody is named."""
        return next((one for one in self.decisions if one.key == key), None)


KEYS: Final = tuple(one.name for one in fields(Practice) if one.name in EVERY)
HANDBOOK: Final = Practice()


def make_practice(values: Mapping[str, float], decisions: tuple[Decision, ...] = ()) -> Practice:
    """Put values in the place of the handbook's; keys that no appraisal takes are passed over.

    Raises
    ------
    ValueError
        If a value lies outside its accepted range.
    """
    taken = {
        key: int(value) if EVERY[key].whole and value == int(value) else value
        for key, value in values.items()
        if key in KEYS
    }
    return Practice(**taken, decisions=decisions)


def practice_document(practice: Practice) -> dict[str, Any]:
    """Give what differs from the handbook, and who decided it, as plain JSON values."""
    return {
        "values": {default.key: value for default, value in practice.changed},
        "decisions": [asdict(one) | {"on": one.on.isoformat()} for one in practice.decisions],
    }


def practice_of(document: Mapping[str, Any]) -> Practice:
    """Give a practice back from the document of one."""
    decisions = (
        Decision(**{**one, "on": date.fromisoformat(one["on"])}) for one in document["decisions"]
    )
    return make_practice(document["values"], tuple(decisions))
