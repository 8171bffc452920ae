"""Districts, and defaults that an office changes: by whom, in what range, for what reason."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django.core.exceptions import ValidationError
from django.db import transaction

from structures.access import Act, insist
from structures.actions.refusals import field_findings, refusal
from structures.actions.register import append
from structures.errors import Finding, Refused
from structures.models import District, Setting
from structures.validators import CHANGEABLE, validate_setting

if TYPE_CHECKING:
    from datetime import date

    from structures.models import User

ACT: Final[dict[str, Act]] = {
    Setting.Owner.ENGINEER: Act.SET_ENGINEERING,
    Setting.Owner.DISTRICT: Act.SET_OFFICE,
    Setting.Owner.PROGRAMME: Act.SET_PROGRAMME,
}


@transaction.atomic
def enter_district(*, by: User, **values: Any) -> District:
    """Open a district; for administrators of the whole office.

    Raises
    ------
    Refused
        If a value cannot be, or the code is taken; `findings` names each field.
    """
    insist(by, Act.MANAGE_DISTRICT)
    district = District(**values)
    if District.objects.filter(code=district.code).exists():
        raise Refused(f"{district.code} is taken.", where="code", remedy="Take another code.")
    return _saved(district, by)


@transaction.atomic
def edit_district(*, district_id: int, by: User, **changes: Any) -> District:
    """Change a district's name, zone, currency, water year or day.

    Raises
    ------
    Refused
        If a value cannot be; `findings` names each field.
    """
    district = District.objects.select_for_update().get(pk=district_id)
    insist(by, Act.MANAGE_DISTRICT, district)
    for key, value in changes.items():
        setattr(district, key, value)
    return _saved(district, by)


@transaction.atomic
def change_setting(
    *,
    key: str,
    value: float | None,
    district: District | None,
    reason: str,
    by: User,
    decided: tuple[str, str, date] | None = None,
) -> Setting | None:
    """Put a value in the place of a default, in one district or (None) everywhere.

    Parameters
    ----------
    value
        None takes back what stands where the handbook has no value of its own; the answer is then
        None too.
    decided
        For an engineering default: name and licence number of the engineer, and the day.

    Raises
    ------
    Refused
        If the value is missing or outside its range, the reason or the engineer's word is missing,
        or the user may not change this default.
    """
    try:
        validate_setting(key, value)
    except ValidationError as error:
        raise Refused(error.messages[0], where=key, remedy="Give a value inside it.") from error
    default = CHANGEABLE[key]
    if value is None and default.value is not None:
        raise Refused("This is missing.", where=key, remedy="Give a value.")
    insist(by, ACT[default.owner], district)
    name, licence, on = decided or ("", "", None)
    _check_words(key, default.owner, reason, name, licence, on)
    setting = Setting.objects.select_for_update().filter(key=key, district=district).first()
    if value is None:
        return _taken_back(setting, reason, by)
    setting = setting or Setting(key=key, district=district)
    setting.value, setting.source, setting.owner = value, default.source, default.owner
    setting.reason, setting.changed_by = reason.strip(), by
    setting.decided_by, setting.licence_number = name.strip(), licence.strip()
    setting.decided_on = on
    setting._history_user = by
    setting.save()
    append(
        district=district,
        by=by,
        act="default changed",
        subject=default.words,
        content={
            "key": key,
            "value": value,
            "unit": default.unit,
            "owner": default.owner,
            "reason": setting.reason,
            "decided_by": None if on is None else [name.strip(), licence.strip(), on.isoformat()],
        },
    )
    return setting


def _taken_back(setting: Setting | None, reason: str, by: User) -> None:
    if setting is None:
        raise Refused("Nothing was entered here, so nothing is taken back.", where="value")
    setting.reason = reason.strip()  # the last line of its history says why
    setting._history_user = by
    setting.delete()


def _check_words(
    key: str, owner: str, reason: str, name: str, licence: str, on: date | None
) -> None:
    lacking = {} if reason.strip() else {"reason": "Write why it is changed."}
    if owner == Setting.Owner.ENGINEER:
        signed = "A default of the engineer: name the licensed engineer, the licence and the day."
        given = {"decided_by": name.strip(), "licence_number": licence.strip(), "decided_on": on}
        lacking |= {field: signed for field, said in given.items() if not said}
    if lacking:
        found = [Finding(key, field, "This is missing.", words) for field, words in lacking.items()]
        raise refusal(found, "setting")


def _saved(district: District, by: User) -> District:
    wrong = field_findings(district, district.code or "district")
    if not wrong and district.as_of is not None and not district.invented:
        what = "Only an invented district stands still on a day."
        wrong = (Finding(district.code, "as_of", what, "Leave the day out."),)
    if wrong:
        raise refusal(wrong, "district")
    district._history_user = by
    district.save()
    return district
