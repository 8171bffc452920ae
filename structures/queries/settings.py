"""Settings in force: the handbook's defaults, and what an office put in their place."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from django.db.models import Q

from structures import access
from structures.intake.defaults import WALL
from structures.intake.practice import KEYS, Decision, Practice, make_practice
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


@dataclass(frozen=True, slots=True)
class Counted:
    """What counts in a district for an appraisal, by its three ways in.

    `wall` holds what differs from the defaults, as the `wall` of a survey pack.
    """

    wall: dict[str, float]
    draws: int
    practice: Practice


def counted_in(district: District) -> Counted:
    """What an appraisal of a site of the district is computed with."""
    lines = settings_in_force(district)
    changed = {key: line.value for key, line in lines.items() if line.value != line.default.value}
    taken = {key for key in changed if key in WALL or key in KEYS}
    return Counted(
        wall={key: changed[key] for key in changed if key in WALL},
        draws=int(lines[DRAWS].value),
        practice=make_practice(
            changed,
            tuple(
                _decision(lines[key].setting)
                for key in lines
                if key in taken and lines[key].default.owner == Setting.Owner.ENGINEER
            ),
        ),
    )


def _decision(setting: Setting) -> Decision:
    return Decision(
        key=setting.key,
        value=setting.value,
        name=setting.decided_by,
        licence=setting.licence_number,
        on=setting.decided_on,
        reason=setting.reason,
    )


def visible_settings(user: User) -> QuerySet[Setting]:
    """Settings of the user's districts and those of the whole office."""
    mine = Q(district__in=access.districts(user)) | Q(district__in=access.administered(user))
    everywhere = Q(district__isnull=True)
    return Setting.objects.filter(mine | everywhere).select_related("district", "changed_by")
