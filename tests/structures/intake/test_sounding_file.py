"""A sounding handed in alone."""

import pytest

from structures.errors import Refused
from structures.intake.pack import SoundingReading
from structures.intake.sounding_file import read_sounding
from structures.intake.survey_pack import read_pack_bytes
from tests.structures.intake.packs import GOOD

HEADING = "ab2_m,mn2_m,apparent_resistivity_ohm_m\n"
CURVE = GOOD["soundings"][0]["readings"]
ROWS = "".join(",".join(map(str, reading.values())) + "\n" for reading in CURVE)


def refusal(data, array="schlumberger"):
    with pytest.raises(Refused) as refused:
        read_sounding("s.csv", data.encode(), array)
    return [(f.where, f.field) for f in refused.value.findings if f.level == "block"]


def test_a_file_reads_like_the_sounding_of_a_pack():
    """Oracle: the same readings in the JSON pack."""
    sounding = read_sounding("KE-04-S1.csv", (HEADING + ROWS).encode())
    assert (sounding.label, sounding.offset_m, sounding.array) == ("KE-04-S1", None, "schlumberger")
    assert sounding.readings == tuple(SoundingReading(**reading) for reading in CURVE)
    assert sounding.findings == ()


def test_a_wenner_file_gives_half_spacings():
    """Oracle: handbook 2.4, AB = 3 a and MN = a."""
    rows = "".join(f"{a},100,5\n" for a in (1, 2, 3, 4, 5, 6, 8, 10))
    data = f"a_m,apparent_resistivity_ohm_m,sd_percent\n{rows}".encode()
    sounding = read_sounding("w.csv", data, "wenner")
    assert sounding.readings[4] == SoundingReading(7.5, 2.5, 100.0, 5.0)
    assert sounding.findings == ()


def test_doubts_come_with_the_sounding():
    data = HEADING + ROWS.replace("6.0,0.5,83", "6.0,0.5,8").replace("8.0,0.5", "8.0,3.0")
    told = [(f.rule, f.where, f.field) for f in read_sounding("s.csv", data.encode()).findings]
    assert ("SO-02", "s.csv line 7", "mn2_m") in told
    assert ("SO-05", "s.csv line 6", "apparent_resistivity_ohm_m") in told


@pytest.mark.parametrize(
    ("data", "array", "where", "field"),
    [
        (HEADING + "1.5,0.5,0\n", "schlumberger", "s.csv line 2", "apparent_resistivity_ohm_m"),
        (HEADING + "4,0.25,l76.1\n", "schlumberger", "s.csv line 2", "apparent_resistivity_ohm_m"),
        (HEADING + "1.5,2,100\n", "schlumberger", "s.csv line 2", "mn2_m"),
        (HEADING + "1.5,0.5,100\n", "wenner", "s.csv", "a_m"),
        ("AB (m),MN (m),rho a\n3,0.5,339.8\n", "schlumberger", "s.csv", "ab2_m"),
        (HEADING, "schlumberger", "s.csv", ""),
        ("", "schlumberger", "s.csv", ""),
        ("0" * 20_000_001, "schlumberger", "s.csv", ""),
    ],
)
def test_a_wrong_file_is_refused_at_its_line(data, array, where, field):
    assert (where, field) in refusal(data, array)


def test_a_missing_column_is_told_once():
    """Oracle: three columns are wanted, two of them are not there."""
    data = "ab2_m,MN (m),rho a\n" + "3,0.5,339.8\n" * 12
    assert refusal(data) == [("s.csv", "mn2_m"), ("s.csv", "apparent_resistivity_ohm_m")]


def test_few_readings_are_held_not_refused():
    """Oracle: SO-08."""
    data = HEADING + "".join(ROWS.splitlines(keepends=True)[:3])
    assert [f.rule for f in read_sounding("s.csv", data.encode()).findings] == ["SO-08"]


def test_semicolons_and_decimal_commas_are_read_and_told():
    data = (HEADING + ROWS).replace(",", ";").replace(".", ",")
    sounding = read_sounding("s.csv", data.encode())
    assert [reading.ab2_m for reading in sounding.readings] == [r["ab2_m"] for r in CURVE]
    assert [f.rule for f in sounding.findings] == ["FI-04"]


def test_an_array_that_nobody_lays_out_is_a_wrong_call():
    with pytest.raises(ValueError, match="schlumberger, wenner"):
        read_sounding("s.csv", HEADING.encode(), "dipole")


def test_a_sounding_file_is_no_pack():
    with pytest.raises(Refused, match="not yet a survey pack"):
        read_pack_bytes("s.csv", (HEADING + ROWS).encode())


def test_several_wrong_readings_are_those_of_a_sounding():
    rows = b"ab2_m,mn2_m,apparent_resistivity_ohm_m\n3,0.5,0\n4,0.5,-1\n"
    with pytest.raises(Refused) as refused:
        read_sounding("s.csv", rows)
    assert refused.value.what == "2 things are wrong in this sounding."
