"""The chain of the register and its short codes, as laws: whatever is changed is found."""

from __future__ import annotations

import hashlib
import itertools
import json
from dataclasses import fields, replace
from datetime import UTC, datetime, timedelta, timezone

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from structures.life.chain import (
    Entry,
    Misfit,
    canonical_bytes,
    content_digest,
    entry_digest,
    first_misfit,
    seal,
)
from structures.life.short_code import ALPHABET, read_code, short_code

NOON = datetime(2026, 4, 10, 12, 0, tzinfo=UTC)
TEXT = st.text(st.characters(exclude_categories=("Cs",)), max_size=5)
NUMBER = st.integers() | st.floats(allow_nan=False, allow_infinity=False)
JSON = st.recursive(
    st.none() | st.booleans() | NUMBER | TEXT,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(TEXT, inner, max_size=3),
    max_leaves=3,
)
WORD = st.sampled_from(["", "drawn", "engineer-1", "é\N{SNOWMAN}"])
ENTRY = st.builds(
    Entry,
    number=st.just(0),
    at=st.sampled_from([NOON, NOON + timedelta(microseconds=1)]),
    by=st.integers(1, 99),
    by_name=WORD,
    act=WORD,
    content=JSON,
    structure=st.none() | st.integers(1, 99),
    subject=WORD,
)


def chained(entries):
    chain = []
    for entry in entries:
        chain.append(seal(entry, chain[-1] if chain else None))
    return chain


CHAIN = st.lists(ENTRY, min_size=1, max_size=4).map(chained)


def misfit(chain, like):
    """What is found with the end of the true chain kept apart."""
    return first_misfit(chain, length=len(like), digest=like[-1].digest)


@given(CHAIN)
def test_a_chain_as_it_was_sealed_fits(chain):
    assert misfit(chain, chain) is None
    assert [entry.number for entry in chain] == list(range(1, len(chain) + 1))


OTHER = {
    "number": st.integers(-3, 9),
    "at": st.datetimes(timezones=st.just(UTC)),
    "by": st.integers(1, 99),
    "by_name": TEXT,
    "act": TEXT,
    "content": JSON,
    "structure": st.none() | st.integers(1, 99),
    "subject": TEXT,
    "corrects": st.sampled_from(["", "a" * 64]),
    "content_digest": st.sampled_from(["", "b" * 64]),
    "previous_digest": st.sampled_from(["", "c" * 64]),
    "digest": st.sampled_from(["d" * 64, "e" * 64]),
    "code": st.sampled_from(["", "0000-0000-0000"]),
}


def test_every_field_of_an_entry_is_put_to_the_law():
    assert set(OTHER) == {field.name for field in fields(Entry)}


@pytest.mark.parametrize("name", OTHER)
@given(data=st.data())
def test_any_change_of_any_field_is_found_at_that_entry(name, data):
    chain = data.draw(CHAIN)
    place = data.draw(st.integers(0, len(chain) - 1))
    value = data.draw(OTHER[name])
    old = getattr(chain[place], name)
    same = canonical_bytes(old) == canonical_bytes(value) if name == "content" else old == value
    assume(not same)
    changed = [*chain]
    changed[place] = replace(chain[place], **{name: value})
    found = misfit(changed, chain)
    assert found is not None
    assert found.number == place + 1


@given(CHAIN, st.data())
def test_a_change_sealed_again_is_found_at_the_next_entry_or_the_end(chain, data):
    """Law: who changes an entry and computes its digest anew must change all that follow."""
    place = data.draw(st.integers(0, len(chain) - 1))
    forged = [*chain]
    altered = replace(chain[place], subject=chain[place].subject + "!")
    forged[place] = seal(altered, chain[place - 1] if place else None)
    found = misfit(forged, chain)
    assert found.number == min(place + 2, len(chain))


