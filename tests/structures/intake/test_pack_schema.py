"""The published schema: draft 2020-12, and the same answer as the reader wherever it can give one."""

import copy
import json
from pathlib import Path

import jsonschema
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from structures.errors import Refused
from structures.intake.defaults import WALL
from structures.intake.pack_schema import pack_schema
from structures.intake.survey_pack import read_pack_bytes
from tests.structures.intake.packs import GOOD, good

PACKS = Path(__file__).parents[3] / "fixtures" / "packs"
SCHEMA = jsonschema.Draft202012Validator(pack_schema())


def reads(document):
    try:
        read_pack_bytes("", json.dumps(document).encode())
    except Refused:
        return False
    return True


def test_the_schema_is_one():
    """Oracle: the meta-schema of draft 2020-12 in the jsonschema library; JSON both ways."""
    jsonschema.Draft202012Validator.check_schema(pack_schema())
    assert json.loads(json.dumps(pack_schema())) == pack_schema()


@pytest.mark.parametrize("path", sorted(PACKS.glob("*.json")), ids=lambda path: path.stem)
def test_the_packs_that_ship_are_valid(path):
    """Oracle: the jsonschema library."""
    assert list(SCHEMA.iter_errors(json.loads(path.read_text()))) == []


def places(value, path=()):
    """Every value of a document, of a list its first element."""
    for key in value if isinstance(value, dict) else [0]:
        yield (*path, key)
        if isinstance(value[key], dict | list):
            yield from places(value[key], (*path, key))


def exchanged(path, value):
    document = copy.deepcopy(GOOD)
    place = document
    for key in path[:-1]:
        place = place[key]
    place[path[-1]] = value
    return document


# Values that no relation between fields can make right or wrong: wrong kinds and sizes.
KINDS = ["4", True, [], {}, "", 1e9, -1e9, [1], {"x": 1}, "yes"]


@pytest.mark.parametrize("path", list(places(GOOD)), ids=str)
def test_reader_and_schema_agree_on_kinds_and_sizes(path):
    """Oracle: the jsonschema library; what it refuses the reader refuses."""
    for value in KINDS:
        document = exchanged(path, value)
        if not SCHEMA.is_valid(document):
            assert not reads(document), value


ALONE = [(part, key) for part in ("wall", "works", "ground_water", "site") for key in GOOD[part]]


@pytest.mark.parametrize(("part", "key"), ALONE)
def test_reader_and_schema_agree_both_ways_where_a_value_stands_alone(part, key):
    for value in ["4", True, [], "", None, 0, 0.5, 1, 1.5, 3, 3.01, 60]:
        document = good(rock_line=None, probes=None, rock=None)
        document[part][key] = value
        if key == "water_level_m" and isinstance(value, int | float):
            continue  # judged by the ground
        assert SCHEMA.is_valid(document) == reads(document), value


@settings(max_examples=50)
@given(st.sampled_from(sorted(WALL)), st.floats(-1, 150))
def test_ranges_of_settings_agree(key, value):
    """Oracle: the table of defaults, its accepted ranges written out here."""
    row = WALL[key]
    fits = row.low <= value <= row.high and (not row.whole or value == int(value))
    document = good(wall={key: value})
    assert reads(document) == SCHEMA.is_valid(document) == fits


def test_required_parts_agree():
    for part in GOOD:
        document = good(**{part: None})
        assert SCHEMA.is_valid(document) == reads(document), part


def test_each_value_says_its_unit():
    """Oracle: names of fields end in their unit."""
    properties = pack_schema()["properties"]
    assert properties["toes"]["properties"]["left_m"]["description"].endswith(", m")
    thickness = properties["wall"]["properties"]["thickness_m"]
    row = WALL["thickness_m"]
    assert (thickness["minimum"], thickness["maximum"], thickness["default"]) == (
        row.low,
        row.high,
        row.value,
    )
