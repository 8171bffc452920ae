"""Water that passes a wall: through sound clay, under it, round its end, through a hole in the film.

A wall either reaches rock or hardly works: leakage is never proportional to the open area.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from scipy.special import ellipkm1

from structures.water.bounds import insist_not_negative, insist_positive
from structures.water.section_area import Bands

if TYPE_CHECKING:
    from structures.wall.cutoff import Cutoff


def face_of(cutoff: Cutoff) -> Bands:
    """Face of the wall of one rock line, key included, as pieces between bottom and top.

    Source: handbook 5.1 and 5.3.

    Raises
    ------
    ValueError
        If the section holds more than one rock line.
    """
    if cutoff.section.draws != 1:
        raise ValueError(f"one rock line is asked for, got {cutoff.section.draws} draws")
    left, right, there = cutoff.left, cutoff.right, cutoff.stands[0]
    key_m = cutoff.section.key_m
    return Bands(
        cutoff.width_m[0][there],
        left.rock_m[0][there] - key_m,
        right.rock_m[0][there] - key_m,
        left.top_m[0][there],
        right.top_m[0][there],
    )


def clay_leakage_m3_per_day(
    face: Bands,
    *,
    upstream_m: float,
    downstream_m: float,
    thickness_m: float,
    clay_k_m_per_day: float,
) -> float:
    """Flow through a sound clay wall between two water levels.

    Source: handbook 9.3, (Kc/t) [dh * A_below + integral of (upstream level - z) dA between the
    levels]. Integrated by parts the bracket is the integral of the face area below z over the
    levels z from downstream to upstream, which is taken exactly. With the lower level under the
    wall's foot only the wetted face counts.

    Parameters
    ----------
    face
        Pieces of the face between bottom and top.
    upstream_m, downstream_m
        Water levels; with the upstream one no higher nothing passes.
    thickness_m
        Thickness of the clay.
    clay_k_m_per_day
        Conductivity of the clay in place.

    Raises
    ------
    ValueError
        If the thickness is not above zero or the conductivity is negative.
    """
    insist_positive(thickness_m=thickness_m)
    insist_not_negative(clay_k_m_per_day=clay_k_m_per_day)
    if upstream_m <= downstream_m:
        return 0.0
    return clay_k_m_per_day / thickness_m * face.area_summed_m3(downstream_m, upstream_m)


def most_clay_leakage_m3_per_day(
    face_area_m2: float, head_m: float, thickness_m: float, clay_k_m_per_day: float
) -> float:
    """Upper bound of the flow through sound clay: the whole face at the full head.

    Source: handbook 9.3 and check value 9.b.
    """
    insist_positive(thickness_m=thickness_m)
    insist_not_negative(area=face_area_m2, head=head_m, clay_k_m_per_day=clay_k_m_per_day)
    return clay_k_m_per_day / thickness_m * head_m * face_area_m2


def surface_seepage_ratio(layer_m: float, wall_depth_m: float) -> float:
    """Flow under a wall, q/(K h) per metre, with surface water standing on both sides.

    Source: handbook 9.4 (a), K'(k)/(2 K(k)) with the modulus k = sin(pi s/(2 T)). Not for a
    subsurface dam with underflow along the layer; that is `slot_flow`.

    Parameters
    ----------
    layer_m
        Thickness of the layer T.
    wall_depth_m
        Depth of the wall s, between nothing and the whole layer.

    Raises
    ------
    ValueError
        If the wall does not end inside the layer.
    """
    insist_positive(layer_m=layer_m, wall_depth_m=wall_depth_m, open_m=layer_m - wall_depth_m)
    angle = 0.5 * np.pi * wall_depth_m / layer_m
    # Of k^2 and its complement each is formed by itself: 1 - k^2 loses the digits that count.
    complementary = ellipkm1(np.sin(angle) ** 2)
    complete = ellipkm1(np.cos(angle) ** 2)
    return float(complementary / (2.0 * complete))


def slot_path_m(layer_m: float, closed_m: float) -> float:
    """Extra length of path that a thin wall with a slot left open is worth.

    Source: handbook 9.4 (b), dL = (4 T/pi) ln sec(pi b/(2 T)).

    Raises
    ------
    ValueError
        If the closed part is negative or not smaller than the layer.
    """
    insist_positive(layer_m=layer_m, open_m=layer_m - closed_m)
    insist_not_negative(closed_m=closed_m)
    return float(-4.0 * layer_m / np.pi * np.log(np.cos(0.5 * np.pi * closed_m / layer_m)))


@dataclass(frozen=True, slots=True)
class SlotFlow:
    """What still passes a slot, as a share of the flow before; read it only beside L/T."""

    passing_share: float
    reach_over_layer: float
    extra_path_m: float


def slot_flow(layer_m: float, closed_m: float, reach_m: float) -> SlotFlow:
    """Share of the underflow that still passes a wall which leaves a slot.

    Source: handbook 9.4 (b) and 9.5 under the wall; 9.6 round its open end, in plan, with the
    width of the aquifer for `layer_m` and the closed width for `closed_m`.

    Parameters
    ----------
    layer_m
        Thickness of the layer T, or width of the aquifer.
    closed_m
        Part of it that the wall closes, b.
    reach_m
        Length L along the flow over which the head drop is fixed.

    Raises
    ------
    ValueError
        If a length is not above zero or the wall closes the whole layer.
    """
    insist_positive(reach_m=reach_m)
    extra = slot_path_m(layer_m, closed_m)
    return SlotFlow(reach_m / (reach_m + extra), reach_m / layer_m, extra)


def film_hole_m3_per_day(
    diameter_m: float, head_m: float, k_before_m_per_day: float, k_behind_m_per_day: float
) -> float:
    """Flow through a round hole in the film between two materials.

    Source: handbook 9.7; with the same material on both sides K d dh.

    Parameters
    ----------
    diameter_m, head_m
        Diameter of the hole and head over it.
    k_before_m_per_day, k_behind_m_per_day
        Conductivities of the materials against the film.

    Raises
    ------
    ValueError
        If the head is negative or another value is not above zero.
    """
    insist_positive(diameter_m=diameter_m, before=k_before_m_per_day, behind=k_behind_m_per_day)
    insist_not_negative(head_m=head_m)
    resistance = 1.0 / k_before_m_per_day + 1.0 / k_behind_m_per_day
    return head_m * 2.0 * diameter_m / resistance
