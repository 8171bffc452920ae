"""The spine: a survey pack in; rock, wall, quantities, estimate, water and cautions out.

This is the page to read first. Each step is one call into the room that knows it; nothing here
knows a database, a page or a queue, so the shell, the workers and the tests walk the same way.
"""

from __future__ import annotations

import hashlib
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

from costing.price.abstract import make_abstract
from costing.price.rates import BY_LIFTS
from costing.risk import price_draws, unpriced
from structures.errors import LEVELS
from structures.ground.refraction import interpret_refraction
from structures.ground.rock import estimate_rock
from structures.ground.sounding import interpret
from structures.intake.defaults import GROUND
from structures.intake.practice import HANDBOOK, Practice
from structures.life.cautions import Caution, caution
from structures.life.changed import changed_default
from structures.life.trench import spoil_distance_m
from structures.takeoff.dewatering import plan_pumping
from structures.takeoff.sheet import measure, measurement_sheet, quantities
from structures.wall.cutoff import cut
from structures.wall.section import make_section
from structures.wall.wall import design_wall, wall_cautions
from structures.water.water import judge_water

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

    from costing.price.abstract import Abstract
    from costing.price.rates import RateSchedule
    from costing.risk import Spread
    from structures.ground.refraction import RefractionReading
    from structures.ground.rock_line import RockLine
    from structures.ground.sounding import Interpretation
    from structures.intake.pack import SurveyPack
    from structures.takeoff.dewatering import Pumping
    from structures.takeoff.quantity import Quantity
    from structures.takeoff.sheet import SheetRow
    from structures.takeoff.takings import Takings
    from structures.wall.cutoff import Cutoff
    from structures.wall.wall import Wall
    from structures.water.water import Water

METHOD: Final = "2026.12-1"  # raised whenever the same inputs would give other figures
SEED: Final = 20261201  # stated with every result; the same seed gives the same digits again
LINE_OVER_TEST: Final = "RK-03"
DRAWS: Final = int(GROUND["risk_draws"].value)
NO_SPREAD: Final = "the rock line is settled and nothing varies"
NO_PRICE: Final = "the estimate is incomplete"


@dataclass(frozen=True, eq=False, slots=True)
class Design:
    """The wall of one rock line and what is measured on it."""

    wall: Wall
    cutoff: Cutoff
    takings: Takings
    pumping: Pumping
    quantities: tuple[Quantity, ...]
    sheet: tuple[SheetRow, ...]


@dataclass(frozen=True, eq=False, slots=True)
class Appraisal:
    """All that follows from one survey and one rate schedule; None is "not known", never zero.

    `design` is None where no rock line is known, `estimate` where none or no schedule is there,
    `spread` where nothing varies or nothing is priced (`spread_note` says why).
    """

    pack: SurveyPack
    schedule: RateSchedule | None
    on: date
    soundings: tuple[Interpretation, ...]
    refraction: tuple[RefractionReading, ...]
    rock: RockLine
    design: Design | None
    estimate: Abstract | None
    spread: Spread | None
    water: Water
    cautions: tuple[Caution, ...]
    practice: Practice = HANDBOOK
    method: str = METHOD

    @property
    def complete(self) -> bool:
        """Is every line priced and are both flanks closed."""
        return (
            self.estimate is not None
            and self.estimate.complete
            and self.design is not None
            and self.design.wall.closed
        )

    @property
    def spread_note(self) -> str:
        """Why there is no P10, P50 and P90; empty where there is."""
        if self.estimate is None:
            return ""
        if self.spread is not None:
            return self.spread.why
        return NO_SPREAD

    @property
    def digest(self) -> str:
        """SHA-256 of inputs, chance and method: the same digest means the same figures."""
        lines = self.rock.draws_m
        inputs = (
            self.method,
            repr(self.pack),
            repr(self.schedule),
            self.on.isoformat(),
            f"{0 if lines is None else len(lines)} draws, seed {self.rock.seed}",
        )
        if self.practice != HANDBOOK:
            inputs += (repr(self.practice),)
        return hashlib.sha256("\n".join(inputs).encode()).hexdigest()


def appraise(
    pack: SurveyPack,
    *,
    schedule: RateSchedule | None = None,
    on: date,
    draws: int = DRAWS,
    seed: int = SEED,
    practice: Practice = HANDBOOK,
) -> Appraisal:
    """Walk one survey from the ground to the price.

    Source: the handbook's chain: survey and rock line, ends, areas, lifts, quantities, price.

    Parameters
    ----------
    pack
        One site's survey.
    schedule
        Rates; without them the quantities are given and no estimate.
    on
        The day for which the schedule's validity is judged.
    draws, seed
        Whole-line draws of an estimated rock line, 2000 or more, and their seed.
    practice
        The defaults in force beside those of the wall, which stand in the pack.

    Raises
    ------
    Refused
        If ground and rock line share no stretch, or a lift has no rate.
    """
    soundings = tuple(interpret(one, practice=practice) for one in pack.soundings)
    refraction = tuple(interpret_refraction(one, practice=practice) for one in pack.refraction)
    read = {"soundings": soundings, "refraction": refraction}
    rock = estimate_rock(pack, **read, draws=draws, seed=seed, practice=practice)
    design = None if rock.source == "none" else _design(pack, rock, practice)
    estimate = spread = None
    if design is not None and schedule is not None:
        estimate = make_abstract(design.quantities, schedule)
        if rock.draws_m is not None:
            priced_by = schedule if estimate.complete else None
            spread = _spread(pack, rock, priced_by, practice, seed=seed)
    cutoff = None if design is None else design.cutoff
    silent = Appraisal(
        pack=pack,
        schedule=schedule,
        on=on,
        soundings=soundings,
        refraction=refraction,
        rock=rock,
        design=design,
        estimate=estimate,
        spread=spread,
        water=judge_water(pack, rock, cutoff, practice=practice),
        cautions=(),
        practice=practice,
    )
    return replace(silent, cautions=_in_order(_cautions(silent)))


