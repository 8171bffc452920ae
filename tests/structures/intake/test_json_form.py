"""Any JSON document at all gets a pack or a refusal, never a traceback."""

import copy
import json

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.errors import LEVELS, Refused
from structures.intake.json_form import read_json
from structures.intake.pack import SurveyPack
from structures.intake.survey_pack import read_pack_bytes
from tests.structures.intake.packs import GOOD

SCALARS = (
    st.none()
    | st.booleans()
    | st.integers()
    | st.floats()
    | st.text(max_size=8)
    | st.sampled_from([10**30, -1, 0, 1e308, "12,5", "\ud800", "yes"])
)
KEYS = st.sampled_from([*GOOD, *GOOD["wall"], *GOOD["ground"][0], "readings", "picks"]) | st.text(
    max_size=5
)
DOCUMENTS = st.recursive(
    SCALARS,
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(KEYS, inner, max_size=5),
    max_leaves=25,
)


def judged(data):
    """Read bytes; what comes back is a pack or a refusal that can be printed."""
    try:
        answer = read_pack_bytes("p.json", data)
    except Refused as refused:
        answer = refused
    blocks = [finding for finding in answer.findings if finding.level == "block"]
    assert bool(blocks) == isinstance(answer, Refused)
    assert {finding.level for finding in answer.findings} <= set(LEVELS)
    assert all(finding.sentence().encode() for finding in answer.findings)
    return answer


@given(DOCUMENTS)
def test_any_document_is_judged(document):
    judged(json.dumps(document).encode())


@settings(max_examples=50)
@given(st.dictionaries(st.sampled_from(list(GOOD)), DOCUMENTS, max_size=6))
def test_any_parts_in_a_good_pack_are_judged(parts):
    judged(json.dumps(copy.deepcopy(GOOD) | parts).encode())


def paths(value, path=()):
    """Every place of a document."""
    yield path
    if isinstance(value, dict | list):
        for key in value if isinstance(value, dict) else range(len(value)):
            yield from paths(value[key], (*path, key))


@settings(max_examples=100)
@given(st.sampled_from([p for p in paths(GOOD) if p]), DOCUMENTS)
def test_any_value_at_any_place_of_a_good_pack_is_judged(path, value):
    document = copy.deepcopy(GOOD)
    place = document
    for key in path[:-1]:
        place = place[key]
    place[path[-1]] = value
    judged(json.dumps(document).encode())


@given(st.binary(max_size=200))
def test_any_bytes_are_judged(data):
    judged(data)


@given(st.integers(0, 3000), st.integers(0, 255))
def test_any_byte_of_a_good_pack_exchanged_is_judged(place, byte):
    data = bytearray(json.dumps(GOOD).encode())
    data[place % len(data)] = byte
    judged(bytes(data))


def test_a_number_of_many_digits_is_too_large():
    assert isinstance(judged(b'{"pack": ' + b"9" * 6000 + b"}"), Refused)


def test_a_mark_of_byte_order_is_no_part_of_the_document():
    assert isinstance(judged(b"\xef\xbb\xbf" + json.dumps(GOOD).encode()), SurveyPack)


def test_brackets_inside_strings_do_not_nest():
    """Oracle: RFC 8259; the string holds a thousand brackets, the document nests once."""
    text = "[" * 1000 + '\\"' + "]{"
    assert read_json("", f'{{"note": "{text}"}}'.encode()).value == {
        "note": text.replace('\\"', '"')
    }


@pytest.mark.parametrize("keys", [("a", "a"), ("b", "a", "a", "b", "b")])
def test_each_key_given_twice_is_named(keys):
    text = "{" + ", ".join(f'"{key}": 1' for key in keys) + "}"
    with pytest.raises(Refused) as refused:
        read_json("p.json", text.encode())
    assert [f.field for f in refused.value.findings] == sorted(set(keys), key=keys.index)


def test_a_pack_of_very_many_rows_is_refused_before_its_rows_are_read():
    document = GOOD | {"ground": [0] * 5001}
    assert "more than 5000" in str(judged(json.dumps(document).encode()))
