"""What is doubted about a well itself: its bottom, its neighbours, a control in the wall's reach."""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import timedelta
from difflib import SequenceMatcher
from typing import TYPE_CHECKING, Final

from structures.errors import Finding
from structures.ground.place import distance_m

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

SAME_WELL_M: Final = 15.0  # WL-03
LIKE_NAMES: Final = 0.8  # share of letters in common, from which names are one spelled twice [A]
SOUNDED_DAYS: Final = 5 * 366  # WL-02: a bottom silts up; older soundings are asked for again [A]
REACH_M: Final = 500.0  # WL-05: a control nearer above the wall than this may rise with it [A]
CONTROL: Final = "control"


@dataclass(frozen=True, slots=True)
class Known:
    """A well as far as others are compared with it; no position is None."""

    code: str
    names: tuple[str, ...] = ()
    position: tuple[float, float] | None = None  # longitude, latitude
    watershed: str = ""


@dataclass(frozen=True, slots=True)
class Facts:
    """What is known of the well that is looked at; distances up the stream are plus."""

    known: Known
    role: str
    bottom_m: float | None
    bottom_sounded_on: date | None
    upstream_of_wall_m: float | None


def well_findings(
    well: Facts, others: Iterable[Known], *, today: date, kept_apart: Iterable[str] = ()
) -> tuple[Finding, ...]:
    """Judge a well.

    Source: field practice, rules WL-02, WL-03 and WL-05; the distances without a source there are
    choices of this project.

    Parameters
    ----------
    others
        Wells of the same watershed.
    kept_apart
        Codes of neighbours that somebody has said are other wells.
    """
    apart = set(kept_apart)
    found = [
        *_bottom(well, today),
        *(
            _twin(well.known, other, why)
            for other in others
            if other.code not in apart and (why := same_well(well.known, other))
        ),
        *_control(well),
    ]
    return tuple(found)


def same_well(one: Known, other: Known) -> str:
    """Say why two wells may be one; empty where nothing says so."""
    if one.code == other.code:
        return ""
    if one.position is not None and other.position is not None:
        away_m = distance_m(one.position, other.position)
        if away_m < SAME_WELL_M:
            return f"{away_m:.0f} m apart"
    names, theirs = _plain(one.names), _plain(other.names)
    return "much the same name" if any(_alike(a, b) for a in names for b in theirs) else ""


def alike_names(one: str, other: str) -> bool:
    """Whether two names are likely one, spelled twice."""
    return any(_alike(a, b) for a in _plain((one,)) for b in _plain((other,)))


def _plain(names: Iterable[str]) -> list[tuple[str, ...]]:
    return [tuple(re.findall(r"\w+", name.casefold())) for name in names if name.strip()]


def _alike(one: tuple[str, ...], other: tuple[str, ...]) -> bool:
    """Whether names agree in their letters, or word by word with words cut short ("c." for "common")."""
    if SequenceMatcher(None, " ".join(one), " ".join(other)).ratio() >= LIKE_NAMES:
        return True
    return len(one) == len(other) and all(
        a.startswith(b) or b.startswith(a) for a, b in zip(one, other, strict=True)
    )


def _bottom(well: Facts, today: date) -> Iterable[Finding]:
    code, on = well.known.code, well.bottom_sounded_on
    if well.bottom_m is not None and on is not None and today - on <= timedelta(days=SOUNDED_DAYS):
        return
    since = f"since {on}" if on else "yet"
    what = f"Bottom of {code} not measured {since}."
    remedy = "A dry reading cannot be used as a limit: sound the bottom."
    yield Finding(code, "bottom_below_ground_m", what, remedy, "warn", "WL-02")


def _twin(one: Known, other: Known, why: str) -> Finding:
    what = f"{one.code} and {other.code} may be one well ({why})."
    return Finding(one.code, "name", what, "Join or keep, with reason.", "hold", "WL-03")


def _control(well: Facts) -> Iterable[Finding]:
    away_m = well.upstream_of_wall_m
    if well.role != CONTROL or away_m is None or not 0.0 <= away_m < REACH_M:
        return
    what = f"Control {well.known.code} is only {away_m:.0f} m from the wall upstream."
    remedy = "It may rise with it: choose one outside the wall's reach."
    yield Finding(well.known.code, "upstream_of_wall_m", what, remedy, "warn", "WL-05")
