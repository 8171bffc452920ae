"""Roles in the words of a sentence: whom to ask, and who can bring what is missing.

Source: the office's practice, "people, days and devices". Contractor, committee and funder sign;
they have no account and no role.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Iterable

FIELD: Final = "field"
ENGINEER: Final = "engineer"
DISTRICT: Final = "district"
PROGRAMME: Final = "programme"
AUDITOR: Final = "auditor"
ADMIN: Final = "admin"
ROLES: Final[dict[str, tuple[str, str]]] = {  # role -> (as a title, as somebody to ask)
    FIELD: ("Field staff", "field staff"),
    ENGINEER: ("An engineer", "an engineer"),
    DISTRICT: ("A district officer", "a district officer"),
    PROGRAMME: ("The programme manager", "the programme manager"),
    AUDITOR: ("An auditor", "an auditor"),
    ADMIN: ("An administrator", "an administrator"),
}


def whom(roles: Iterable[str]) -> str:
    """Name roles as those to ask: "field staff, an engineer or a district officer".

    Raises
    ------
    KeyError
        If a role is unknown.
    ValueError
        If there is none.
    """
    *first, last = (ROLES[role][1] for role in in_order(roles))
    return f"{', '.join(first)} or {last}" if first else last


def title(roles: Iterable[str]) -> str:
    """Name roles at the head of a sentence; somebody without a posting is told so."""
    found = in_order(roles)
    if not found:
        return "Somebody without a posting here"
    words = [ROLES[role][0] for role in found[:1]] + [ROLES[role][1] for role in found[1:]]
    return " and ".join(words)


def in_order(roles: Iterable[str]) -> tuple[str, ...]:
    """Give roles once each, from the stream bed upwards.

    Raises
    ------
    KeyError
        If a role is unknown.
    """
    wanted = set(roles)
    unknown = wanted - set(ROLES)
    if unknown:
        raise KeyError(f"unknown role {sorted(unknown)[0]!r}")
    return tuple(role for role in ROLES if role in wanted)
