"""Clay: what its tests say, and whether it may go into a wall as far as they reach.

Source: handbook section 7. No test clears clay of being dispersive but a laboratory's; the words
here are "not accepted" and "no reason against it found", never "good".
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from structures.errors import Finding

A_LINE: Final = (0.73, 20.0)  # slope and foot of PI over LL, handbook 7.2
UPPER_LINE: Final = (0.9, 8.0)  # handbook 7.2
MEDIUM_PERCENT: Final = 35.0  # liquid limit, handbook 7.2
HIGH_PERCENT: Final = 50.0
STILL_FAILS: Final = 0.1  # chance left that the share of failing clay is larger, handbook 7.9
WHERE: Final = "clay test"


@dataclass(frozen=True, slots=True)
class ClayLimits:
    """What is asked of clay; the defaults are those of handbook 7.10 and 12."""

    liquid_limit_percent: float = 50.0  # above
    permeability_m_per_s: float = 1e-8  # at most


@dataclass(frozen=True, slots=True)
class ClayResult:
    """One set of tests; None is not tested. Contents and limits in per cent of the dry mass."""

    liquid_limit_percent: float | None = None
    plastic_limit_percent: float | None = None
    water_content_percent: float | None = None
    permeability_m_per_s: float | None = None
    crumb_reaction: bool | None = None
    hand_roll_holds: bool | None = None


STANDARD: Final = ClayLimits()
TESTS: Final = {
    "liquid_limit_percent": "liquid limit",
    "plastic_limit_percent": "plastic limit",
    "permeability_m_per_s": "permeability",
    "crumb_reaction": "crumb test",
    "hand_roll_holds": "hand roll",
}


def plasticity_index_percent(liquid_limit_percent: float, plastic_limit_percent: float) -> float:
    """PI = LL - PL. Source: handbook 7.2."""
    return liquid_limit_percent - plastic_limit_percent


def a_line_percent(liquid_limit_percent: float) -> float:
    """Plasticity index of the A-line. Source: handbook 7.2."""
    return A_LINE[0] * (liquid_limit_percent - A_LINE[1])


def upper_line_percent(liquid_limit_percent: float) -> float:
    """Plasticity index that no soil passes. Source: handbook 7.2."""
    return UPPER_LINE[0] * (liquid_limit_percent - UPPER_LINE[1])


def plasticity(liquid_limit_percent: float) -> str:
    """Class of plasticity by the liquid limit. Source: handbook 7.2."""
    if liquid_limit_percent > HIGH_PERCENT:
        return "high"
    return "medium" if liquid_limit_percent >= MEDIUM_PERCENT else "low"


def failing_share_most(passes: int) -> float:
    """Share of failing clay that so many passes in a row leave open, with 90 % confidence.

    Source: handbook 7.9, 1 - 0.1^(1/n).

    Raises
    ------
    ValueError
        If nothing was tested.
    """
    if passes < 1:
        raise ValueError("no test says nothing")
    return 1.0 - STILL_FAILS ** (1.0 / passes)


def judge_clay(test: ClayResult, limits: ClayLimits = STANDARD) -> tuple[Finding, ...]:
    """Say why a clay is not accepted, and what was not tested; () only where nothing is missing.

    Source: handbook 7.2, 7.8, 7.10.
    """
    found: list[Finding] = []
    liquid, plastic = test.liquid_limit_percent, test.plastic_limit_percent
    if liquid is not None and liquid <= limits.liquid_limit_percent:
        found.append(
            _against(
                "liquid_limit_percent",
                f"Liquid limit {liquid:g} %: more than {limits.liquid_limit_percent:g} is asked for.",
                "Look for another source.",
            )
        )
    if liquid is not None and plastic is not None:
        found += _plastic(liquid, plastic)
    k = test.permeability_m_per_s
    if k is not None and k > limits.permeability_m_per_s:
        found.append(
            _against(
                "permeability_m_per_s",
                f"Permeability {k:g} m/s: at most {limits.permeability_m_per_s:g} is asked for.",
                "Take the layer out and tread it anew, wetter or thinner; test again.",
            )
        )
    if test.crumb_reaction:
        found.append(
            _against(
                "crumb_reaction",
                "The crumb clouded the water: the clay is probably dispersive.",
                "Do not use it until a laboratory has cleared it.",
            )
        )
    if test.hand_roll_holds is False:
        found.append(
            _against(
                "hand_roll_holds",
                "The hand roll does not hold.",
                "Wet or dry it towards the plastic limit and try again.",
            )
        )
    return (*found, *_not_tested(test))


def _plastic(liquid: float, plastic: float) -> list[Finding]:
    index = plasticity_index_percent(liquid, plastic)
    if index > upper_line_percent(liquid):
        what = f"Plasticity index {index:g} % at liquid limit {liquid:g} % is more than soil has."
        return [_against("plastic_limit_percent", what, "A slip of the test: repeat both limits.")]
    if index <= a_line_percent(liquid):
        what = (
            f"Plasticity index {index:g} % lies below the A-line ({a_line_percent(liquid):.2f} %): "
            "silt, or clay with silt."
        )
        return [_against("plastic_limit_percent", what, "Look for another source.")]
    return []


def _not_tested(test: ClayResult) -> list[Finding]:
    lacking = [words for key, words in TESTS.items() if getattr(test, key) is None]
    found = []
    if lacking:
        what = f"Not tested here: {', '.join(lacking)}."
        found.append(Finding(WHERE, "", what, "Acceptance waits for the whole set.", level="note"))
    if test.crumb_reaction is False:
        what = "A clear crumb test does not clear the clay of being dispersive."
        found.append(Finding(WHERE, "crumb_reaction", what, "A laboratory decides.", level="note"))
    return found


def _against(field: str, what: str, remedy: str) -> Finding:
    return Finding(WHERE, field, f"Not accepted. {what}", remedy, level="hold")
