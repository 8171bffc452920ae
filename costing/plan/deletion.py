"""The deletion filter: what is left when nothing more can be taken away."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence
    from decimal import Decimal

Item = TypeVar("Item")


def smallest_excess(uses: Mapping[str, int | Decimal], limit: int | Decimal) -> list[str]:
    """Give the fewest names whose uses together exceed a limit, the largest uses of all.

    Raises
    ------
    ValueError
        If all of them together keep the limit.
    """
    order = sorted(uses, key=lambda name: (uses[name], name))
    return irreducible(order, lambda kept: sum(uses[name] for name in kept) > limit)


def irreducible(items: Sequence[Item], clash: Callable[[Sequence[Item]], bool]) -> list[Item]:
    """Give a set that clashes and of which no member can be spared.

    Source: deletion filter for irreducible infeasible sets: each member in turn is taken away for
    good if what is left still clashes. Where the clash is a sum above a limit and the members come
    by rising size, the largest are left, and no clashing set has fewer members.

    Parameters
    ----------
    items
        Members in the order in which they are tried.
    clash
        Whether a set clashes; a larger set of one that clashes does so too.

    Raises
    ------
    ValueError
        If the whole does not clash.
    """
    kept = list(items)
    if not clash(kept):
        raise ValueError("nothing clashes here")
    for item in items:
        rest = [other for other in kept if other is not item]
        if clash(rest):
            kept = rest
    return kept
