"""Weeks, sites and limits of a season in words."""

from __future__ import annotations

from decimal import Decimal
from itertools import pairwise
from typing import TYPE_CHECKING, Final

from costing.price.money import money_text

if TYPE_CHECKING:
    from collections.abc import Sequence

NAMES_MOST: Final = 6  # sites that a sentence names before it counts the rest
ONE_OF: Final = {"gangs": "gang", "pumps": "pump"}
LABELS: Final = {"budget": "budget", "clay_m3": "clay"}


def asked(name: str, amount: int | Decimal) -> str:
    """Write an amount of a limit with its unit, like "2 gangs" or "40.5 m3 of clay"."""
    if name in ONE_OF:
        return f"{amount} {ONE_OF[name] if amount == 1 else name}"
    return (
        f"{amount_text(name, amount)} of clay" if name == "clay_m3" else amount_text(name, amount)
    )


def amount_text(name: str, amount: int | Decimal) -> str:
    """Write money with two decimals, clay in cubic metres."""
    return money_text(Decimal(amount)) if name == "budget" else f"{amount} m3"


def at_hand(name: str, limit: int | Decimal) -> str:
    """Write what the season offers, like "there are 6 gangs"."""
    if name == "budget":
        return f"the budget is {money_text(limit)}"
    return f"there {'is' if limit == 1 or name == 'clay_m3' else 'are'} {asked(name, limit)}"


def names_of(names: Sequence[str], *, most: int | None = None) -> str:
    """Join names: "A", "A and B", "A, B and C", or "A, B and 3 more" beyond `most`."""
    shown = list(names)
    if most is not None and len(shown) > most:
        shown = [*shown[: most - 1], f"{len(shown) - most + 1} more"]
    if len(shown) < 2:
        return "".join(shown)
    return f"{', '.join(shown[:-1])} and {shown[-1]}"


def weeks_text(weeks: Sequence[int]) -> str:
    """Write sorted weeks as runs: "week 3", "weeks 3 to 5", "weeks 3 to 5 and 8"."""
    starts = [weeks[0], *(late for early, late in pairwise(weeks) if late > early + 1)]
    ends = [*(early for early, late in pairwise(weeks) if late > early + 1), weeks[-1]]
    runs = [
        f"{start}" if start == end else f"{start} to {end}"
        for start, end in zip(starts, ends, strict=True)
    ]
    return f"{'week' if len(weeks) == 1 else 'weeks'} {names_of(runs)}"