def _design(pack: SurveyPack, rock: RockLine, practice: Practice) -> Design:
    wall, cutoff = design_wall(pack.ground, pack.toes, rock.offset_m, rock.level_m, pack.wall)
    takings = measure(cutoff, pack.wall)
    pumping = plan_pumping(cutoff, pack.ground_water, pack.works, practice=practice)
    return Design(
        wall=wall,
        cutoff=cutoff,
        takings=takings,
        pumping=pumping,
        quantities=quantities(takings, pumping),
        sheet=measurement_sheet(cutoff, takings),
    )


def _spread(
    pack: SurveyPack,
    rock: RockLine,
    schedule: RateSchedule | None,
    practice: Practice,
    *,
    seed: int,
) -> Spread:
    """Price every whole-line draw of the rock at the same rates (handbook 8.9 and 8.10).

    Without a schedule that prices all of it only the share of open flanks is told.
    """
    cutoff = cut(make_section(pack.ground, pack.toes, rock.offset_m, rock.draws_m, pack.wall))
    if schedule is None:
        return unpriced(cutoff.ends, seed=seed, why=NO_PRICE)
    pumping = plan_pumping(cutoff, pack.ground_water, pack.works, practice=practice)
    return price_draws(measure(cutoff, pack.wall), pumping, cutoff.ends, schedule, seed=seed)


def _cautions(found: Appraisal) -> Iterable[Caution]:
    """Collect what every room has to say, and what the works ask for."""
    yield from found.rock.cautions
    if found.rock.source == "given":
        yield caution("rock-line-settled")
    if found.design is not None:
        yield from wall_cautions(
            found.design.wall, found.pack.wall, found.pack.works, practice=found.practice
        )
        if found.design.pumping.hours is None:
            yield caution("dewatering-not-known", why=found.design.pumping.why)
    yield from _changed_defaults(found.practice)
    if found.estimate is not None:
        yield from _estimate_cautions(found)
    elif found.design is not None:
        yield caution("rates-not-given")
    yield from found.water.cautions
    # What the reader says of a settled line over a test, the rock line has said already.
    doubts = [one for one in found.pack.findings if one.rule != LINE_OVER_TEST]
    doubts += () if found.schedule is None else found.schedule.findings
    for finding in doubts:
        yield Caution(finding.rule.lower() or "survey", finding.level, finding.sentence())
    if found.soundings or found.refraction:
        yield caution("geophysics")
    if found.design is not None and found.design.wall.length_m > 0.0:
        yield from _works_cautions(found.pack, found.design, found.practice.depth_without_entry_m)
    yield caution("downstream")
    yield caution("raw-water")


def _changed_defaults(practice: Practice) -> Iterable[Caution]:
    for default, value in practice.changed:
        if default.owner == "E":
            yield changed_default(default, value, practice.decision(default.key))


def _estimate_cautions(found: Appraisal) -> Iterable[Caution]:
    wall = found.design.wall
    sides = {"left": wall.closed_left, "right": wall.closed_right}
    lacking = [
        *found.estimate.unknown,
        *(f"the {side} flank is open" for side, closed in sides.items() if not closed),
    ]
    if lacking:
        yield caution("estimate-incomplete", lines=", ".join(lacking))
    yield from _unused_lifts(found)
    schedule = found.schedule
    if schedule.ended(found.on):
        yield caution(
            "rates-out-of-date", schedule=schedule.schedule_id, ended=schedule.valid_to.isoformat()
        )


def _unused_lifts(found: Appraisal) -> Iterable[Caution]:
    """Doubt a schedule whose lifts are not those of the trench: some rates would fall away."""
    limits = found.design.takings.limits_m.tolist()
    begins = limits[:-1]
    lifts = [one.from_m for one in found.schedule.rates_of(BY_LIFTS) if one.from_m is not None]
    unused = sorted(from_m for from_m in lifts if from_m < limits[-1] and from_m not in begins)
    if unused:
        yield caution(
            "rates-lift-unused",
            lifts=", ".join(f"{from_m:g}" for from_m in unused),
            begins=", ".join(f"{from_m:g}" for from_m in begins),
        )


def _works_cautions(pack: SurveyPack, design: Design, entry_m: float) -> Iterable[Caution]:
    back_m = spoil_distance_m(design.wall.greatest_depth_to_key_m)
    yield caution("trench-collapse", entry_m=entry_m)
    yield caution("edge", distance_m=back_m, entry_m=entry_m)
    if pack.works.pump_hours != 0:
        yield caution("pumping")
        reach_m = 0.0 if design.pumping.inflow is None else float(design.pumping.inflow.reach_m[0])
        if reach_m > 0.0:
            yield caution("neighbours", reach_m=reach_m)
        yield caution("uplift")
    yield caution("flood")


def _in_order(cautions: Iterable[Caution]) -> tuple[Caution, ...]:
    """Put what blocks first; of the same level in the order of the walk, none twice."""
    kept = dict.fromkeys(cautions)
    return tuple(sorted(kept, key=lambda one: LEVELS.index(one.level)))
