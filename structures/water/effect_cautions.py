"""Which cautions an effect carries: why it is not known, or what makes it doubtful."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.life.cautions import caution
from structures.units import DAYS_PER_YEAR

if TYPE_CHECKING:
    from structures.intake.rain import Rain
    from structures.life.cautions import Caution
    from structures.water.pairs import Pairs
    from structures.water.rivals import Rivals
    from structures.water.rules import EffectRules

UNLIKE_RAIN: Final = 0.20  # share by which the rain of both sides may differ (field practice VR-03)
SURE_TREND_P: Final = 0.01  # serial correlation makes p too small, so a strict one (project choice)


def shortages(pairs: Pairs, rules: EffectRules) -> tuple[Caution, ...]:
    """Say why nothing can be measured; empty where it can.

    Source: handbook 10.11, field practice VR-01 and VR-02.
    """
    told = []
    if not pairs.affected_wells:
        told.append(caution("effect-no-affected", months=rules.months_of_full_year))
    if not pairs.control_wells:
        told.append(caution("effect-no-control", months=rules.months_of_full_year))
    years = len(pairs.full_before), len(pairs.full_after)
    if min(years) < rules.least_full_years:
        told.append(
            caution(
                "effect-too-short",
                before=years[0],
                after=years[1],
                least=rules.least_full_years,
                months=rules.months_of_full_year,
            )
        )
    after = int((pairs.after & ~pairs.bounded).sum())
    before = int((~pairs.after & ~pairs.bounded).sum())
    if min(before, after) < rules.least_pairs:
        told.append(
            caution("effect-few-pairs", before=before, after=after, least=rules.least_pairs)
        )
    return tuple(told)


def doubts(
    pairs: Pairs, rivals: Rivals, rain: Rain | None, rules: EffectRules
) -> tuple[Caution, ...]:
    """Say what makes a measured effect doubtful."""
    told = _rain_doubts(pairs, rivals, rain)
    told += [
        caution("effect-mark-moved", well=one.well, change_m=one.change_m, day=one.day.isoformat())
        for one in rivals.marks
    ]
    if rivals.jump is not None:
        day, size_m = rivals.jump.day.isoformat(), rivals.jump.size_m
        told.append(caution("effect-jump", day=day, size_m=size_m))
    if len(pairs.control_wells) == 1:
        told.append(caution("effect-one-control", well=pairs.control_wells[0]))
    trend = rivals.trend
    if trend is not None and trend.p_two_sided < SURE_TREND_P:
        span = pairs.middle_day[pairs.after].mean() - pairs.middle_day[~pairs.after].mean()
        drift_m = trend.m_per_year * span / DAYS_PER_YEAR
        if abs(drift_m) >= rules.least_effect_m / 2.0:
            told.append(
                caution("effect-trend-before", m_per_year=trend.m_per_year, drift_m=drift_m)
            )
    return tuple(told)


def _rain_doubts(pairs: Pairs, rivals: Rivals, rain: Rain | None) -> list[Caution]:
    if rain is None:
        return [caution("effect-rain-not-given")]
    told = []
    if rivals.rain_in_effect is None:
        years = len(pairs.full_before), len(pairs.full_after)
        told.append(caution("effect-rain-too-short", before=years[0], after=years[1]))
    if rivals.rain_mm is not None:
        before_mm, after_mm = rivals.rain_mm
        if abs(after_mm - before_mm) > UNLIKE_RAIN * max(before_mm, after_mm):
            told.append(caution("effect-rain-unlike", before_mm=before_mm, after_mm=after_mm))
    return told
