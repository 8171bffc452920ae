"""Photos and scans as bytes: what they are, and the same picture without the place it was taken at.

Sources: the marker segments of ISO/IEC 10918-1 (JPEG), the chunks of ISO/IEC 15948 (PNG), the RIFF
container of WebP as published by its authors, tag 274 (orientation) of TIFF 6.0.
"""

from __future__ import annotations

import struct
import zlib
from typing import Final

JPEG: Final = "image/jpeg"
PNG: Final = "image/png"
WEBP: Final = "image/webp"
PDF: Final = "application/pdf"

PNG_MARK: Final = b"\x89PNG\r\n\x1a\n"
EXIF: Final = b"Exif\x00\x00"
# Metadata of a camera or an editor: Exif and XMP (APP1), IPTC (APP13), comments.
JPEG_DROPPED: Final = frozenset({0xE1, 0xED, 0xFE})
JPEG_ALONE: Final = frozenset({0x01, *range(0xD0, 0xD8)})  # markers without a length
START_OF_SCAN: Final = 0xDA
PNG_DROPPED: Final = frozenset({b"eXIf", b"tEXt", b"iTXt", b"zTXt"})
WEBP_DROPPED: Final = frozenset({b"EXIF", b"XMP "})
WEBP_FLAGS_DROPPED: Final = 0x08 | 0x04  # "Exif here" and "XMP here" of the VP8X chunk
ORIENTATION: Final = 274
UPRIGHT: Final = 1
TURNS: Final = range(1, 9)  # values of the orientation tag
SHORT: Final = 3  # type of a 16 bit number in TIFF


def form_of(data: bytes) -> str | None:
    """Tell what a file is by its first bytes, whatever it is called; None for anything else."""
    if data.startswith(b"\xff\xd8\xff"):
        return JPEG
    if data.startswith(PNG_MARK):
        return PNG
    if data.startswith(b"RIFF") and data[8:12] == b"WEBP":
        return WEBP
    if data.startswith(b"%PDF-"):
        return PDF
    return None


def without_place(data: bytes) -> bytes:
    """Give the same picture without the metadata that could say where and by whom it was taken.

    The orientation of a JPEG stays, so that the picture is not laid on its side; a PDF is given
    back as it is.

    Raises
    ------
    ValueError
        If it is no picture of a known form, or broken.
    """
    form = form_of(data)
    try:
        if form == JPEG:
            return _plain_jpeg(data)
        if form == PNG:
            return _plain_png(data)
        if form == WEBP:
            return _plain_webp(data)
    except (IndexError, struct.error) as error:
        raise ValueError("the picture ends in the middle") from error
    if form == PDF:
        return data
    raise ValueError("this is neither JPEG, PNG, WebP nor PDF")


def _plain_jpeg(data: bytes) -> bytes:
    kept, at, turn = [data[:2]], 2, UPRIGHT
    while True:
        if data[at] != 0xFF:
            raise ValueError("a segment of the picture does not begin where it should")
        marker = data[at + 1]
        if marker == 0xFF:  # padding before a marker
            at += 1
            continue
        if marker == START_OF_SCAN:
            break
        if marker in JPEG_ALONE:
            kept.append(data[at : at + 2])
            at += 2
            continue
        (length,) = struct.unpack_from(">H", data, at + 2)
        segment = data[at : at + 2 + length]
        if length < 2 or len(segment) < 2 + length:
            raise ValueError("a segment of the picture is cut off")
        if marker not in JPEG_DROPPED:
            kept.append(segment)
        elif segment[4:10] == EXIF:
            turn = _orientation(segment[10:])
        at += 2 + length
    turned = [] if turn == UPRIGHT else [_orientation_alone(turn)]
    return b"".join([kept[0], *turned, *kept[1:], data[at:]])


def _orientation(tiff: bytes) -> int:
    """Read the orientation of an Exif block; a block that cannot be read lays nothing on its side."""
    order = {b"II": "<", b"MM": ">"}.get(tiff[:2])
    if order is None:
        return UPRIGHT
    try:
        (start,) = struct.unpack_from(f"{order}I", tiff, 4)
        (count,) = struct.unpack_from(f"{order}H", tiff, start)
        for entry in range(count):
            place = start + 2 + 12 * entry
            tag, kind = struct.unpack_from(f"{order}HH", tiff, place)
            if tag == ORIENTATION and kind == SHORT:
                (turn,) = struct.unpack_from(f"{order}H", tiff, place + 8)
                return turn if turn in TURNS else UPRIGHT
    except struct.error:
        return UPRIGHT
    return UPRIGHT


def _orientation_alone(turn: int) -> bytes:
    """Give an Exif segment that says how the picture is turned, and nothing else."""
    tiff = b"MM\x00*" + struct.pack(">IHHHIHHI", 8, 1, ORIENTATION, SHORT, 1, turn, 0, 0)
    body = EXIF + tiff
    return b"\xff\xe1" + struct.pack(">H", len(body) + 2) + body


def _plain_png(data: bytes) -> bytes:
    kept, at = [PNG_MARK], len(PNG_MARK)
    while True:
        length, name = struct.unpack_from(">I4s", data, at)
        chunk = data[at : at + 12 + length]
        if len(chunk) < 12 + length:
            raise ValueError("a part of the picture is cut off")
        if zlib.crc32(chunk[4:-4]) != struct.unpack(">I", chunk[-4:])[0]:
            raise ValueError("a part of the picture does not fit its check sum")
        if name not in PNG_DROPPED:
            kept.append(chunk)
        at += 12 + length
        if name == b"IEND":  # what stands behind the picture is no part of it
            return b"".join(kept)


def _plain_webp(data: bytes) -> bytes:
    (size,) = struct.unpack_from("<I", data, 4)
    end = 8 + size
    if len(data) < end:
        raise ValueError("the picture is cut off")
    kept, at = [], 12
    while at < end:
        name, length = struct.unpack_from("<4sI", data, at)
        whole = 8 + length + length % 2
        chunk = data[at : at + whole]
        if len(chunk) < 8 + length:
            raise ValueError("a part of the picture is cut off")
        if name == b"VP8X":
            chunk = chunk[:8] + bytes([chunk[8] & ~WEBP_FLAGS_DROPPED]) + chunk[9:]
        if name not in WEBP_DROPPED:
            kept.append(chunk)
        at += whole
    body = b"WEBP" + b"".join(kept)
    return b"RIFF" + struct.pack("<I", len(body)) + body
