"""Districts, and defaults that an office changes."""

from __future__ import annotations

from datetime import date

import pytest

from structures.actions.settings import change_setting, edit_district, enter_district
from structures.errors import Refused
from structures.models import Role, Setting
from structures.queries.districts import administered_districts, today_of, visible_districts
from structures.queries.settings import counted_in, settings_in_force, visible_settings
from tests.factories import a_district, a_user, an_engineer

pytestmark = pytest.mark.django_db
SIGNED = ("N. Surveyor", "L-77", date(2026, 4, 1))


@pytest.fixture
def district():
    return a_district()


@pytest.fixture
def admin(district):
    return a_user(Role.ADMIN, district)


def change(district, by, key="thickness_m", value=1.2, **more):
    words = {"reason": "soft banks", "decided": SIGNED, **more}
    return change_setting(key=key, value=value, district=district, by=by, **words)


def test_an_engineering_default_keeps_who_decided_it(district, admin):
    setting = change(district, admin)
    assert (setting.owner, setting.source, setting.value) == ("E", "C", 1.2)
    assert (setting.decided_by, setting.licence_number, setting.decided_on) == SIGNED
    assert setting.history.get().history_user == admin
    change(district, admin, value=1.3)
    assert [row.value for row in setting.history.all()] == [1.3, 1.2]
    assert Setting.objects.count() == 1


def test_an_engineering_default_without_the_engineer_is_refused(district, admin):
    with pytest.raises(Refused) as refused:
        change(district, admin, decided=("N. Surveyor", " ", None), reason="")
    assert [one.field for one in refused.value.findings] == [
        "reason",
        "licence_number",
        "decided_on",
    ]
    assert not Setting.objects.exists()


@pytest.mark.parametrize(
    ("key", "value", "words"),
    [
        ("thickness_m", 0.5, "thickness_m: 0.5 m is outside 0.6 to 1.5. Give a value inside it."),
        ("thickness", 1.0, "thickness: There is no setting thickness."),
    ],
)
def test_a_value_out_of_its_range_is_refused(district, admin, key, value, words):
    """Oracle: handbook section 12."""
    with pytest.raises(Refused) as refused:
        change(district, admin, key, value)
    assert refused.value.sentence().startswith(words)


@pytest.mark.parametrize(
    ("key", "value", "roles"),
    [
        ("thickness_m", 1.2, {Role.ENGINEER, Role.ADMIN}),
        ("lift_m", 1.2, {Role.DISTRICT, Role.ADMIN}),
        ("risk_draws", 4000, {Role.PROGRAMME, Role.ADMIN}),
    ],
)
def test_each_default_has_its_owner(district, key, value, roles):
    """Oracle: handbook section 12, column "who"; the administrator enters what others decided."""
    for role in Role:
        user = a_user(role, district)
        if role in roles:
            assert change(district, user, key, value).changed_by == user
        else:
            with pytest.raises(Refused, match="You may not change a"):
                change(district, user, key, value)


def test_a_district_goes_before_the_office_and_the_office_before_the_handbook(district, admin):
    office, other = a_user(Role.ADMIN), a_district("ZZ")
    change(None, office, value=1.1)
    change(None, office, "risk_draws", 4000)
    change(district, admin, value=1.2)
    assert counted_in(district).wall == {"thickness_m": 1.2}
    assert counted_in(other).wall == {"thickness_m": 1.1}
    assert counted_in(district).draws == 4000
    line = settings_in_force(other)["key_m"]
    assert (line.value, line.default.source, line.setting) == (0.15, "A", None)


def test_only_the_office_changes_a_default_everywhere(admin):
    with pytest.raises(Refused, match="You may not change an engineering default here"):
        change(None, admin)


def test_settings_of_other_districts_are_not_seen(district, admin):
    change(district, admin)
    change(None, a_user(Role.ADMIN), value=1.1)
    assert sorted(one.value for one in visible_settings(admin)) == [1.1, 1.2]
    assert [one.value for one in visible_settings(an_engineer(a_district("ZZ")))] == [1.1]


class TestDistrict:
    values = {"code": "KE", "name": "Keldun", "zone": "Asia/Kolkata", "currency": "INR"}

    def test_the_office_opens_one_and_its_administrator_edits_it(self):
        office = a_user(Role.ADMIN)
        district = enter_district(by=office, **self.values)
        assert list(administered_districts(office)) == [district]
        assert visible_districts(office).count() == 0
        admin = a_user(Role.ADMIN, district)
        edited = edit_district(district_id=district.pk, by=admin, name="Keldun east")
        assert [row.name for row in edited.history.all()] == ["Keldun east", "Keldun"]

    def test_an_administrator_of_a_district_opens_no_other(self, admin):
        with pytest.raises(Refused, match="You may not manage a district here"):
            enter_district(by=admin, **self.values)

    @pytest.mark.parametrize(
        ("changes", "words"),
        [
            ({"code": "QU"}, "code: QU is taken. Take another code."),
            ({"zone": "Mars/Base"}, "KE, zone: Mars/Base is no time zone."),
            ({"currency": "rupee"}, "KE, currency: "),
            (
                {"as_of": date(2026, 4, 10)},
                "KE, as_of: Only an invented district stands still on a day. Leave the day out.",
            ),
        ],
    )
    @pytest.mark.usefixtures("district")
    def test_one_that_cannot_be(self, changes, words):
        with pytest.raises(Refused) as refused:
            enter_district(by=a_user(Role.ADMIN), **{**self.values, **changes})
        first = refused.value.findings[0].sentence() if refused.value.findings else ""
        assert (first or refused.value.sentence()).startswith(words)

    def test_its_today_is_its_own_day_or_that_of_its_zone(self):
        """Oracle: Kiritimati is 25 hours ahead of Niue all year (+14 and -11)."""
        stands = a_district("A", invented=True, as_of=date(2026, 4, 10))
        assert today_of(stands) == date(2026, 4, 10)
        east, west = (
            a_district("B", zone="Pacific/Kiritimati"),
            a_district("C", zone="Pacific/Niue"),
        )
        assert (today_of(east) - today_of(west)).days in {1, 2}
