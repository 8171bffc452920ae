"""Settings in force: the handbook's defaults, and what an office put in their place."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from django.db.models import Q

from structures import access
from structures.intake.defaults import WALL
from structures.models import Setting
from structures.validators import CHANGEABLE, DRAWS

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.intake.defaults import Default
    from structures.models import District, User


@dataclass(frozen=True, slots=True)
class SettingLine:
    """One default with its range, mark and owner, and the setting that counts instead, if any."""

    default: Default
    setting: Setting | None

    @property
    def value(self) -> float | None:
        """What counts; None where the default is the office's to say and it has not spoken."""
        return self.default.value if self.setting is None else self.setting.value


def settings_in_force(district: District) -> dict[str, SettingLine]:
    """Every changeable default with what counts in a district: its own word before the office's."""
    found = Setting.objects.filter(Q(district=district) | Q(district__isnull=True))
    chosen: dict[str, Setting] = {}
    for setting in found.select_related("changed_by"):
        if setting.district_id is not None or setting.key not in chosen:
            chosen[setting.key] = setting
    return {key: SettingLine(default, chosen.get(key)) for key, default in CHANGEABLE.items()}


def wall_in_force(district: District) -> dict[str, float]:
    """Wall settings that differ from the defaults, as the `wall` of a survey pack."""
    lines = settings_in_force(district).items()
    return {key: line.value for key, line in lines if key in WALL and line.value != WALL[key].value}


def draws_in_force(district: District) -> int:
    return int(settings_in_force(district)[DRAWS].value)


def visible_settings(user: User) -> QuerySet[Setting]:
    """Settings of the user's districts and those of the whole office."""
    mine = Q(district__in=access.districts(user)) | Q(district__in=access.administered(user))
    everywhere = Q(district__isnull=True)
    return Setting.objects.filter(mine | everywhere).select_related("district", "changed_by")
