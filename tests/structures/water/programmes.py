"""Invented programmes of readings with a known effect: wells, gaps, pumping, dry wells, seasons."""

from datetime import UTC, date, datetime

import numpy as np

from structures.intake.readings import WellReading

FIRST_YEAR = 2015
EFFECT_M = 0.5


def programme(
    seed,
    *,
    coefficient,
    effect_m=EFFECT_M,
    years=(3, 3),
    wells=(3, 2),
    gaps=0.06,
    pumping=0.05,
    dry=0.0,
    more_swing_m=0.0,
):
    """Monthly readings and the day of completion.

    The difference of affected and control wells wanders with the coefficient from month to month
    (sd 0.20 m); each well reads with an error of 0.05 m. With `dry` the affected wells have their
    bottom at that quantile of what they did before; with `more_swing_m` they swing more by season.
    """
    rng = np.random.default_rng(seed)
    months = 12 * sum(years)
    wander = np.empty(months)
    wander[0] = rng.normal(0, 0.2)
    for place in range(1, months):
        fresh = rng.normal(0, 0.2 * (1 - coefficient**2) ** 0.5)
        wander[place] = coefficient * wander[place - 1] + fresh
    common = 0.2 * rng.normal(0, 0.3, months).cumsum()
    readings = []
    for number in range(sum(wells)):
        role = "affected" if number < wells[0] else "control"
        base_m = rng.uniform(400, 420)
        swing_m = 1.0 + (more_swing_m if role == "affected" else 0.0)
        calendar = [divmod(FIRST_YEAR * 12 + 5 + place, 12) for place in range(months)]
        season = np.array([np.cos(2 * np.pi * (month - 9) / 12) for _, month in calendar])
        level_m = base_m + swing_m * season + common + rng.normal(0, 0.05, months)
        if role == "affected":
            level_m += wander + effect_m * (np.arange(months) >= 12 * years[0])
        bottom_m = -np.inf
        if dry and role == "affected":
            bottom_m = np.quantile(level_m[: 12 * years[0]], dry)
        for (year, month), level in zip(calendar, level_m, strict=True):
            if rng.random() < gaps:
                continue
            state = "pumping" if rng.random() < pumping else "static"
            is_dry = bool(level < bottom_m)
            readings.append(
                WellReading(
                    f"{role[0].upper()}{number}",
                    role,
                    datetime(year, month + 1, int(rng.integers(1, 16)), 7, tzinfo=UTC),
                    state,
                    is_dry,
                    round(base_m + 10 - (bottom_m if is_dry else level), 2),
                    base_m + 10,
                    left_out="" if state == "static" else state,
                )
            )
    return readings, date(FIRST_YEAR + years[0], 6, 1)
