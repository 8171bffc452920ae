"""Sections to draw: the worked examples and the awkward ones."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from structures.drawing.survey import view_section
from structures.ground.rock_line import RockLine
from structures.intake.pack import (
    GroundPoint,
    GroundWater,
    Probe,
    RockTest,
    Site,
    Sounding,
    SurveyPack,
    Toes,
)
from structures.life.cautions import caution
from structures.wall.wall import design_wall, wall_cautions
from tests.structures.wall.examples import example, rock_bar

LONG_NAME = "नेर्लवाडी गाव के पास बड़े बरगद के नीचे वाला पुराना घाट और मंदिर <&\"'> ford by the big tree"


def pack_of(case, **parts):
    site = parts.pop("site", Site("NE-07", "Nerlavadi ford"))
    return SurveyPack(site=site, ground=case.ground, toes=case.toes, wall=case.wall, **parts)


def settled(case):
    return RockLine("given", np.array(case.rock_x), np.array(case.rock_z))


def estimated(case, *, half_m=0.8):
    """The example's line as one with a range: half_m to each side, cut at the ground."""
    line = settled(case)
    ground = np.interp(
        line.offset_m, [p.offset_m for p in case.ground], [p.level_m for p in case.ground]
    )
    high = np.minimum(line.level_m + half_m, ground)
    low = line.level_m - half_m
    return replace(line, source="estimated", sd_m=np.full(low.size, half_m), low_m=low, high_m=high)


def drawn(pack, rock, **rest):
    """The view of a pack with its wall, cautions included."""
    wall, cutoff = design_wall(pack.ground, pack.toes, rock.offset_m, rock.level_m, pack.wall)
    return view_section(
        pack, rock, cutoff, cautions=wall_cautions(wall, pack.wall, pack.works), **rest
    )


def depth_m(case, x):
    ground = np.interp(x, [p.offset_m for p in case.ground], [p.level_m for p in case.ground])
    return float(ground - np.interp(x, case.rock_x, case.rock_z))


def survey_b():
    """Example B with its three bores, soundings elsewhere, probes and water."""
    case = example("B")
    return pack_of(
        case,
        rock=tuple(RockTest(x, depth_m(case, x), "bore", met_rock=True) for x in (6.0, 26.0, 52.0)),
        probes=(Probe(22.5, 3.9, refused=True), Probe(49.0, 2.6, refused=False)),
        soundings=tuple(
            Sounding(x, "schlumberger", (), f"S{place}")
            for place, x in enumerate((0.0, 11.0, 15.0, 19.0, 33.0, 40.0, 46.0, 60.0, 68.0), 1)
        ),
        ground_water=GroundWater(water_level_m=247.6),
    )


def valley(span_m, depth, count, **parts):
    """A bed between two banks, rock a bowl below it, closed at both ends."""
    x = np.linspace(0.0, span_m, count)
    u = np.abs(2.0 * x / span_m - 1.0)
    ground = 100.0 + 0.4 * depth * np.maximum(0.0, u - 0.4) / 0.6
    rock = 100.0 + 0.36 * depth * u**2 - 0.6 * depth * (1.0 - u**2)
    points = tuple(GroundPoint(float(a), float(b)) for a, b in zip(x, ground, strict=True))
    pack = SurveyPack(
        site=parts.pop("site", Site("V-1", "valley")),
        ground=points,
        toes=Toes(0.3 * span_m, 0.7 * span_m),
        **parts,
    )
    return drawn(pack, RockLine("given", x, rock))


def _open_both():
    case = example("B")
    x = np.arange(20.0, 41.0)
    line = RockLine("given", x, np.interp(x, case.rock_x, case.rock_z))
    return drawn(survey_b(), line)


def _no_rock():
    said = (caution("rock-not-known", why="only one place gives a level."),)
    return view_section(
        survey_b(), RockLine("none", np.array([]), np.array([])), None, cautions=said
    )


def _crowded():
    return valley(
        400.0,
        9.0,
        80,
        rock=tuple(
            RockTest(x, 4.0, "bore", met_rock=True) for x in (40.0, 120.0, 123.0, 200.0, 300.0)
        ),
        soundings=tuple(
            Sounding(float(x), "schlumberger", (), f"S{place}")
            for place, x in enumerate(np.linspace(5.0, 395.0, 60), 1)
        ),
    )


def _all_tests():
    """Every kind of test on example C."""
    case = example("C")
    return drawn(
        pack_of(
            case,
            rock=(
                RockTest(0.0, 0.0, "outcrop", met_rock=True),
                RockTest(14.0, 2.8, "bore", met_rock=True),
                RockTest(18.0, 2.0, "bore", met_rock=False),
                RockTest(22.0, 3.5, "pit", met_rock=True),
                RockTest(26.0, 3.0, "bore", met_rock=True, what="weathered"),
            ),
            probes=(Probe(34.0, 1.5, refused=True), Probe(36.0, 2.0, refused=False)),
        ),
        estimated(case),
    )


# What each is called in the tests -> a function that makes it.
VIEWS = {
    "A": lambda: drawn(pack_of(example("A")), settled(example("A"))),
    "B": lambda: drawn(survey_b(), estimated(example("B"))),
    "C open flank": lambda: drawn(pack_of(example("C")), settled(example("C"))),
    "every test": _all_tests,
    "rock bar": lambda: drawn(pack_of(rock_bar()), settled(rock_bar())),
    "both flanks open": _open_both,
    "no rock": _no_rock,
    "5 m wide": lambda: valley(5.0, 2.0, 5),
    "5 m wide, 60 m deep": lambda: valley(5.0, 60.0, 5),
    "crowded 400 m": _crowded,
    "500 m wide, 1 m deep": lambda: valley(500.0, 1.0, 12),
    "long name": lambda: valley(44.0, 14.0, 9, site=Site("नेर-०७", LONG_NAME)),
}
