"""A rate schedule read whole: every line that is wrong is named, or the schedule is kept."""

import json
from datetime import date
from decimal import Decimal

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from costing.price.rates import Rate, RateSchedule, read_rates
from structures.errors import Refused
from structures.takeoff.quantity import ITEMS
from tests.costing.oracle import RATES, example_rates

HEAD = "item,from_m,unit,rate,currency"
CLAY = "clay,,m3,820.00,INR"


def csv(*rows, head=HEAD):
    return "\n".join((head, *rows)).encode()


def blocking(data, name="rates.csv"):
    with pytest.raises(Refused) as refused:
        read_rates(name, data)
    return [one for one in refused.value.findings if one.level == "block"]


def test_rates_of_the_worked_examples():
    """Oracle: the rates of handbook 13: 135.00 for the first lift and 15.00 more per lift."""
    schedule = example_rates()
    assert schedule.schedule_id == "examples"
    assert schedule.currency == "INR"
    assert [schedule.rate_of("excavation", 1.5 * lift) for lift in range(5)] == [
        Decimal(135 + 15 * lift) for lift in range(5)
    ]
    assert schedule.rate_of("excavation", 7.5) is None
    assert schedule.rate_of("clay") == Decimal("820.00")
    assert (schedule.contingency_percent, schedule.overhead_percent) == (5, 2)
    assert schedule.findings == schedule.notes == ()


def test_rates_of_the_demo():
    """Oracle: the file read by eye: one rate for all lifts, validity and words in every row."""
    schedule = read_rates("RS-2025-26.csv", (RATES / "RS-2025-26.csv").read_bytes())
    assert schedule.schedule_id == "RS-2025-26"
    assert (schedule.valid_from, schedule.valid_to) == (date(2025, 10, 1), date(2026, 9, 30))
    assert not schedule.ended(date(2026, 9, 30))
    assert schedule.ended(date(2026, 10, 1))
    assert [schedule.rate_of("excavation", begins) for begins in (0.0, 1.5, 9.0)] == [145] * 3
    assert {one.item for one in schedule.rates} == set(ITEMS)
    assert schedule.rates_of("marker")[0].description == "marker stone"
    assert schedule.findings == schedule.notes == ()


def test_a_row_without_from_serves_every_lift_without_its_own():
    """Oracle: the interface of rate schedules."""
    schedule = read_rates("r.csv", csv("excavation,,m3,100,INR", "excavation,3.00,m3,130,INR"))
    assert [schedule.rate_of("excavation", begins) for begins in (0.0, 1.5, 3.0, 4.5)] == [
        100,
        100,
        130,
        100,
    ]


@pytest.mark.parametrize(
    ("row", "field", "words"),
    [
        ("excavatn,,m3,5,INR", "item", "Was excavation meant?"),
        (",,m3,5,INR", "item", "This is missing."),
        ("film,,m3,5,INR", "unit", "film is measured in m2"),
        ("film,,,5,INR", "unit", "It is m2."),
        ("film,,m2,-5,INR", "rate", "-5 is not above zero."),
        ("film,,m2,0,INR", "rate", "0 is not above zero."),
        ("film,,m2,nan,INR", "rate", '"nan" is not a number.'),
        ("film,,m2,inf,INR", "rate", '"inf" is not a number.'),
        ("film,,m2,ask,INR", "rate", '"ask" is not a number.'),
        ("film,,m2,,INR", "rate", "The rate of film is missing."),
        ('film,,m2,"1,250.00",INR', "rate", "no thousands mark"),
        ("film,,m2,0.001,INR", "rate", "less than a hundredth"),
        ("film,,m2,1e9,INR", "rate", "outside what is accepted"),
        ("film,1.5,m2,5,INR", "from_m", "film has no lifts."),
        ("excavation,-1.5,m3,5,INR", "from_m", "outside what is accepted"),
        ("excavation,deep,m3,5,INR", "from_m", '"deep" is not a number.'),
        ("film,,m2,5,USD", "currency", "USD differs from INR at rates.csv line 2."),
        ("film,,m2,5,rupees", "currency", "Give its three letters"),
        ("clay,,m3,5,INR", "item", "clay has a rate already, at rates.csv line 2."),
        ("contingency_percent,,percent,15.01,", "rate", "0 to 15 %"),
        ("overhead_percent,,percent,-1,", "rate", "0 to 10 %"),
        ("overhead_percent,,percent,1.23456,", "rate", "more than four decimals"),
        ("overhead_percent,,m3,2,", "unit", "measured in percent"),
    ],
)
def test_a_wrong_row_is_named(row, field, words):
    """Oracle: the interface of rate schedules; line 3 of the file holds the wrong row."""
    (finding,) = blocking(csv(CLAY, row))
    assert (finding.where, finding.field) == ("rates.csv line 3", field)
    assert words in finding.sentence()
    assert finding.remedy


