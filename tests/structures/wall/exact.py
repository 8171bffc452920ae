"""The wall in exact fractions: a slow route of its own, written from the handbook's sentences.

It shares no formula with the code: pieces are cut at every crossing of handbook 5.9, existence is
judged at their middles, areas by lift come from 5.8 and volumes from Simpson's rule (exact for
polynomials up to the third degree).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import cache, partial
from itertools import pairwise
from math import ceil


def f(value):
    """The decimal that a person wrote, as a fraction."""
    return Fraction(str(value))


def straight(points, x):
    """Straight lines between points, constant outside them."""
    if x <= points[0][0]:
        return points[0][1]
    for (a, za), (b, zb) in pairwise(points):
        if x <= b:
            return za + (zb - za) * (x - a) / (b - a)
    return points[-1][1]


@dataclass
class Exact:
    left_m: Fraction
    right_m: Fraction
    closed_left: bool
    closed_right: bool
    length_m: Fraction
    face_above_rock_m2: Fraction
    face_area_m2: Fraction
    greatest_height_m: Fraction
    greatest_depth_m: Fraction
    lifts_m3: list


class Line:
    """Ground, rock and slope of one case as functions of the offset."""

    def __init__(self, case):
        self.ground = [(f(p.offset_m), f(p.level_m)) for p in case.ground]
        self.rock = [(f(x), f(z)) for x, z in zip(case.rock_x, case.rock_z, strict=True)]
        self.slope = [(f(s.offset_m), f(s.slope)) for s in case.wall.side_slope]
        self.toes = f(case.toes.left_m), f(case.toes.right_m)
        self.first = max(self.ground[0][0], self.rock[0][0])
        self.last = min(self.ground[-1][0], self.rock[-1][0])
        inside = [z for x, z in self.ground if self.toes[0] <= x <= self.toes[1]]
        self.bed = min([straight(self.ground, toe) for toe in self.toes] + inside)
        self.crest = self.bed - f(case.wall.crest_below_bed_m)
        self.g = cache(partial(straight, self.ground))
        self.r = cache(partial(straight, self.rock))

    def depth(self, x):
        return self.g(x) - self.r(x)

    def in_bed(self, x):
        return self.toes[0] < x < self.toes[1]

    def top(self, x, *, bed):
        return self.crest if bed else min(self.bed, self.g(x))

    def nodes(self):
        own = [x for x, _ in self.ground + self.rock + self.slope] + [*self.toes]
        return sorted({x for x in own if self.first <= x <= self.last} | {self.first, self.last})

    def end(self, toe, outward, limit):
        """Handbook 5.5 in words: walk outward from the toe until rock is at the closing level."""
        if not self.first <= toe <= self.last:
            return limit, False
        if self.r(toe) >= self.bed:
            return toe, True
        a = toe
        for b in outward:
            if self.r(b) >= self.bed:
                share = (self.bed - self.r(a)) / (self.r(b) - self.r(a))
                return a + (b - a) * share, True
            a = b
        return limit, False


def exact_ends(line):
    """Left end, is it closed, right end, is it closed."""
    nodes = line.nodes()
    toe_left, toe_right = line.toes
    left, closed_left = line.end(toe_left, [x for x in reversed(nodes) if x < toe_left], line.first)
    right, closed_right = line.end(toe_right, [x for x in nodes if x > toe_right], line.last)
    return left, closed_left, right, closed_right


def exact_wall(case):
    line = Line(case)
    nodes = line.nodes()
    left, closed_left, right, closed_right = exact_ends(line)
    lift = f(case.wall.lift_m)
    deepest = max(line.depth(x) for x in nodes)
    limits = [k * lift for k in range(max(1, ceil(deepest / lift)) + 1)]
    differences = [
        lambda x: line.g(x) - line.bed,
        lambda x: line.r(x) - line.crest,
        lambda x: line.r(x) - line.bed,
        line.depth,
        *[lambda x, limit=limit: line.depth(x) - limit for limit in limits],
    ]
    floor = f(case.wall.thickness_m) + 2 * f(case.wall.bottom_margin_m)

    def band(x, d1, d2):
        depth, slope = line.depth(x), straight(line.slope, x)
        a1, a2 = min(d1, depth), min(d2, depth)
        return floor * (a2 - a1) + slope * ((depth - a1) ** 2 - (depth - a2) ** 2)

    length = face = height = greatest = Fraction(0)
    lifts = [Fraction(0)] * (len(limits) - 1)
    for a, b in _pieces(nodes, differences, left, right):
        middle = (a + b) / 2
        bed = line.in_bed(middle)
        if line.r(middle) >= line.top(middle, bed=bed):
            continue
        length += b - a
        face += (b - a) * (line.top(middle, bed=bed) - line.r(middle))
        height = max(height, *(line.top(x, bed=bed) - line.r(x) for x in (a, b)))
        greatest = max(greatest, line.depth(a), line.depth(b))
        for k, (d1, d2) in enumerate(pairwise(limits)):
            ends_and_middle = band(a, d1, d2) + 4 * band(middle, d1, d2) + band(b, d1, d2)
            lifts[k] += (b - a) * ends_and_middle / 6
    key = f(case.wall.key_m)
    return Exact(
        left_m=left,
        right_m=right,
        closed_left=closed_left,
        closed_right=closed_right,
        length_m=length,
        face_above_rock_m2=face,
        face_area_m2=face + key * length,
        greatest_height_m=height + key if length else Fraction(0),
        greatest_depth_m=greatest,
        lifts_m3=lifts,
    )


def _pieces(nodes, differences, left, right):
    """Pieces between the ends, cut at the nodes and wherever a difference changes its sign."""
    breaks = {x for x in nodes if left <= x <= right} | {left, right}
    for a, b in pairwise(nodes):
        for difference in differences:
            da, db = difference(a), difference(b)
            if da * db < 0:
                breaks.add(a + (b - a) * da / (da - db))
    inside = sorted(x for x in breaks if left <= x <= right)
    return list(pairwise(inside))
