"""Water that the wall keeps upstream: between the former water table and a level one."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.water.bounds import insist_not_negative, insist_positive

if TYPE_CHECKING:
    from structures.water.section_area import Bands


def storage_m3(
    section: Bands,
    *,
    from_m: float,
    to_m: float,
    bed_slope: float,
    specific_yield: float,
) -> float:
    """Storage gained in a valley of one section, the bed rising upstream.

    Source: handbook 9.9, V = (Sy/I) * integral of A(z) dz, with A(z) the area between the former
    level and z: going upstream the ground, the rock and the former water table rise together under
    a new water table taken level. An upper bound, as the true one slopes. Clipped to below ground
    and above rock.

    Parameters
    ----------
    section
        Pieces between rock and ground at the wall.
    from_m
        Former water level at the wall.
    to_m
        Crest of the wall; at or below the former level nothing is gained.
    bed_slope
        Fall of the bed along the stream.
    specific_yield
        Water that drains out of a volume of sand.

    Raises
    ------
    ValueError
        If the bed slope is not above zero, or the specific yield is negative.
    """
    insist_positive(bed_slope=bed_slope)
    insist_not_negative(specific_yield=specific_yield)
    if to_m <= from_m:
        return 0.0
    held = section.area_summed_m3(from_m, to_m)
    before = section.area_below_m2(from_m) * (to_m - from_m)
    return specific_yield / bed_slope * max(0.0, held - before)  # never a last bit below nothing