def test_the_same_lift_twice_is_named():
    """Oracle: one place has one rate, however the depth is written."""
    (finding,) = blocking(csv("excavation,1.5,m3,5,INR", "excavation,1.50,m3,6,INR"))
    assert finding.what == "excavation from 1.5 m has a rate already, at rates.csv line 2."


def test_all_findings_come_at_once():
    """Oracle: a count by hand."""
    findings = blocking(csv("film,,m3,ask,INR", "gravel,,m3,5,INR", "clay,2,m3,5,USD"))
    assert [(one.where[-1], one.field) for one in findings] == [
        ("2", "unit"),
        ("2", "rate"),
        ("3", "item"),
        ("4", "from_m"),
        ("4", "currency"),
    ]


@pytest.mark.parametrize(
    ("columns", "field", "words"),
    [
        ("2026-13-01,", "valid_from", "is no date"),
        ("01.10.2026,", "valid_from", "year-month-day"),
        ("2026-02-30,", "valid_from", "is no date"),
        ("2026-10-01,2026-09-30", "valid_to", "before it begins"),
    ],
)
def test_validity_is_two_days_in_order(columns, field, words):
    """Oracle: ISO 8601 dates."""
    head = f"{HEAD},valid_from,valid_to"
    (finding,) = blocking(csv(f"{CLAY},{columns}", head=head))
    assert finding.field == field
    assert words in finding.sentence()


def test_two_schedules_in_one_file_are_refused():
    """Oracle: one schedule a file, one validity a schedule."""
    head = f"{HEAD},schedule_id,valid_to"
    rows = (f"{CLAY},RS-1,2026-09-30", "film,,m2,5,INR,RS-2,2027-09-30")
    findings = blocking(csv(*rows, head=head))
    assert [one.field for one in findings] == ["schedule_id", "valid_to"]


def test_missing_columns_are_named_once():
    """Oracle: the interface's columns."""
    (finding,) = blocking(csv("clay,m3", "film,m2", head="item,unit"))
    assert (finding.field, finding.remedy) == ("rate", f"Write {HEAD}.")


def test_percentages_alone_are_no_schedule():
    (finding,) = blocking(csv("overhead_percent,,percent,2,"))
    assert finding.what == "No item has a rate here."


def test_what_was_left_out_is_taken_and_told():
    """Oracle: defaults of handbook 12: contingency 5 %, overhead 2 %; the setting's currency."""
    schedule = read_rates("rates.csv", csv("clay,,m3,820.005", head="item,from_m,unit,rate"))
    assert (schedule.contingency_percent, schedule.overhead_percent) == (5, 2)
    assert schedule.currency == "INR"
    assert schedule.rate_of("clay") == Decimal("820.01")
    assert [(one.level, one.field) for one in schedule.findings] == [
        ("note", "rate"),
        ("note", "contingency_percent"),
        ("note", "overhead_percent"),
    ]
    euro = read_rates(
        "r.csv", csv("clay,,m3,8", head="item,from_m,unit,rate"), currency_default="EUR"
    )
    assert euro.currency == "EUR"


def test_unknown_columns_are_kept_and_told_once():
    """Oracle: the interface: further columns are kept."""
    data = csv(f"{CLAY},dry,ab", "film,,m2,5,INR,lapped,cd", head=f"{HEAD},remark,form_m")
    schedule = read_rates("rates.csv", data)
    assert [(one.field, one.text) for one in schedule.notes] == [
        ("remark", "dry"),
        ("form_m", "ab"),
        ("remark", "lapped"),
        ("form_m", "cd"),
    ]
    told = [(one.field, one.level) for one in schedule.findings][:2]
    assert told == [("remark", "note"), ("form_m", "warn")]


def test_json_says_the_same():
    """Oracle: the CSV of the same rows."""
    rows = [
        {"item": "excavation", "from_m": 0.0, "unit": "m3", "rate": "135.00", "currency": "INR"},
        {"item": "clay", "unit": "m3", "rate": 820, "currency": "INR", "from_m": None},
        {"item": "contingency_percent", "unit": "percent", "rate": 4.5},
        {"item": "overhead_percent", "unit": "percent", "rate": "3"},
    ]
    text = csv(
        "excavation,0,m3,135.00,INR",
        CLAY,
        "contingency_percent,,percent,4.5,",
        "overhead_percent,,percent,3,",
    )
    head = {"contingency_percent": 4.5, "overhead_percent": 3, "currency": "INR"}
    from_csv = read_rates("rates.csv", text)
    assert read_rates("rates.json", json.dumps(rows).encode()) == from_csv
    assert read_rates("rates.json", json.dumps({"rates": rows[:2]} | head).encode()) == from_csv


