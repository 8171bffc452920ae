"""What a picture is by its bytes, and that the place it was taken at does not stay in it."""

from __future__ import annotations

import struct
from contextlib import suppress

import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.intake.pictures import JPEG, PDF, PNG, WEBP, form_of, without_place
from tests.pictures import GPS_MARK, chunk, exif, jpeg, png, riff, segment, webp

XMP = b"http://ns.adobe.com/xap/1.0/\x00" + GPS_MARK


@pytest.mark.parametrize(
    ("data", "form"),
    [(jpeg(), JPEG), (png(), PNG), (webp(), WEBP), (b"%PDF-1.7\n", PDF), (b"GIF89a", None)],
)
def test_a_file_is_what_its_first_bytes_say(data, form):
    """Oracle: the marks of the published formats."""
    assert form_of(data) == form


@pytest.mark.parametrize(
    ("with_place", "without"),
    [
        (jpeg(segment(0xE1, exif())), jpeg()),
        (jpeg(segment(0xE1, XMP), segment(0xED, GPS_MARK), segment(0xFE, GPS_MARK)), jpeg()),
        (png(chunk(b"eXIf", exif()[6:]), chunk(b"tEXt", b"Comment\x00" + GPS_MARK)), png()),
        (png() + GPS_MARK, png()),
        (webp(riff(b"EXIF", exif()[6:]), riff(b"XMP ", GPS_MARK)), webp(flags=0)),
    ],
)
def test_the_place_is_dropped_and_the_picture_stays_to_the_byte(with_place, without):
    """Oracle: the same picture put together without it."""
    assert GPS_MARK in with_place
    assert without_place(with_place) == without


@pytest.mark.parametrize("order", [">", "<"])
@pytest.mark.parametrize("turn", [3, 6, 8])
def test_a_picture_is_not_laid_on_its_side(turn, order):
    """Oracle: the orientation tag, read back from its place in the smallest Exif block."""
    plain = without_place(jpeg(segment(0xE1, exif(turn, order))))
    assert GPS_MARK not in plain
    at = plain.index(b"Exif\x00\x00") + 6
    tag, kind, count, value = struct.unpack_from(">HHIH", plain, at + 10)
    assert (tag, kind, count, value) == (274, 3, 1, turn)


@pytest.mark.parametrize(
    "broken",
    [b"GIF89a", jpeg()[:30], png()[:-6], webp()[:-3], jpeg().replace(b"\xff\xdb", b"\x00\xdb")],
)
def test_what_is_broken_is_said(broken):
    with pytest.raises(ValueError, match=r"picture|neither"):
        without_place(broken)


def test_a_check_sum_that_does_not_fit_is_said():
    data = bytearray(png())
    data[20] ^= 1
    with pytest.raises(ValueError, match="check sum"):
        without_place(bytes(data))


@given(
    st.sampled_from([jpeg(segment(0xE1, exif(6))), png(chunk(b"eXIf", exif())), webp()]), st.data()
)
def test_no_cut_or_changed_byte_ends_in_anything_but_a_picture_or_a_word(data, draw):
    """Law: bytes or ValueError, never another error."""
    at = draw.draw(st.integers(0, len(data) - 1))
    cut = draw.draw(st.booleans())
    wrong = data[:at] if cut else data[:at] + bytes([data[at] ^ 0xFF]) + data[at + 1 :]
    with suppress(ValueError):
        assert isinstance(without_place(wrong), bytes)
