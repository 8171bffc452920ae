"""Fixed openings that cannot stand together, and the fewest sites between which it fails."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from costing.plan.deletion import smallest_excess
from costing.plan.season import SEASONAL, WEEKLY
from costing.plan.wording import asked, at_hand, names_of, weeks_text
from structures.errors import Finding, Refused

if TYPE_CHECKING:
    from collections.abc import Iterator
    from decimal import Decimal

    from costing.plan.season import Season, SeasonSite


@dataclass(frozen=True, slots=True)
class Clash:
    """Fixed openings that no plan can keep.

    `sites` is a smallest set: free any one of them and this clash is gone. `limit` names what they
    exceed (`window`, or a limit of the season), `weeks` when, where it is one of each week.
    """

    sites: tuple[str, ...]
    limit: str
    weeks: tuple[int, ...]
    what: str


def clashes(season: Season) -> tuple[Clash, ...]:
    """Say what forbids the fixed openings: none, or one clash a site or limit, the smallest of each.

    Source: deletion filter, limit by limit. Sites without a fixed opening can always be left out,
    so only the fixed ones are looked at.
    """
    fixed = [site for site in season.sites if site.open_week is not None]
    outside = [site for site in fixed if not season.openings(site)]
    found = [_window(season, site) for site in outside]
    inside = [site for site in fixed if season.openings(site)]
    for name in season.weekly:
        found += _weekly(season, inside, name)
    for name in season.seasonal:
        found += _seasonal(season, fixed, name)
    return tuple(found)


def _window(season: Season, site: SeasonSite) -> Clash:
    """Say why a fixed opening lies outside of what the site alone allows."""
    week, last = site.open_week, season.last_opening(site)
    why = f"it is ready in week {site.ready_week}"
    if week >= site.ready_week:
        end = min(site.latest_close_week, season.weeks)
        why = (
            f"with {site.duration_weeks} weeks of work it closes in week {site.close_week(week)}, "
            f"after week {end}; the last week to open is {last}"
            if last >= site.ready_week
            else f"no week can be kept: ready week {site.ready_week} + {site.duration_weeks} weeks "
            f"passes week {end}"
        )
    return Clash((site.site,), "window", (), f"{site.site} cannot open in week {week}: {why}.")


def _weekly(season: Season, fixed: list[SeasonSite], name: str) -> Iterator[Clash]:
    limit, use = season.weekly[name], WEEKLY[name]
    by_set: dict[tuple[str, ...], list[int]] = {}
    for week in range(1, season.weeks + 1):
        uses = {
            site.site: getattr(site, use)
            for site in fixed
            if site.open_week <= week <= site.close_week(site.open_week)
        }
        if sum(uses.values()) > limit:
            by_set.setdefault(_fewest(uses, limit), []).append(week)
    if by_set:
        sites = min(by_set, key=lambda names: (len(names), by_set[names]))
        together = sum(getattr(site, use) for site in fixed if site.site in sites)
        verb = "need" if len(sites) > 1 else "needs"
        what = (
            f"{_opened(fixed, sites)} {verb} {asked(name, together)} in "
            f"{weeks_text(by_set[sites])}; {at_hand(name, limit)}."
        )
        yield Clash(sites, name, tuple(by_set[sites]), what)


def _seasonal(season: Season, fixed: list[SeasonSite], name: str) -> Iterator[Clash]:
    limit, use = season.seasonal[name], SEASONAL[name]
    uses = {site.site: getattr(site, use) for site in fixed}
    if sum(uses.values()) > limit:
        sites = _fewest(uses, limit)
        together = asked(name, sum(uses[code] for code in sites))
        verb = "need" if len(sites) > 1 else "needs"
        what = f"{names_of(sites)} {verb} {together} together; {at_hand(name, limit)}."
        if len(sites) == 1:
            what = f"{sites[0]} {verb} {together}; {at_hand(name, limit)}."
        yield Clash(sites, name, (), what)


def _fewest(uses: dict[str, int | Decimal], limit: int | Decimal) -> tuple[str, ...]:
    """Give the fewest sites that exceed a limit, in the order of the season."""
    fewest = smallest_excess(uses, limit)
    return tuple(code for code in uses if code in fewest)


def _opened(fixed: list[SeasonSite], codes: tuple[str, ...]) -> str:
    weeks = {site.site: site.open_week for site in fixed}
    return names_of([f"{code} (opens in week {weeks[code]})" for code in codes])


def clash_refusal(name: str, found: tuple[Clash, ...]) -> Refused:
    """Give the refusal of a season whose fixed openings clash.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    found
        One clash or more.
    """
    findings = tuple(Finding(name, "open_week", one.what, _remedy(one)) for one in found)
    first = findings[0]
    return Refused(first.what, where=name, remedy=first.remedy, findings=findings)


def _remedy(clash: Clash) -> str:
    if clash.limit == "window":
        return "Move its open_week, or leave it out to let the plan choose."
    few = "it" if len(clash.sites) == 1 else "one of them"
    moved = "Move or free" if clash.weeks else "Free"
    return f"{moved} {few} (leave open_week out), or raise the limit."