@pytest.mark.parametrize(
    ("document", "where", "words"),
    [
        ({"schedule_id": "RS"}, "rates.json $", "Rows are wanted"),
        (5, "rates.json $", "Rows are wanted"),
        ([5], "rates.json $[0]", "A row is wanted, not 5."),
        ([{"item": "clay", "unit": "m3", "rate": True}], "rates.json $[0]", "A number is wanted"),
        ([{"item": ["clay"], "unit": "m3", "rate": 1}], "rates.json $[0]", "There is no item"),
    ],
)
def test_json_of_another_shape(document, where, words):
    """Oracle: the interface's rows."""
    (finding,) = blocking(json.dumps(document).encode(), "rates.json")
    assert finding.where.startswith(where)
    assert words in finding.sentence()


NOISE = st.one_of(
    st.binary(max_size=200),
    st.text(alphabet='item,from_m\n";0159.-eE{}[]:nulltrue', max_size=200).map(str.encode),
)
CELLS = st.sampled_from(
    [
        "",
        "clay",
        "excavation",
        "overhead_percent",
        "m3",
        "percent",
        "1.5",
        "-0",
        "1e400",
        "٣",
        "'",
        "INR",
        "5%",
    ]
)
TABLES = st.lists(st.lists(CELLS, min_size=5, max_size=5).map(",".join), max_size=6).map(
    lambda rows: csv(*rows)
)
LEAVES = st.one_of(st.none(), st.booleans(), st.integers(), st.floats(), CELLS)
KEYS = st.sampled_from(["item", "unit", "rate", "from_m", "currency", "valid_to", "rates", "x"])
DOCUMENTS = st.recursive(
    LEAVES,
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(KEYS, inner, max_size=8)),
    max_leaves=20,
).map(lambda document: json.dumps(document).encode())


def schedule_or_refusal(name, data):
    try:
        return read_rates(name, data)
    except Refused as refused:
        return refused


@settings(max_examples=150, deadline=None)
@given(
    st.sampled_from(["rates.csv", "rates.json", "rates", ""]), st.one_of(NOISE, TABLES, DOCUMENTS)
)
def test_any_bytes_are_a_schedule_or_refused(name, data):
    """Law: no other exception; a refusal names what is wrong and what to do."""
    outcome = schedule_or_refusal(name, data)
    if isinstance(outcome, Refused):
        assert any(one.level == "block" for one in outcome.findings)
        assert all(one.what and one.remedy for one in outcome.findings)
    else:
        assert outcome.rates
        assert all(one.rate > 0 for one in outcome.rates)


@given(
    st.dictionaries(
        st.sampled_from(sorted(ITEMS)), st.decimals("0.01", 99999, places=2), min_size=1
    )
)
def test_a_schedule_written_is_read_back(rates):
    """Law: rows written out give the same rates."""
    rows = [f"{item},,{ITEMS[item]},{rate}," for item, rate in rates.items()]
    schedule = read_rates("rates.csv", csv(*rows))
    assert {one.item: one.rate for one in schedule.rates} == rates


@pytest.mark.parametrize(
    "wrong",
    [
        {"rates": (Rate("clay", "m3", Decimal(1)),) * 2},
        {"contingency_percent": Decimal(16)},
        {"valid_from": date(2026, 1, 2), "valid_to": date(2026, 1, 1)},
    ],
)
def test_a_schedule_cannot_be_wrong(wrong):
    right = {"contingency_percent": Decimal(5), "overhead_percent": Decimal(2), "rates": ()}
    with pytest.raises(ValueError, match=r"two rates|outside|before it begins"):
        RateSchedule("RS", "INR", **(right | wrong))


@pytest.mark.parametrize(
    "wrong",
    [("clay", "m2", "1"), ("gravel", "m3", "1"), ("clay", "m3", "0"), ("clay", "m3", "1.005")],
)
def test_a_rate_cannot_be_wrong(wrong):
    item, unit, rate = wrong
    with pytest.raises(ValueError, match=r"is not (a rate|priced)"):
        Rate(item, unit, Decimal(rate))


def test_only_excavation_has_lifts():
    with pytest.raises(ValueError, match="has no lifts"):
        Rate("clay", "m3", Decimal(1), 1.5)
