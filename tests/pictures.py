"""Pictures put together by hand from their published formats, with and without a place in them."""

from __future__ import annotations

import struct
import zlib

GPS_MARK = b"GPS 15.7512 N 77.4411 E"


def exif(turn=None, order=">"):
    """A TIFF block with an orientation and, behind it, words that give the place away."""
    entries = []
    if turn is not None:
        entries.append(struct.pack(f"{order}HHIHH", 274, 3, 1, turn, 0))
    entries.append(struct.pack(f"{order}HHII", 34853, 4, 1, 200))
    head = (b"MM\x00*" if order == ">" else b"II*\x00") + struct.pack(f"{order}I", 8)
    body = head + struct.pack(f"{order}H", len(entries)) + b"".join(entries)
    return b"Exif\x00\x00" + body + struct.pack(f"{order}I", 0) + GPS_MARK


def segment(marker, body):
    return b"\xff" + bytes([marker]) + struct.pack(">H", len(body) + 2) + body


def jpeg(*parts, tail=b"\x00\x3f\x00"):
    """A JPEG as far as its segments go: start, table, the parts named, scan, end."""
    return b"".join(
        (
            b"\xff\xd8",
            segment(0xE0, b"JFIF\x00\x01\x01\x00\x00\x01\x00\x01\x00\x00"),
            *parts,
            segment(0xDB, bytes(65)),
            segment(0xDA, b"\x01\x01\x00\x00?\x00"),
            tail,
            b"\xff\xd9",
        )
    )


def chunk(name, body=b""):
    return struct.pack(">I", len(body)) + name + body + struct.pack(">I", zlib.crc32(name + body))


def png(*parts):
    """A PNG of one grey dot."""
    dot = zlib.compress(b"\x00\x80")
    head = chunk(b"IHDR", struct.pack(">IIBBBBB", 1, 1, 8, 0, 0, 0, 0))
    return b"".join((b"\x89PNG\r\n\x1a\n", head, *parts, chunk(b"IDAT", dot), chunk(b"IEND")))


def webp(*parts, flags=0x0C):
    """A WebP container: its extended head, the parts, and a picture chunk."""
    every = (
        riff(b"VP8X", bytes([flags, 0, 0, 0, 0, 0, 0, 0, 0, 0])),
        riff(b"VP8L", b"/\x00\x00\x00\x00"),
        *parts,
    )
    body = b"WEBP" + b"".join(every)
    return b"RIFF" + struct.pack("<I", len(body)) + body


def riff(name, body):
    return name + struct.pack("<I", len(body)) + body + b"\x00" * (len(body) % 2)
