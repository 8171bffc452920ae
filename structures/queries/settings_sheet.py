"""Whose settings a reader may see, what became of one, and the defaults that nobody changes here."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from django.db.models import Q

from structures import access
from structures.intake.defaults import FIXED, GROUPS
from structures.models import District, Setting
from structures.queries.settings import settings_in_force
from structures.validators import CHANGEABLE

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.intake.defaults import Default
    from structures.models import User
    from structures.queries.settings import SettingLine

FIGURES: Final = tuple(FIXED.values())  # those that no office changes


def settings_by_group(district: District) -> dict[str, list[SettingLine]]:
    """What counts in a district, in the groups in which the handbook's table is read."""
    lines = settings_in_force(district)
    return {words: [lines[key] for key in table] for words, table in GROUPS.items()}


def settings_districts(user: User) -> QuerySet[District]:
    """Districts whose settings the user may read: served in, or kept."""
    serves, keeps = access.districts(user), access.administered(user)
    return District.objects.filter(Q(pk__in=serves) | Q(pk__in=keeps)).order_by("code")


def least_in_force(user: User, key: str) -> float:
    """Least of what counts in the user's districts; the default where there are none."""
    found = [settings_in_force(one)[key].value for one in settings_districts(user)]
    return min(found, default=CHANGEABLE[key].value)


def changeable_default(key: str) -> Default | None:
    return CHANGEABLE.get(key)


def setting_history(key: str, district: District | None) -> QuerySet[Setting]:
    """What a setting was, newest first, with who changed it."""
    kept = Setting.history.filter(key=key, district=district)
    return kept.select_related("history_user").order_by("-history_date", "-history_id")


def setting_of(key: str, district: District | None) -> Setting | None:
    """The setting that stands exactly there, not one that counts from elsewhere."""
    return Setting.objects.filter(key=key, district=district).first()
