"""A season from JSON: what there is, and what each site asks for; strict, with every finding."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from costing.plan.season import Season, SeasonSite
from costing.price.money import to_cents
from costing.price.rate_cells import read_decimal
from structures.intake.archive import too_large
from structures.intake.builder import refusal
from structures.intake.fields import Field
from structures.intake.json_form import read_json
from structures.intake.tree import Ledger, Node, shown
from structures.intake.values import read_fields, tell_missing

if TYPE_CHECKING:
    from decimal import Decimal

# Sanity limits of this project: beyond them a value is a slip, or no plan of one season.
WEEKS_MOST: Final = 104
SITES_MOST: Final = 2000
GANGS_MOST: Final = 1000
MONEY_MOST: Final = 1e12
CLAY_MOST_M3: Final = 1e7
BENEFIT_MOST: Final = 1e9

FROM_ONE: Final = ("Week {value:g} is not one: weeks count from 1.", "The season's first is 1.")
NO_TIME: Final = ("A work of {value:g} weeks cannot be planned.", "Give whole weeks, at least 1.")
NO_GANG: Final = ("A site with {value:g} gangs is not worked on.", "Give at least 1.")
NO_WEEK: Final = ("A season of {value:g} weeks has no room.", "Give its whole weeks, at least 1.")


def _whole(
    key: str, words: str, high: int, *, low: int = 1, required: bool = True, **says: tuple[str, str]
) -> Field:
    return Field(key, words, "whole", low=low, high=high, required=required, **says)


LIMITS: Final = (
    _whole("weeks", "number of weeks of the season", WEEKS_MOST, low_says=NO_WEEK),
    _whole("gangs", "number of gangs that can work in any one week", GANGS_MOST, low=0),
    _whole("pumps", "pumps at hand in any one week", GANGS_MOST, low=0, required=False),
)
SITE: Final = (
    Field("site", "code of the site", "code", required=True),
    _whole("ready_week", "first week in which it may open", WEEKS_MOST, low_says=FROM_ONE),
    _whole(
        "latest_close_week",
        "last week by whose end it must be closed",
        10 * WEEKS_MOST,
        low_says=FROM_ONE,
    ),
    _whole("duration_weeks", "weeks from opening to closing", WEEKS_MOST, low_says=NO_TIME),
    _whole("gangs", "number of gangs at work there in each week", GANGS_MOST, low_says=NO_GANG),
    Field(
        "benefit", "benefit of closing it this season", low=0.0, high=BENEFIT_MOST, required=True
    ),
    _whole(
        "pumps",
        "pumps it holds in each week, 0 for a dry trench",
        GANGS_MOST,
        low=0,
        required=False,
    ),
    _whole(
        "open_week", "week in which it is to open", WEEKS_MOST, required=False, low_says=FROM_ONE
    ),
)
BUDGET: Final = Field("budget", "money for the season", low=0.0, high=MONEY_MOST)
COST: Final = Field("cost", "cost of the site", low=0.0, high=MONEY_MOST)
CLAY: Final = Field("clay_m3", "clay", unit="m3", low=0.0, high=CLAY_MOST_M3)


def read_season(name: str, data: bytes) -> Season:
    """Read a season.

    Source: interface, season plan. Money is text like "240000.00"; a number is taken as written.
    `budget` may be null where money sets no limit, but is not left out. `pumps` (in each week) and
    `clay_m3` (once for the season) are further limits: with one of them every site says what it
    takes, and without it no site does.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    data
        One JSON document.

    Raises
    ------
    Refused
        If the season cannot be planned; `findings` names each site and field.
    """
    ledger = Ledger()
    if what := too_large(len(data)):
        ledger.add(Node(None, name), what, "Send one season.")
        raise refusal(ledger, "season")
    root = read_json(name, data)
    limits = read_fields(root, LIMITS, ledger, closed=True, apart=("budget", "clay_m3", "sites"))
    if not isinstance(root.value, dict):
        raise refusal(ledger, "season")
    budget = _budget(root.named("budget"), ledger, given="budget" in root.value)
    clay_m3 = _exact(root.named("clay_m3"), CLAY, ledger)
    sites = _sites(root, ledger)
    if ledger.blocks:
        raise refusal(ledger, "season")
    return Season(**limits, budget=budget, clay_m3=clay_m3, sites=sites)


def _sites(root: Node, ledger: Ledger) -> tuple[SeasonSite, ...]:
    node = root.named("sites")
    if node.value is None:
        ledger.add(node, "The sites are missing.", "Give a list of sites, each an object.")
        return ()
    if not isinstance(node.value, list):
        ledger.add(node, f"A list of sites is wanted, not {shown(node.value)}.", "Write [ ... ].")
        return ()
    if len(node.value) > SITES_MOST:
        what = f"{len(node.value)} sites are more than {SITES_MOST}."
        ledger.add(node, what, "Plan one district at a time.")
        return ()
    limited = {key for key in ("pumps", "clay_m3") if not root.named(key).blank}
    sites: list[SeasonSite] = []
    places: dict[str, str] = {}
    for place, value in enumerate(node.value):
        code = value.get("site") if isinstance(value, dict) else None
        label = f" ({shown(code)[1:-1]})" if isinstance(code, str) and code else ""
        one = Node(value, f"{node.where}[{place}]{label}")
        site = _site(one, limited, ledger)
        if isinstance(code, str) and places.setdefault(code.strip(), one.where) != one.where:
            what = f"This site stands at {places[code.strip()]} already."
            ledger.add(one.named("site"), what, "Keep one of them.")
        if site is not None:
            sites.append(site)
    return tuple(sites)


def _site(node: Node, limited: set[str], ledger: Ledger) -> SeasonSite | None:
    blocks = ledger.blocks
    values = read_fields(node, SITE, ledger, closed=True, apart=("cost", "clay_m3"))
    if not isinstance(node.value, dict):
        return None
    if node.named("cost").blank:
        tell_missing(node.named("cost"), COST, ledger)
    cost = _exact(node.named("cost"), COST, ledger)
    clay_m3 = _exact(node.named("clay_m3"), CLAY, ledger)
    for key in ("pumps", "clay_m3"):
        _same_as_season(node.named(key), key, ledger, limited=key in limited)
    if ledger.blocks > blocks:
        return None
    return SeasonSite(**values, cost=cost, clay_m3=clay_m3)


def _same_as_season(node: Node, key: str, ledger: Ledger, *, limited: bool) -> None:
    """Insist that a further limit is given for the season and for every site, or for none."""
    if limited and node.blank:
        what = f"The season has a limit of {key}, and this site does not say what it takes."
        ledger.add(node, what, "Give it; 0 where it takes nothing.")
    if not limited and not node.blank:
        what = f"The site takes {key}, and the season does not say how much there is."
        ledger.add(node, what, f"Give {key} beside weeks and gangs, or leave it out of every site.")


def _budget(node: Node, ledger: Ledger, *, given: bool) -> Decimal | None:
    if not given:
        remedy = 'Give the money for the season like "240000.00", or null where it sets no limit.'
        ledger.add(node, "This is missing.", remedy)
    return _exact(node, BUDGET, ledger)


def _exact(node: Node, field: Field, ledger: Ledger) -> Decimal | None:
    """Read money or clay exactly, with two decimals at most."""
    if node.blank:
        return None
    exact = read_decimal(node, field, ledger)
    if exact is not None and to_cents(exact) != exact:
        what = f"{shown(node.value)} has more than two decimals."
        ledger.add(node, what, "Round it to hundredths.")
        return None
    return exact
