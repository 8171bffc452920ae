"""Sites entered one by one or as a list, and one site edited by two people."""

from __future__ import annotations

import io
import zipfile
from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.actions.sites import bulk_enter_sites, edit_site, enter_site, next_code
from structures.errors import Refused
from structures.models import Role, Site, Structure, Upload
from structures.queries.sites import visible_sites
from tests.factories import a_district, a_site, a_user, a_watershed, an_engineer, book_bytes

HEADING = "code,watershed,name,stream,lat,lon,accuracy_m,downstream_users"
GOOD = "OD-01,OD,Nolkurava bend,Odre,15.75,77.45,5,none found within 2 km"


@pytest.fixture
def watershed(db):
    return a_watershed()


@pytest.fixture
def engineer(watershed):
    return an_engineer(watershed.district)


def enter(watershed, by, *rows, heading=HEADING):
    data = "\n".join([heading, *rows]).encode()
    return bulk_enter_sites(district_id=watershed.district_id, name="s.csv", data=data, by=by)


def sentences(refused):
    return [one.sentence() for one in refused.value.findings if one.level == "block"]


def test_a_list_becomes_sites_with_stream_and_stage(watershed, engineer):
    second = GOOD.replace("OD-01", "OD-02").replace("15.75", "15.76")
    kept = enter(watershed, engineer, GOOD, second)
    assert [site.code for site in kept] == ["OD-01", "OD-02"]
    site = visible_sites(engineer).get(code="OD-01")
    assert (site.name, site.stream.name, site.lat, site.lon) == (
        "Nolkurava bend",
        "Odre",
        15.75,
        77.45,
    )
    assert (site.structure.stage, site.revision, site.findings) == ("noted", 1, [])
    assert site.history.get().history_user == engineer
    assert watershed.streams.count() == 1
    upload = Upload.objects.get()
    assert (upload.rows_in, upload.rows_kept, upload.rows_held) == (2, 2, 0)


class TestWorkbook:
    """A list kept as XLSX: the same rules, each finding at its cell."""

    HEADS = ("code", "watershed", "name", "lat", "lon", "downstream_users")
    ROW = ("OD-01", "OD", "Nolkurava bend", 15.75, 77.45, "none found within 2 km")

    def enter(self, watershed, by, **sheets):
        data = book_bytes(**sheets)
        return bulk_enter_sites(district_id=watershed.district_id, name="s.xlsx", data=data, by=by)

    def test_a_sheet_is_read_as_the_same_list_in_csv_is(self, watershed, engineer):
        kept = self.enter(watershed, engineer, anything=[self.HEADS, self.ROW])
        assert [(one.code, one.name, one.lat) for one in kept] == [
            ("OD-01", "Nolkurava bend", 15.75)
        ]
        assert Upload.objects.get().findings == []

    def test_findings_name_the_cell(self, watershed, engineer):
        wrong = (*self.ROW[:3], 95.0, *self.ROW[4:])
        nowhere = ("OD-02", "ZZ", "", 15.75, 77.45, "none")
        with pytest.raises(Refused) as refused:
            self.enter(watershed, engineer, sites=[self.HEADS, wrong, nowhere])
        assert sentences(refused) == [
            (
                "s.xlsx sites!D2, lat: 95 is no latitude: -90 to 90 degrees. "
                "Exchanged with the other, or not in degrees?"
            ),
            (
                "s.xlsx sites!B3, watershed: There is no such watershed where you may enter "
                "sites. Choose one of: OD."
            ),
        ]
        assert not Site.objects.exists()

    def test_of_several_sheets_the_one_named_so_is_read(self, watershed, engineer):
        kept = self.enter(
            watershed, engineer, cover=[("Sites of 2026",)], Sites=[self.HEADS, self.ROW], rest=[]
        )
        assert len(kept) == 1
        assert [(one["level"], one["what"]) for one in Upload.objects.get().findings] == [
            ("note", "Only the sheet Sites is read; the others stay in the file.")
        ]

    @pytest.mark.parametrize(
        ("sheets", "sentence"),
        [
            (
                {"one": [("code",)], "two": [("code",)]},
                (
                    "s.xlsx: Sheets with something in them: 2; none is the one to read. "
                    "Name one sheet sites."
                ),
            ),
            (
                {"one": []},
                (
                    "s.xlsx: Sheets with something in them: 0; none is the one to read. "
                    "Fill one, and send it again."
                ),
            ),
            (
                {"sites": [HEADS]},
                "s.xlsx sites: Only headings are here, no row. Fill it, or leave it out.",
            ),
        ],
    )
    def test_a_workbook_without_a_list_is_refused(self, watershed, engineer, sheets, sentence):
        with pytest.raises(Refused) as refused:
            self.enter(watershed, engineer, **sheets)
        assert sentences(refused) == [sentence]

    def test_a_zip_that_is_no_workbook_is_refused(self, watershed, engineer):
        data = io.BytesIO()
        with zipfile.ZipFile(data, "w") as archive:
            archive.writestr("sites.csv", f"{HEADING}\n{GOOD}")
        with pytest.raises(Refused, match="This is an archive or a workbook, not a table"):
            bulk_enter_sites(
                district_id=watershed.district_id,
                name="s.zip",
                data=data.getvalue(),
                by=engineer,
            )