@given(CHAIN, st.data())
def test_a_missing_entry_is_found(chain, data):
    place = data.draw(st.integers(0, len(chain) - 1))
    left = chain[:place] + chain[place + 1 :]
    assert misfit(left, chain).number == place + 1


@given(CHAIN, ENTRY, st.data())
def test_an_entry_put_in_between_is_found(chain, entry, data):
    place = data.draw(st.integers(0, len(chain)))
    new = seal(entry, chain[place - 1] if place else None)
    assume(place == len(chain) or new.digest != chain[place].digest)
    found = misfit([*chain[:place], new, *chain[place:]], chain)
    assert found.number == min(place + 2, len(chain) + 1)


@given(CHAIN, st.data())
def test_another_order_is_found(chain, data):
    order = data.draw(st.permutations(range(len(chain))))
    assume(order != list(range(len(chain))))
    first = next(at for at, was in enumerate(order) if at != was)
    assert misfit([chain[at] for at in order], chain).number == first + 1


def test_without_its_end_kept_apart_a_cut_is_not_seen_and_with_it_is():
    chain = chained([Entry(0, NOON, 1, "a", "noted", {})] * 3)
    assert first_misfit(chain[:2]) is None
    assert first_misfit(chain[:2], length=3) == Misfit(3, "the register has 2 entries, not 3")
    assert first_misfit(chain[:2], digest=chain[2].digest) == Misfit(
        2, "the register does not end with this entry"
    )
    assert first_misfit(chain[1:]) == Misfit(1, "entry 1 is missing; entry 2 stands in its place")


def test_an_empty_register_fits():
    assert first_misfit([], length=0, digest="") is None


def test_what_is_wrong_is_told_in_words():
    (entry,) = chained([Entry(0, NOON, 1, "a", "noted", {"k": 1})])
    assert first_misfit([replace(entry, content={"k": 2})]).why == (
        "its content is not what was signed"
    )
    assert first_misfit([replace(entry, content=NOON)]).why == "its content cannot be read"
    assert first_misfit([replace(entry, act="walked")]).why == (
        "its time, person, act or subject is not what was signed"
    )
    assert first_misfit([replace(entry, code="")]).why == "its short code is not its own"


def test_the_digest_of_an_entry_is_sha_256_of_the_bytes_written_here():
    """Oracle: the bytes by hand, digested by the standard library."""
    entry = seal(Entry(0, NOON, 7, "engineer-1", "drawn", {"b": [1.5, None], "a": "é"}), None)
    inside = '{"a":"é","b":[15e-1,null]}'.encode()
    assert entry.content_digest == hashlib.sha256(inside).hexdigest()
    whole = (
        '{"act":"drawn","at":"2026-04-10T12:00:00.000000+00:00","by":7,"by_name":"engineer-1",'
        f'"content":"{entry.content_digest}","corrects":"","number":1,"previous":"",'
        '"structure":null,"subject":""}'
    )
    assert entry.digest == hashlib.sha256(whole.encode()).hexdigest()


def test_the_zone_of_a_time_is_no_part_of_it_and_its_absence_is_refused():
    entry = seal(Entry(0, NOON, 1, "a", "noted", {}), None)
    there = NOON.astimezone(timezone(timedelta(hours=5, minutes=30)))
    assert entry_digest(replace(entry, at=there)) == entry.digest
    with pytest.raises(ValueError, match="zone"):
        replace(entry, at=NOON.replace(tzinfo=None))


# --- canonical JSON


@given(JSON)
def test_canonical_bytes_are_json_of_the_same_value(value):
    assert json.loads(canonical_bytes(value)) == json.loads(json.dumps(value))


