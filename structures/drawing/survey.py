"""From a survey, its rock line and its wall to what the drawing of the section needs."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from structures.drawing.view import GroundTest, RockDrawn, SectionView, WallDrawn
from structures.ground.gaussian import NORMAL_90
from structures.wall.stretch import find_bars

if TYPE_CHECKING:
    from structures.drawing.view import TestKind
    from structures.ground.rock_line import RockLine
    from structures.ground.sounding import Interpretation
    from structures.intake.pack import RockTest, SurveyPack
    from structures.life.cautions import Caution
    from structures.wall.cutoff import Cutoff


def view_section(
    pack: SurveyPack,
    rock: RockLine,
    cutoff: Cutoff | None,
    *,
    soundings: tuple[Interpretation, ...] = (),
    cautions: tuple[Caution, ...] = (),
) -> SectionView:
    """Bring everything that is drawn of one site together.

    Source: drawing conventions of this project; 10 % and 90 % points of handbook 4.8.

    Parameters
    ----------
    pack
        The survey.
    rock
        Its rock line; one of source "none" draws the survey alone.
    cutoff
        The wall of the rock line, one draw; None where it is not known.
    soundings
        What each sounding of the pack says, in the same order.
    cautions
        All cautions of the site.
    """
    return SectionView(
        site_code=pack.site.code,
        site_name=pack.site.name or "",
        offset_m=np.array([point.offset_m for point in pack.ground]),
        ground_m=np.array([point.level_m for point in pack.ground]),
        toes_m=(pack.toes.left_m, pack.toes.right_m),
        rock=_rock(pack, rock),
        wall=None if cutoff is None else wall_drawn(cutoff, film=pack.wall.film_faces > 0),
        tests=_tests(pack, rock, soundings),
        water_m=pack.ground_water.water_level_m,
        cautions=cautions,
    )


def _rock(pack: SurveyPack, rock: RockLine) -> RockDrawn | None:
    """Cut the rock line to the surveyed ground: what lies beyond has no ground to stand under."""
    first, last = pack.ground[0].offset_m, pack.ground[-1].offset_m
    x = rock.offset_m
    if rock.source == "none" or min(last, x[-1]) <= max(first, x[0]):
        return None
    ends = np.array([max(first, x[0]), min(last, x[-1])])
    at = np.unique(np.concatenate((x[(x > ends[0]) & (x < ends[1])], ends)))
    lines = [
        None if line is None else np.interp(at, x, line)
        for line in (rock.level_m, rock.low_m, rock.high_m)
    ]
    return RockDrawn(at, *lines)


def wall_drawn(cutoff: Cutoff, *, film: bool) -> WallDrawn:
    """Give a wall of one rock line as it is drawn."""
    section, ends = cutoff.section, cutoff.ends
    there = cutoff.stands[0]
    both = (cutoff.left, cutoff.right)
    left, right = float(ends.left_m[0]), float(ends.right_m[0])
    slope = np.interp([left, right], section.offset_m, section.slope)
    return WallDrawn(
        offset_m=np.stack([side.offset_m[0][there] for side in both], axis=1),
        top_m=np.stack([side.top_m[0][there] for side in both], axis=1),
        rock_m=np.stack([side.rock_m[0][there] for side in both], axis=1),
        crest_m=section.crest_level_m,
        key_m=section.key_m,
        ends_m=(left, right),
        closed=(bool(ends.closed_left[0]), bool(ends.closed_right[0])),
        slopes=(float(slope[0]), float(slope[1])),
        film=film,
        bars=find_bars(cutoff),
    )


def _tests(
    pack: SurveyPack, rock: RockLine, soundings: tuple[Interpretation, ...]
) -> tuple[GroundTest, ...]:
    first, last = pack.ground[0].offset_m, pack.ground[-1].offset_m
    tests = (
        *_rock_tests(pack.rock),
        *(
            GroundTest(
                probe.offset_m,
                "probe refused" if probe.refused else "probe stopped",
                f"P{number}",
                probe.depth_m,
            )
            for number, probe in enumerate(pack.probes, 1)
        ),
        *_sounding_tests(pack, soundings),
        *_refraction_tests(pack, rock),
    )
    return tuple(test for test in tests if first <= test.offset_m <= last)


def _rock_tests(tests: tuple[RockTest, ...]) -> list[GroundTest]:
    """Count each method by itself, in the order of the survey: bore 1, bore 2, pit 1."""
    counts: dict[str, int] = {}
    drawn = []
    for test in tests:
        counts[test.method] = counts.get(test.method, 0) + 1
        label = f"{test.method} {counts[test.method]}"
        drawn.append(GroundTest(test.offset_m, _kind(test), label, test.depth_m))
    return drawn


def _kind(test: RockTest) -> TestKind:
    if not test.met_rock:
        return "hole"
    return "weathered" if test.what == "weathered" else test.method


def _sounding_tests(pack: SurveyPack, soundings: tuple[Interpretation, ...]) -> list[GroundTest]:
    said = soundings or (None,) * len(pack.soundings)
    return [
        GroundTest(
            sounding.offset_m,
            "sounding",
            sounding.label,
            shallow_m=None if one is None else one.rock_depth_low_m,
            deep_m=None if one is None else one.rock_depth_high_m,
        )
        for sounding, one in zip(pack.soundings, said, strict=True)
        if sounding.offset_m is not None
    ]


def _refraction_tests(pack: SurveyPack, rock: RockLine) -> list[GroundTest]:
    """Give each line the range of the level that the rock line took from it, if any."""
    x = [point.offset_m for point in pack.ground]
    z = [point.level_m for point in pack.ground]
    took = {e.offset_m: e for e in rock.evidence if e.kind == "refraction" and e.sd_m is not None}
    drawn = []
    for line in pack.refraction:
        one = took.get(line.offset_m)
        shallow = deep = None
        if one is not None:
            depth = float(np.interp(line.offset_m, x, z)) - one.level_m
            half = NORMAL_90 * one.sd_m
            shallow, deep = max(0.0, depth - half), depth + half
        drawn.append(
            GroundTest(line.offset_m, "refraction", line.label, shallow_m=shallow, deep_m=deep)
        )
    return drawn