def test_a_site_begins_on_the_day_of_its_district(db):
    district = a_district(invented=True, as_of=date(2026, 4, 10))
    watershed = a_watershed(district)
    (site,) = enter(watershed, an_engineer(district), GOOD)
    assert Structure.objects.get(site=site).since == date(2026, 4, 10)


def test_degrees_minutes_and_seconds_and_other_headings(watershed, engineer):
    """Oracle: 43 min 30 s = 0.725 degrees, 26 min 15 s = 0.4375 degrees."""
    (site,) = enter(
        watershed,
        engineer,
        "OD-01;OD;N 15°43'30 E 77°26'15",
        heading="site_id;watershed;position",
    )
    assert (site.code, site.lat, site.lon) == ("OD-01", 15.725, 77.4375)


def test_all_findings_of_a_list_come_at_once_and_nothing_is_kept(watershed, engineer):
    with pytest.raises(Refused) as refused:
        enter(
            watershed,
            engineer,
            GOOD,
            "OD-01,OD,,,15.76,77.46,,",
            "OD-02,XX,,,15.76,77.46,,",
            "OD-03,OD,,,,77.46,,",
            "OD-04,OD,,,98.76,77.46,,",
            "OD-05,OD,,,north,77.46,-3,",
            f"OD-06,OD,{'x' * 121},,15.76,77.46,,",
        )
    assert refused.value.what == "7 things are wrong in this list of sites. Nothing was kept."
    assert sentences(refused) == [
        "s.csv line 3, code: OD-01 is taken. Codes are not used twice; take OD-02.",
        (
            "s.csv line 4, watershed: There is no such watershed where you may enter sites. "
            "Choose one of: OD."
        ),
        (
            "s.csv line 5, lat: No position for OD-03. Stand on the line and take it, or type it from "
            "the map sheet and say so."
        ),
        (
            "s.csv line 6, lat: 98.76 is no latitude: -90 to 90 degrees. "
            "Exchanged with the other, or not in degrees?"
        ),
        (
            "s.csv line 7, accuracy_m: -3 is outside what is accepted, above 0 to 10000 m. "
            "Look for a slip in the decimal point or the unit."
        ),
        (
            's.csv line 7, lat: "north" is no latitude. '
            "Write degrees like 15.7237, or degrees, minutes and seconds with N, S, E or W."
        ),
        "s.csv line 8, name: The text has 121 characters. Keep it to 120.",
    ]
    assert not Site.objects.exists()
    assert Upload.objects.get().outcome == "refused"


