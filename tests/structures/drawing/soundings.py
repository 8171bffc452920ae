"""Soundings to draw: handbook table 2 with its model, and one that gives no depth."""

from __future__ import annotations

import numpy as np

from structures.drawing.sounding_view import SoundingView

# Handbook table 2 (200/40/1000 ohm m, thicknesses 2 and 6 m), first eight readings and the last.
AB2 = np.array([1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0, 10.0, 10.0, 100.0])
MN2 = np.array([0.5] * 8 + [2.5, 10.0])
COMPUTED = np.array(
    (
        190.832362,
        180.148128,
        151.362163,
        122.092585,
        98.976746,
        83.364289,
        69.635646,
        69.386256,
        70.369479,
        404.215462,
    )
)


def table_2(**changes):
    """Readings 3 % over the computed values; rock at 8 m, range as the handbook prints it."""
    parts = {
        "label": "S1",
        "array": "schlumberger",
        "ab2_m": AB2,
        "mn2_m": MN2,
        "observed_ohm_m": 1.03 * COMPUTED,
        "noise": np.full(AB2.size, 0.03),
        "computed_ohm_m": COMPUTED,
        "bottom_m": np.array([2.0, 8.0]),
        "resistivity_ohm_m": np.array([200.0, 40.0, 1000.0]),
        "rock_depth_m": 8.0,
        "rock_low_m": 6.5,
        "rock_high_m": 8.9,
    }
    return SoundingView(**{**parts, **changes})


def unread():
    """A Wenner sounding without rock."""
    a = np.array([1.0, 2.0, 4.0, 8.0, 16.0, 32.0, 64.0])
    return table_2(
        label="S2 <नेर>",
        array="wenner",
        ab2_m=1.5 * a,
        mn2_m=0.5 * a,
        observed_ohm_m=np.array([1200.0, 900.0, 500.0, 50.0, 12.0, 11.0, 15.0]),
        noise=np.full(a.size, 0.05),
        computed_ohm_m=None,
        bottom_m=np.array([]),
        resistivity_ohm_m=np.array([]),
        rock_depth_m=None,
        rock_low_m=None,
        rock_high_m=None,
        refusal="the curve does not show rock. Soil may go deeper than the spread reaches.",
    )
