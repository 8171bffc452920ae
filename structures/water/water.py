"""What is known of the water at one site before there is a wall and behind it: the first step."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, NamedTuple

from structures.intake.defaults import WATER
from structures.intake.practice import HANDBOOK, Practice
from structures.life.cautions import Caution, caution
from structures.units import SECONDS_PER_DAY
from structures.water.leakage import clay_leakage_m3_per_day, face_of
from structures.water.section_area import Bands, surveyed_section
from structures.water.storage import storage_m3
from structures.water.underflow import underflow_m3_per_day

if TYPE_CHECKING:
    from structures.ground.rock_line import RockLine
    from structures.intake.pack import SurveyPack
    from structures.wall.cutoff import Cutoff

LEVEL: Final = "ground_water.water_level_m"
NO_ROCK: Final = "no rock line is known"
WORDS: Final = {
    "section_area_m2": "saturated section",
    "underflow_m3_per_day": "underflow",
    "storage_m3": "storage",
    "leakage_m3_per_day": "leakage through the clay",
}


@dataclass(frozen=True, eq=False, slots=True)
class Water:
    """Water of one site; what is not known is None and `reasons` says why, by field name.

    `section_area_m2` lies between the rock line and the water level, `underflow_m3_per_day` flows
    through it. `storage_m3` is an upper bound, `leakage_m3_per_day` that of sound clay no better
    than accepted, water at the crest above and at the water level below.
    """

    section_area_m2: float | None
    underflow_m3_per_day: float | None
    storage_m3: float | None
    leakage_m3_per_day: float | None
    reasons: dict[str, str]
    cautions: tuple[Caution, ...]


def judge_water(
    pack: SurveyPack,
    rock: RockLine,
    cutoff: Cutoff | None,
    *,
    practice: Practice = HANDBOOK,
) -> Water:
    """Compute what the survey allows of underflow, storage and leakage.

    Source: handbook 9.1, 9.3 and 9.9.

    Parameters
    ----------
    pack
        The survey with its ground water, where measured.
    rock
        The rock line; of an estimated one the 50 % line.
    cutoff
        The wall of that line; None where no rock line is known.
    practice
        Specific yield where none was measured, and conductivity of the clay: the limit of
        acceptance, since nobody has tested the clay in place yet.
    """
    section = None
    if rock.source != "none":
        section = surveyed_section(pack.ground, rock.offset_m, rock.level_m)
    area = _section_area(pack, section)
    answers = {
        "section_area_m2": area,
        "underflow_m3_per_day": _underflow(pack, area),
        "storage_m3": _storage(pack, section, cutoff, practice.specific_yield),
        "leakage_m3_per_day": _leakage(pack, cutoff, practice.clay_k_m_per_s * SECONDS_PER_DAY),
    }
    reasons = {name: one.why for name, one in answers.items() if one.value is None}
    return Water(
        **{name: one.value for name, one in answers.items()},
        reasons=reasons,
        cautions=(
            *_not_known(reasons),
            *_storage_cautions(pack, cutoff, answers["storage_m3"], practice.specific_yield),
        ),
    )


class _Answer(NamedTuple):
    """A value, or why there is none."""

    value: float | None
    why: str = ""


def _not_given(given: dict[str, float | None]) -> _Answer:
    lacking = ", ".join(key for key, value in given.items() if value is None)
    return _Answer(None, f"{lacking} not given")


def _section_area(pack: SurveyPack, section: Bands | None) -> _Answer:
    level_m = pack.ground_water.water_level_m
    if section is None:
        return _Answer(None, NO_ROCK)
    if level_m is None:
        return _not_given({LEVEL: level_m})
    return _Answer(section.area_below_m2(level_m))


def _underflow(pack: SurveyPack, area: _Answer) -> _Answer:
    water = pack.ground_water
    conductivity, gradient = water.hydraulic_conductivity_m_per_day, water.gradient
    if area.why == NO_ROCK:
        return area
    if area.value is None or conductivity is None or gradient is None:
        return _not_given(
            {
                "ground_water.hydraulic_conductivity_m_per_day": conductivity,
                "ground_water.gradient": gradient,
                LEVEL: water.water_level_m,
            }
        )
    return _Answer(underflow_m3_per_day(conductivity, area.value, gradient))


def _storage(
    pack: SurveyPack, section: Bands | None, cutoff: Cutoff | None, unmeasured_yield: float
) -> _Answer:
    level_m, bed_slope = pack.ground_water.water_level_m, pack.site.bed_slope
    if section is None or cutoff is None:
        return _Answer(None, NO_ROCK)
    if level_m is None or bed_slope is None:
        return _not_given({LEVEL: level_m, "site.bed_slope": bed_slope})
    specific_yield = pack.ground_water.specific_yield
    if specific_yield is None:
        specific_yield = unmeasured_yield
    return _Answer(
        storage_m3(
            section,
            from_m=level_m,
            to_m=cutoff.section.crest_level_m,
            bed_slope=bed_slope,
            specific_yield=specific_yield,
        )
    )


def _leakage(pack: SurveyPack, cutoff: Cutoff | None, clay_k_m_per_day: float) -> _Answer:
    level_m = pack.ground_water.water_level_m
    if cutoff is None:
        return _Answer(None, NO_ROCK)
    if not (cutoff.ends.closed_left[0] and cutoff.ends.closed_right[0]):
        return _Answer(None, "a flank is open, water finds its way round the end")
    if level_m is None:
        return _not_given({LEVEL: level_m})
    return _Answer(
        clay_leakage_m3_per_day(
            face_of(cutoff),
            upstream_m=cutoff.section.crest_level_m,
            downstream_m=level_m,
            thickness_m=cutoff.section.thickness_m,
            clay_k_m_per_day=clay_k_m_per_day,
        )
    )


def _not_known(reasons: dict[str, str]) -> list[Caution]:
    """Say each reason once, with all that it leaves unknown."""
    return [
        caution(
            "water-not-known",
            what=", ".join(WORDS[name] for name in WORDS if reasons.get(name) == why).capitalize(),
            why=why,
        )
        for why in dict.fromkeys(reasons.values())
    ]


def _storage_cautions(
    pack: SurveyPack, cutoff: Cutoff | None, storage: _Answer, unmeasured_yield: float
) -> list[Caution]:
    """Say what a storage rests on that nobody measured, or why it is nothing."""
    level_m = pack.ground_water.water_level_m
    if storage.value is None or cutoff is None or level_m is None:
        return []
    cautions = []
    default = WATER["specific_yield"]
    if pack.ground_water.specific_yield is None:
        cautions.append(
            caution(
                "default-used",
                words=default.words.capitalize(),
                value=unmeasured_yield,
                unit="of the volume",
                source="handbook 12" if unmeasured_yield == default.value else "setting",
            )
        )
    crest_m = cutoff.section.crest_level_m
    if level_m >= crest_m:
        cautions.append(caution("storage-none", level_m=level_m, crest_m=crest_m))
    return cautions