def test_swapped_coordinates_are_kept_in_doubt_with_the_suggestion(watershed, engineer):
    """Source: PL-02. The square of the watershed lies at 15.7 to 15.8 N, 77.4 to 77.5 E."""
    swapped = GOOD.replace("15.75,77.45", "77.45,15.75")
    (site,) = enter(watershed, engineer, swapped)
    (found,) = site.findings
    assert (found["rule"], found["level"]) == ("PL-02", "hold")
    assert found["remedy"] == (
        "Swapped, latitude 15.75 and longitude 77.45 lie inside: is that meant?"
    )
    assert "outside Odremma." in found["what"]
    assert Upload.objects.get().rows_held == 1


def test_what_is_doubted_of_a_site(watershed, engineer):
    """Source: PL-03 (30 m), PL-04 (50 m), PL-05. 0.0004 degrees of latitude are 44 m."""
    enter(watershed, engineer, GOOD)
    doubtful = "OD-02,OD,,,15.7504,77.45,31,"
    (site,) = enter(watershed, engineer, doubtful)
    assert [(one["rule"], one["level"], one["what"]) for one in site.findings] == [
        ("PL-03", "warn", "Position of OD-02 is only good to 31 m."),
        ("PL-04", "hold", "OD-01 is 44 m away."),
        ("PL-05", "hold", "Who uses water below OD-02 is blank."),
    ]
    apart = "OD-03,OD,,,15.7510,77.45,30,none"
    assert enter(watershed, engineer, apart)[0].findings == []


def test_of_several_near_places_the_nearest_is_named(watershed, engineer):
    """Oracle: a degree of latitude is 110.6 km there, so 0.0003 and 0.0002 degrees are 33 and 22 m;
    0.0004 degrees of longitude at 15.75 N are 43 m."""
    a_site(watershed, "A", lat=15.75, lon=77.45)
    a_site(watershed, "B", lat=15.7505, lon=77.45)
    (site,) = enter(watershed, engineer, "OD-02,OD,,,15.7503,77.45,5,none")
    assert [one["what"] for one in site.findings] == ["B is 22 m away."]
    (east,) = enter(watershed, engineer, "OD-03,OD,,,15.75,77.4504,5,none")
    assert [one["what"] for one in east.findings] == ["A is 43 m away."]


def test_a_neighbour_out_of_sight_is_not_named(watershed, engineer):
    hidden = a_watershed(a_district("ZZ"), "ZA")
    a_site(hidden, "ZA-01", lat=15.75, lon=77.45)
    assert enter(watershed, engineer, GOOD)[0].findings == []


def test_a_code_is_never_used_twice(watershed, engineer):
    """Source: PL-06."""
    site = a_site(watershed, "KE-09")
    Structure.objects.filter(site=site).update(stage="closed-off", since=date(2024, 3, 1))
    a_site(watershed, "KE-10")
    with pytest.raises(Refused) as refused:
        enter(watershed, engineer, GOOD.replace("OD-01", "KE-09"))
    assert refused.value.sentence() == (
        "s.csv line 2, code: KE-09 belongs to a place closed off in 2024. "
        "Codes are not used twice; take KE-11."
    )


def test_a_code_of_another_district_is_taken_without_a_word_more(watershed, engineer):
    a_site(a_watershed(a_district("ZZ"), "ZA"), "OD-01", name="secret ford")
    with pytest.raises(Refused) as refused:
        enter(watershed, engineer, GOOD)
    assert refused.value.sentence() == (
        "s.csv line 2, code: OD-01 is taken. Codes are not used twice; take OD-02."
    )


@pytest.mark.parametrize(
    ("code", "taken", "free"),
    [
        ("KE-04", {"KE-04"}, "KE-05"),
        ("KE-09", {"KE-09", "KE-10"}, "KE-11"),
        ("KE-99", {"KE-99"}, "KE-100"),
        ("KE", {"KE"}, "KE-2"),
    ],
)
def test_the_next_code(code, taken, free):
    assert next_code(code, taken) == free


@given(st.sets(st.integers(1, 30).map(lambda n: f"A-{n:02d}"), min_size=1))
def test_the_next_code_is_always_free(taken):
    assert next_code(min(taken), taken) not in taken


