"""What every test says of the rock: a level with its error, or only that rock lies no higher."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, Protocol

import numpy as np

from structures.ground.rock_line import Evidence
from structures.intake.practice import HANDBOOK, Practice

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from structures.ground.sounding_refusals import Refusal
    from structures.intake.pack import RockTest, SurveyPack

OUTCROP_SD_M: Final = 0.05  # [A] handbook 4.4
UNTIED_SD: Final = (1.5, 0.25)  # [A, E] of a sounding that no test ties: least m, share; 2.11
THIN_WEATHERED_M: Final = 0.5  # [A] a thicker weathered layer unties soundings; handbook 2.11
SAME_PLACE_M: Final = 0.5  # [A] a bore and a pit so near to each other are one place
GEOPHYSICS: Final = ("sounding", "refraction")


class DepthReading(Protocol):
    """A sounding or refraction line that was read; depths are None where it was refused."""

    offset_m: float | None
    label: str
    rock_depth_m: float | None
    rock_depth_low_m: float | None
    rock_depth_high_m: float | None
    rock_depth_sd_m: float | None
    refusal: Refusal | None


@dataclass(frozen=True, slots=True)
class Gathered:
    """All evidence of a line. `tied` says whether soundings may be trusted as sheet rock."""

    evidence: tuple[Evidence, ...]
    tied: bool

    @property
    def levels(self) -> tuple[Evidence, ...]:
        """Evidence that gives a level."""
        return tuple(one for one in self.evidence if one.sd_m is not None)

    @property
    def bounds(self) -> tuple[Evidence, ...]:
        """Evidence that says only: rock at or below."""
        return tuple(one for one in self.evidence if one.sd_m is None)

    @property
    def by_geophysics(self) -> tuple[Evidence, ...]:
        """Levels read by geophysics."""
        return tuple(one for one in self.levels if one.kind in GEOPHYSICS)


def ground_level_m(pack: SurveyPack, offset_m: float) -> float:
    """Level of the ground on the wall line, straight between its points."""
    x = [point.offset_m for point in pack.ground]
    return float(np.interp(offset_m, x, [point.level_m for point in pack.ground]))


def gather(
    pack: SurveyPack,
    *,
    soundings: Iterable[DepthReading],
    refraction: Iterable[DepthReading],
    practice: Practice = HANDBOOK,
) -> Gathered:
    """Put every test as a level with its error, or as an upper bound.

    Source: handbook 4.3 (errors), 4.4 (inequalities), 2.11 (weathered rock).

    Parameters
    ----------
    pack
        The survey.
    soundings, refraction
        What was read from its soundings and refraction lines.
    practice
        Errors of the tests.
    """
    tied = _tied(pack.rock)
    seen_sd_m = {
        "outcrop": OUTCROP_SD_M,
        "pit": practice.se_pit_m,
        "bore": practice.se_core_m,
    }
    evidence = [_of_rock(pack, test, seen_sd_m[test.method]) for test in pack.rock]
    evidence += [
        Evidence(
            probe.offset_m,
            ground_level_m(pack, probe.offset_m) - probe.depth_m,
            "probe refused" if probe.refused else "probe stopped",
        )
        for probe in pack.probes
    ]
    for kind, readings, limits in (
        ("sounding", soundings, _sounding_sd(practice, tied=tied)),
        ("refraction", refraction, (practice.se_refraction_m, practice.se_refraction_share)),
    ):
        evidence += [
            _of_depth(pack, reading, kind, limits)
            for reading in readings
            if reading.rock_depth_m is not None and reading.offset_m is not None
        ]
    return Gathered(tuple(sorted(evidence, key=lambda one: one.offset_m)), tied)


def _sounding_sd(practice: Practice, *, tied: bool) -> tuple[float, float]:
    """Least error and share of depth; an untied sounding is never surer than a tied one."""
    stated = (practice.se_sounding_m, practice.se_sounding_share)
    return stated if tied else (max(UNTIED_SD[0], stated[0]), max(UNTIED_SD[1], stated[1]))


def _of_rock(pack: SurveyPack, test: RockTest, sd_m: float) -> Evidence:
    level = ground_level_m(pack, test.offset_m) - test.depth_m
    if not test.met_rock:
        return Evidence(test.offset_m, level, "hole")
    if test.what == "weathered":
        return Evidence(test.offset_m, level, "weathered")
    return Evidence(test.offset_m, level, test.method, sd_m)


def _of_depth(
    pack: SurveyPack, reading: DepthReading, kind: str, limits: tuple[float, float]
) -> Evidence:
    least, share = limits
    depth = reading.rock_depth_m
    sd = max(least, share * depth, reading.rock_depth_sd_m or 0.0)
    return Evidence(reading.offset_m, ground_level_m(pack, reading.offset_m) - depth, kind, sd)


def _tied(rock: Sequence[RockTest]) -> bool:
    """Did a direct observation meet sheet rock, and none a weathered layer over 0.5 m."""
    sheet = [test for test in rock if test.met_rock and test.what == "sheet"]
    weathered = [test for test in rock if test.met_rock and test.what == "weathered"]
    return bool(sheet) and all(_thin(test, sheet) for test in weathered)


def _thin(weathered: RockTest, sheet: Sequence[RockTest]) -> bool:
    below = [
        test.depth_m - weathered.depth_m
        for test in sheet
        if abs(test.offset_m - weathered.offset_m) <= SAME_PLACE_M
        and test.depth_m >= weathered.depth_m
    ]
    return bool(below) and min(below) <= THIN_WEATHERED_M
