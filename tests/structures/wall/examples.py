"""The worked examples of handbook 13 as records, and sections drawn at random for laws."""

from __future__ import annotations

import json
from dataclasses import dataclass, replace
from pathlib import Path

import pytest
from hypothesis import strategies as st

from structures.intake.pack import GroundPoint, SlopeStation, Toes, WallSettings

ORACLE = json.loads(
    (Path(__file__).parents[2] / "oracles" / "examples.json").read_text(encoding="utf-8")
)


@dataclass(frozen=True)
class Case:
    """What a wall is made of; `rock` as offsets and levels."""

    ground: tuple[GroundPoint, ...]
    toes: Toes
    rock_x: tuple[float, ...]
    rock_z: tuple[float, ...]
    wall: WallSettings

    @property
    def parts(self):
        return self.ground, self.toes, self.rock_x, self.rock_z, self.wall

    def with_rock(self, levels):
        return replace(self, rock_z=tuple(levels))

    def mirrored(self):
        """Seen from the other bank: every offset x becomes (last ground offset) - x."""
        far = self.ground[-1].offset_m

        def turn(x):
            return round(far - x, 6)

        return Case(
            ground=tuple(replace(p, offset_m=turn(p.offset_m)) for p in reversed(self.ground)),
            toes=Toes(turn(self.toes.right_m), turn(self.toes.left_m)),
            rock_x=tuple(turn(x) for x in reversed(self.rock_x)),
            rock_z=tuple(reversed(self.rock_z)),
            wall=replace(
                self.wall,
                side_slope=tuple(
                    SlopeStation(turn(s.offset_m), s.slope) for s in reversed(self.wall.side_slope)
                ),
            ),
        )


def example(name):
    """Example A, B or C of handbook 13."""
    given = ORACLE["examples"][name]
    slopes = given["wall"]["side_slope"]
    stations = slopes if isinstance(slopes, list) else [{"offset_m": 0.0, "slope": slopes}]
    return Case(
        ground=tuple(GroundPoint(**point) for point in given["ground"]),
        toes=Toes(**given["toes"]),
        rock_x=tuple(point["offset_m"] for point in given["rock"]),
        rock_z=tuple(point["level_m"] for point in given["rock"]),
        wall=WallSettings(
            **{
                **given["wall"],
                "side_slope": tuple(SlopeStation(**station) for station in stations),
            }
        ),
    )


def rock_bar():
    """Check value 5.g: example A with three rock points more."""
    case = example("A")
    added = ORACLE["variants"]["5.g"]["rock_added"]
    points = sorted(
        [*zip(case.rock_x, case.rock_z, strict=True)]
        + [(point["offset_m"], point["level_m"]) for point in added]
    )
    return replace(case, rock_x=tuple(x for x, _ in points), rock_z=tuple(z for _, z in points))


def expected(name):
    """Results of an example or variant, as printed."""
    if name in ORACLE["examples"]:
        return ORACLE["examples"][name]["results"]
    return ORACLE["variants"][name]["results"]


def printed(text):
    """A printed value within half a unit of its last digit, or 1e-6 of it, whichever is larger."""
    decimals = len(text.partition(".")[2])
    return pytest.approx(float(text), rel=1e-6, abs=0.5 * 10.0**-decimals)


def _steps(draw, count, low, high):
    """Rising offsets to the decimetre."""
    gaps = draw(st.lists(st.integers(low, high), min_size=count, max_size=count))
    return [round(sum(gaps[: i + 1]) / 10, 1) for i in range(count)]


@st.composite
def cases(draw, *, key_high=60):
    """Ground and rock of any shape, levels to the centimetre; flanks may be open, bars stand."""
    count = draw(st.integers(4, 9))
    x = _steps(draw, count, 10, 200)
    levels = draw(st.lists(st.integers(9500, 10800), min_size=count, max_size=count))
    left = draw(st.integers(0, count - 2))
    right = draw(st.integers(left + 1, count - 1))
    rocks = draw(st.integers(2, 9))
    # Offsets that may start before, between or behind those of the ground.
    shift = draw(st.integers(-300, int(10 * x[-2]))) / 10
    rock_x = [round(value + shift, 1) for value in _steps(draw, rocks, 10, 250)]
    if rock_x[-1] <= x[0] or rock_x[0] >= x[-1]:
        rock_x[0], rock_x[-1] = min(rock_x[0], x[0]), max(rock_x[-1], x[-1])
    rock_z = draw(st.lists(st.integers(8800, 10600), min_size=rocks, max_size=rocks))
    slopes = draw(st.lists(st.integers(10, 30), min_size=1, max_size=3))
    slope_x = _steps(draw, len(slopes), 20, 400)
    return Case(
        ground=tuple(GroundPoint(a, z / 100) for a, z in zip(x, levels, strict=True)),
        toes=Toes(x[left], x[right]),
        rock_x=tuple(rock_x),
        rock_z=tuple(z / 100 for z in rock_z),
        wall=WallSettings(
            thickness_m=draw(st.integers(60, 150)) / 100,
            crest_below_bed_m=draw(st.integers(15, 100)) / 100,
            key_m=draw(st.integers(10, key_high)) / 100,
            bottom_margin_m=draw(st.integers(10, 60)) / 100,
            lift_m=draw(st.integers(10, 20)) / 10,
            film_faces=draw(st.integers(0, 2)),
            side_slope=tuple(SlopeStation(a, s / 10) for a, s in zip(slope_x, slopes, strict=True)),
        ),
    )