def test_one_site_from_a_form(watershed, engineer):
    values = {"code": "OD-07", "watershed": "OD", "lat": "15.75", "lon": "77.45"}
    site = enter_site(district_id=watershed.district_id, values=values, by=engineer)
    assert (site.code, site.lat) == ("OD-07", 15.75)
    with pytest.raises(Refused) as refused:
        enter_site(district_id=watershed.district_id, values=values, by=engineer)
    assert refused.value.sentence() == (
        "OD-07, code: OD-07 is a site already. Codes are not used twice; take OD-08."
    )


def test_unknown_columns_stay_in_the_file_and_are_told_once(watershed, engineer):
    enter(
        watershed,
        engineer,
        f"{GOOD},x,1",
        f"{GOOD.replace('OD-01', 'OD-02').replace('15.75', '15.76')},y,2",
        heading=f"{HEADING},bed_levl_m,grazing",
    )
    told = [(one["field"], one["level"], one["remedy"]) for one in Upload.objects.get().findings]
    assert told == [
        ("bed_levl_m", "warn", "Was bed_level_m meant?"),
        ("grazing", "note", "Nothing to do if it is only a remark."),
    ]


@pytest.mark.parametrize("role", [Role.PROGRAMME, Role.AUDITOR, Role.ADMIN])
def test_who_may_not_enter_sites(watershed, role):
    with pytest.raises(Refused, match="You may not enter a site here"):
        enter(watershed, a_user(role, watershed.district), GOOD)


def test_a_posting_narrowed_to_a_watershed_enters_only_there(watershed):
    other = a_watershed(watershed.district, "TA")
    narrow = an_engineer(watershed.district, watersheds=[other])
    with pytest.raises(Refused) as refused:
        enter(watershed, narrow, GOOD)
    assert sentences(refused) == [
        (
            "s.csv line 2, watershed: There is no such watershed where you may enter sites. "
            "Choose one of: TA."
        )
    ]


class TestEdit:
    def test_a_change_counts_the_revision_and_judges_anew(self, watershed, engineer):
        site = a_site(watershed, downstream_users="")
        edited = edit_site(
            site_id=site.pk, seen_revision=1, changes={"accuracy_m": 45.0}, by=engineer
        )
        assert (edited.revision, edited.changed_by, edited.accuracy_m) == (2, engineer, 45.0)
        assert [one["rule"] for one in edited.findings] == ["PL-03", "PL-05"]
        assert edited.history.first().history_user == engineer

    def test_a_stale_form_is_refused_with_who_and_when(self, watershed, engineer):
        site = a_site(watershed)
        other = an_engineer(watershed.district)
        edit_site(site_id=site.pk, seen_revision=1, changes={"name": "first"}, by=other)
        with pytest.raises(Refused) as refused:
            edit_site(site_id=site.pk, seen_revision=1, changes={"name": "second"}, by=engineer)
        assert f"EX-A was changed by {other.username} at " in refused.value.sentence()
        assert "since you opened it. Open it again" in refused.value.sentence()
        site.refresh_from_db()
        assert (site.name, site.revision) == ("first", 2)

    def test_a_value_that_cannot_be_changes_nothing(self, watershed, engineer):
        site = a_site(watershed)
        with pytest.raises(Refused) as refused:
            edit_site(site_id=site.pk, seen_revision=1, changes={"lat": 91.0}, by=engineer)
        assert refused.value.sentence() == (
            "EX-A, lat: 91 is no latitude: -90 to 90 degrees. Put it right."
        )
        site.refresh_from_db()
        assert (site.lat, site.revision) == (15.75, 1)

    def test_code_and_watershed_are_not_edited(self, watershed, engineer):
        with pytest.raises(ValueError, match="code cannot be edited"):
            edit_site(
                site_id=a_site(watershed).pk,
                seen_revision=1,
                changes={"code": "NEW"},
                by=engineer,
            )

    @pytest.mark.parametrize("role", [Role.PROGRAMME, Role.AUDITOR, Role.ADMIN])
    def test_who_may_not_edit(self, watershed, role):
        user = a_user(role, watershed.district)
        with pytest.raises(Refused, match="You may not edit a site here"):
            edit_site(site_id=a_site(watershed).pk, seen_revision=1, changes={}, by=user)