@given(JSON, JSON)
def test_two_values_have_the_same_bytes_only_if_they_are_the_same(one, other):
    def plain(value):
        """Oracle: the value with its types named, and numbers by their exact value."""
        if isinstance(value, bool) or value is None or isinstance(value, str):
            return (type(value).__name__, value)
        if isinstance(value, int | float):
            return ("number", value if value != 0 else 0)
        if isinstance(value, list):
            return ("list", [plain(member) for member in value])
        return ("object", {key: plain(member) for key, member in value.items()})

    assume(not any(isinstance(v, int) and abs(v) > 2**53 for v in (one, other)))
    if plain(one) == plain(other):
        assert canonical_bytes(one) == canonical_bytes(other)
    elif not _holds_large(one) and not _holds_large(other):
        assert canonical_bytes(one) != canonical_bytes(other)


def _holds_large(value):
    """Whether a number is written with more digits than a float tells apart."""
    if isinstance(value, list | dict):
        members = value.values() if isinstance(value, dict) else value
        return any(_holds_large(member) for member in members)
    return isinstance(value, int | float) and abs(value) > 2**53


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (1, "1"),
        (1.0, "1"),
        (-0.0, "0"),
        (2.5, "25e-1"),
        (100, "1e2"),
        (1e22, "1e22"),
        (10**22, "1e22"),
        (1e300, "1e300"),
        (10**300, "1e300"),
        (10**40 + 1, "10000000000000000000000000000000000000001"),
        (5e-324, "5e-324"),
        (-0.1, "-1e-1"),
        (True, "true"),
        ({}, "{}"),
        ([], "[]"),
        ({"b": 1, "a": [True, None]}, '{"a":[true,null],"b":1}'),
    ],
)
def test_a_value_is_written_in_one_way(value, text):
    assert canonical_bytes(value) == text.encode()


@pytest.mark.parametrize(
    "value",
    [float("nan"), float("inf"), {1: 2}, {"a": NOON}, {1, 2}, b"a", "\ud800", {"\ud800": 1}],
)
def test_what_is_not_json_has_no_digest(value):
    with pytest.raises(ValueError, match=r"JSON|half a sign"):
        content_digest(value)


# --- short codes


DIGEST = st.binary(min_size=32, max_size=32).map(bytes.hex)


@given(DIGEST)
def test_a_code_has_three_groups_of_four_and_is_read_as_typed(digest):
    code = short_code(digest)
    assert [len(group) for group in code.split("-")] == [4, 4, 4]
    assert set(code) <= set(ALPHABET) | {"-"}
    assert read_code(code) == code
    loose = code.replace("-", " ").lower().replace("0", "o").replace("1", "l")
    assert read_code(f" {loose} ") == code


@given(DIGEST, st.integers(0, 11), st.integers(1, 31))
def test_every_single_wrong_sign_is_noticed(digest, place, step):
    signs = list(short_code(digest).replace("-", ""))
    signs[place] = ALPHABET[(ALPHABET.index(signs[place]) + step) % 32]
    assert read_code("".join(signs)) is None


@given(DIGEST)
def test_every_exchange_of_two_signs_is_noticed(digest):
    signs = short_code(digest).replace("-", "")
    for one, other in itertools.combinations(range(12), 2):
        if signs[one] != signs[other]:
            swapped = list(signs)
            swapped[one], swapped[other] = signs[other], signs[one]
            assert read_code("".join(swapped)) is None


def test_a_code_by_hand():
    """Oracle: by hand. 55 bits, the last set: values 0 ... 0, 1; x^11 in the field is 00111.

    x^5 = x^2 + 1, so x^10 = x^4 + 1 and x^11 = x^5 + x = x^2 + x + 1 = 7.
    """
    digest = f"{1 << 9:016x}"
    assert short_code(digest) == "0000-0000-0017"


@pytest.mark.parametrize(
    "text", ["", "7K3M", "0000-0000-00170", "0000-0000-001U", "0000-0000-001é"]
)
def test_what_cannot_be_a_code_is_none(text):
    assert read_code(text) is None


def test_a_digest_that_gives_no_code_is_refused():
    with pytest.raises(ValueError, match="52 bits"):
        short_code("0" * 13)
    with pytest.raises(ValueError, match="invalid literal"):
        short_code("x" * 64)
