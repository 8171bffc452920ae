"""The four ways on when rock runs deeper: go on, step, shift, close; each with cost, days, leak.

Source: the office's practice, "rock runs deeper". Each way passes the drawing, support, dewatering
and season rules again with its own depth; one that a rule blocks cannot be chosen.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final, Literal

from costing.appraisal import appraise
from costing.options.rules import judge_season, judge_trench, judge_wall, judge_water
from costing.options.shelf import leak_through_clay, leak_under_shelf, leak_unfinished, raised
from costing.options.site import hole_of, left_of, work_of
from costing.price.abstract import make_abstract
from structures.errors import Finding, Refused
from structures.intake.pack import RockLinePoint

if TYPE_CHECKING:
    from collections.abc import Iterable
    from decimal import Decimal

    from costing.appraisal import Appraisal
    from costing.forecast import Forecast
    from costing.options.shelf import Leak
    from costing.options.site import OnSite, Season
    from structures.takeoff.quantity import Quantity

Way = Literal["go on", "step", "shift", "close"]
WORDS: Final[dict[Way, str]] = {
    "go on": "Dig to the rock as found.",
    "step": "End the wall higher, on a shelf.",
    "shift": "Fill the trench and build on another line.",
    "close": "Fill the trench and stop.",
}


@dataclass(frozen=True, eq=False, slots=True)
class Asked:
    """What the engineer gives for the ways that need more than the forecast.

    `shelf_m` is the level of the shelf, `reach_m` the length along the flow over which the head
    drop is fixed, `other` the appraisal of another line, `licensed_design` the signed design of a
    licensed engineer for the new depth. None, or empty, where there is none.
    """

    shelf_m: float | None = None
    reach_m: float | None = None
    other: Appraisal | None = None
    licensed_design: str = ""


@dataclass(frozen=True, eq=False, slots=True)
class Option:
    """One way; a figure that cannot be said is None and `reasons` say why.

    `total` is the whole cost at its end, `to_complete` what is still to spend from today,
    `depth_m` the greatest depth still to dig, to the bottom of the key.
    """

    way: Way
    total: Decimal | None
    to_complete: Decimal | None
    over_technical_percent: Decimal | None
    over_administrative_percent: Decimal | None
    days: int | None
    depth_m: float | None
    leak: Leak | None
    findings: tuple[Finding, ...]
    reasons: tuple[str, ...]

    @property
    def words(self) -> str:
        """Say the way in one sentence."""
        return WORDS[self.way]

    @property
    def may_be_chosen(self) -> bool:
        """Does no rule block it."""
        return not any(one.level == "block" for one in self.findings)


@dataclass(frozen=True, eq=False, slots=True)
class _Desk:
    """What all ways are weighed with."""

    forecast: Forecast
    before: Appraisal
    site: OnSite
    season: Season
    asked: Asked


def weigh(
    forecast: Forecast, before: Appraisal, site: OnSite, season: Season, asked: Asked
) -> tuple[Option, ...]:
    """Weigh the four ways, always all four, in the order of the paper.

    Source: the office's practice, "rock runs deeper".

    Parameters
    ----------
    forecast
        The cost with the rock as found.
    before
        The wall as it was drawn.
    site
        What is covered, open and spent.
    season
        Days that work takes, and days left.
    asked
        Shelf, reach, other line, licensed design.

    Raises
    ------
    Refused
        If the forecast has no wall, no rates, or the drawing had none.
    """
    walk = forecast.appraisal
    if walk.design is None or before.design is None or walk.schedule is None:
        raise Refused(
            "There is no wall to weigh ways of.",
            where="option paper",
            remedy="Settle a rock line and forecast the cost again.",
        )
    desk = _Desk(forecast, before, site, season, asked)
    return (_go_on(desk), _step(desk), _shift(desk), _close(desk))


def require_choice(options: Iterable[Option], way: Way) -> Option:
    """Give the option of a way that may be chosen.

    Raises
    ------
    Refused
        If a rule blocks it; all findings are told.
    """
    chosen = next(one for one in options if one.way == way)
    if not chosen.may_be_chosen:
        blocks = tuple(one for one in chosen.findings if one.level == "block")
        raise Refused(
            f'"{way}" cannot be chosen: {blocks[0].what}',
            where="option paper",
            remedy=blocks[0].remedy,
            findings=chosen.findings,
        )
    return chosen


def _go_on(desk: _Desk) -> Option:
    walk, spread = desk.forecast.appraisal, desk.forecast.spread
    reasons = list(desk.forecast.reasons)
    if spread is not None and spread.p90 is not None:
        reasons.append(f"One time in ten it costs more than {spread.p90:f}.")
    return _dug(desk, "go on", walk, desk.forecast.total, tuple(reasons))


def _step(desk: _Desk) -> Option:
    walk, shelf_m = desk.forecast.appraisal, desk.asked.shelf_m
    wall = walk.design.wall
    if shelf_m is None:
        return _unsaid("step", "shelf_m", "No level of a shelf is given.", "Give one.")
    if shelf_m >= wall.crest_level_m:
        what = f"A shelf at {shelf_m:.2f} m leaves no wall under the crest at {wall.crest_level_m:.2f} m."
        return _unsaid("step", "shelf_m", what, "Give a lower level.")
    x, level = raised(walk, shelf_m, desk.site)
    if x is None:
        what = f"Where nothing is covered, rock lies nowhere deeper than {shelf_m:.2f} m."
        return _unsaid("step", "shelf_m", what, "Give a higher level, or go on.")
    stepped = _again(walk, x, level)
    total = stepped.estimate.total if stepped.complete else None
    reasons = (
        "The key of the raised stretch is cut in sand and priced as key: an upper value.",
        "Beside the shelf the seam of clay and sand is not sealed; no figure is known for it.",
    )
    option = _dug(desk, "step", stepped, total, reasons)
    return replace(option, leak=leak_under_shelf(walk, shelf_m, desk.asked.reach_m, desk.site))


def _shift(desk: _Desk) -> Option:
    other = desk.asked.other
    if other is None or other.design is None or other.estimate is None:
        return _unsaid(
            "shift",
            "other",
            "The other line is not surveyed and priced: cost, days and leak cannot be said.",
            "Survey it and make an estimate, or leave this way out.",
        )
    close, hole = _closing(desk)
    theirs = other.estimate.total if other.complete else None
    to_complete = None if theirs is None else theirs + close
    work = work_of(other.design.cutoff, other.pack.wall)
    days = desk.season.days(hole, work)
    return _option(
        desk,
        "shift",
        to_complete=to_complete,
        total=_add(desk.site.spent, to_complete),
        days=days,
        depth_m=other.design.wall.greatest_depth_to_key_m,
        leak=leak_through_clay(other),
        findings=(
            *judge_wall(other),
            *judge_trench(other, other.design.cutoff, licensed_design=desk.asked.licensed_design),
            *judge_water(other, other),
            *judge_season(days, desk.season),
        ),
        reasons=_not_spent(desk),
    )


def _close(desk: _Desk) -> Option:
    cost, hole = _closing(desk)
    days = desk.season.days(hole)
    return _option(
        desk,
        "close",
        to_complete=cost,
        total=_add(desk.site.spent, cost),
        days=days,
        depth_m=None,
        leak=leak_unfinished(desk.forecast.appraisal),
        findings=tuple(judge_season(days, desk.season, level="warn")),
        reasons=(
            *_not_spent(desk),
            "Filling is priced with the open strips dug to the rock as found, percentages on it.",
        ),
    )


def _dug(
    desk: _Desk, way: Way, walk: Appraisal, total: Decimal | None, reasons: tuple[str, ...]
) -> Option:
    """Weigh a wall on the line that was begun."""
    part = left_of(walk, desk.site)
    days = desk.season.days(work_of(part, walk.pack.wall))
    spent = desk.site.spent
    return _option(
        desk,
        way,
        total=total,
        to_complete=None if total is None or spent is None else total - spent,
        days=days,
        depth_m=None if part is None else float(part.greatest_depth_to_key_m[0]),
        leak=leak_through_clay(walk),
        findings=(
            *judge_wall(walk),
            *judge_trench(walk, part, licensed_design=desk.asked.licensed_design),
            *judge_water(walk, desk.before),
            *judge_season(days, desk.season),
        ),
        reasons=(*reasons, *_not_spent(desk)),
    )


def _option(desk: _Desk, way: Way, *, total: Decimal | None, **figures: object) -> Option:
    sums = desk.forecast.sums
    return Option(
        way=way,
        total=total,
        over_technical_percent=sums.over_technical(total),
        over_administrative_percent=sums.over_administrative(total),
        **figures,
    )


def _unsaid(way: Way, field: str, what: str, remedy: str) -> Option:
    """Give a way of which nothing can be said; that blocks it."""
    finding = Finding("option paper", field, what, remedy, "block")
    return Option(way, *(None,) * 7, findings=(finding,), reasons=(what,))


def _again(walk: Appraisal, x: list[float], level: list[float]) -> Appraisal:
    """Walk again along another bottom; tests of the ground say nothing more about it."""
    line = tuple(RockLinePoint(*point) for point in zip(x, level, strict=True))
    pack = replace(walk.pack, rock_line=line, probes=(), soundings=(), refraction=())
    return appraise(pack, schedule=walk.schedule, on=walk.on, practice=walk.practice)


def _closing(desk: _Desk) -> tuple[Decimal, tuple[Quantity, ...]]:
    """Price the filling of what stands open, at the same rates and percentages."""
    walk = desk.forecast.appraisal
    hole = hole_of(walk, desk.site)
    return make_abstract(hole, walk.schedule).total, hole


def _not_spent(desk: _Desk) -> tuple[str, ...]:
    if desk.site.spent is not None:
        return ()
    return ("What was spent so far is not known.",)


def _add(one: Decimal | None, other: Decimal | None) -> Decimal | None:
    return None if one is None or other is None else one + other
