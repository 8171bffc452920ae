"""A zip opened with its limits judged first: its own list of entries says what it would become.

Names of entries are never used as paths; only their last part names a table.
"""

from __future__ import annotations

import io
import re
import zipfile
import zlib
from collections import Counter
from typing import TYPE_CHECKING, Final

from structures.intake.tree import Node, shown

if TYPE_CHECKING:
    from structures.intake.tree import Ledger

BOOK: Final = "xl/workbook.xml"  # the entry that tells a workbook from a plain zip
MEGABYTE: Final = 1_000_000  # SI
FILE_MOST_BYTES: Final = 20 * MEGABYTE  # one file of a pack, opened (project choice)
ARCHIVE_MOST_BYTES: Final = 50 * MEGABYTE  # all entries together, opened (project choice)
ENTRIES_MOST: Final = 200  # a workbook has some twenty parts, a folder of CSV a dozen
RATIO_MOST: Final = 200  # opened size over packed size; tables reach about 30
RATIO_FROM_BYTES: Final = 100_000  # small entries may be all blanks
ENCRYPTED: Final = 0x1  # zip specification, general purpose flag, bit 0
PACKED: Final = (b"PK\x03\x04", b"PK\x05\x06")
PACKED_NAMES: Final = (".zip", ".xlsx", ".xlsm", ".7z", ".rar", ".gz", ".tar", ".bz2", ".xz")
BROKEN: Final = (
    zipfile.BadZipFile,
    zlib.error,
    EOFError,
    NotImplementedError,
    RuntimeError,
    ValueError,
    OSError,
)


def too_large(size_bytes: int) -> str:
    """Say that a file is larger than any is read (FI-02); empty where it is not."""
    if size_bytes <= FILE_MOST_BYTES:
        return ""
    size, limit = size_bytes / MEGABYTE, FILE_MOST_BYTES // MEGABYTE
    return f"The file has {size:.0f} MB, limit {limit}. Nothing was read."


def is_packed(data: bytes) -> bool:
    """Whether bytes begin like a zip."""
    return data.startswith(PACKED)


def entry_names(data: bytes) -> frozenset[str]:
    """Give the names in a zip's list; none where it cannot be read."""
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            return frozenset(archive.namelist())
    except BROKEN:
        return frozenset()


def read_archive(name: str, data: bytes, ledger: Ledger) -> dict[str, bytes]:
    """Open a zip into name -> bytes; empty, with findings, where it breaks a limit.

    Nothing is opened before every entry was judged by the list. Entries must not be archives.
    """
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            entries = [entry for entry in archive.infolist() if not entry.is_dir()]
            blocks = ledger.blocks
            _check_total(name, entries, ledger)
            for entry in entries[:ENTRIES_MOST]:
                _check_entry(name, entry, ledger)
            if ledger.blocks > blocks:
                return {}
            return {entry.filename: archive.read(entry) for entry in entries}
    except BROKEN:
        ledger.add(Node(None, name), "The archive is damaged.", "Pack it again and send it again.")
        return {}


def check_nested(name: str, files: dict[str, bytes], ledger: Ledger) -> None:
    """Refuse archives inside an archive, whatever they are called."""
    for inner, content in files.items():
        if is_packed(content) or inner.lower().endswith(PACKED_NAMES):
            remedy = "Pack the tables themselves, once."
            ledger.add(
                _place(name, inner), "An archive lies inside the archive.", remedy, rule="FI-02"
            )


def _place(name: str, inner: str) -> Node:
    return Node(None, f"{name} {shown(inner)[1:-1]}")


def _check_total(name: str, entries: list[zipfile.ZipInfo], ledger: Ledger) -> None:
    node = Node(None, name)
    if not entries:
        ledger.add(node, "The archive is empty.", "Pack the tables and send it again.")
    if len(entries) > ENTRIES_MOST:
        what = f"The archive has {len(entries)} entries, limit {ENTRIES_MOST}. Nothing was read."
        ledger.add(node, what, "Pack one site's tables.", rule="FI-02")
    total = sum(entry.file_size for entry in entries)
    if total > ARCHIVE_MOST_BYTES:
        limit = ARCHIVE_MOST_BYTES // MEGABYTE
        what = f"The archive opens to {total / MEGABYTE:.0f} MB, limit {limit}. Nothing was read."
        ledger.add(node, what, "Split it.", rule="FI-02")
    for inner, count in Counter(entry.filename for entry in entries).items():
        if count > 1:
            ledger.add(_place(name, inner), "Two entries have this name.", "Keep one.")


def _check_entry(name: str, entry: zipfile.ZipInfo, ledger: Ledger) -> None:
    node = _place(name, entry.filename)
    parts = entry.filename.replace("\\", "/").split("/")
    if ".." in parts or parts[0] == "" or re.match(r"[A-Za-z]:", parts[0]):
        what = "The name climbs out of the archive. Nothing was read."
        ledger.add(node, what, "Pack the tables under plain names.", rule="FI-02")
    if entry.flag_bits & ENCRYPTED:
        ledger.add(node, "The entry is locked by a password.", "Pack it without one.")
    elif entry.compress_type not in {zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED}:
        ledger.add(node, "The entry is packed in an unusual way.", "Pack it as an ordinary zip.")
    if entry.file_size > FILE_MOST_BYTES:
        size, limit = entry.file_size / MEGABYTE, FILE_MOST_BYTES // MEGABYTE
        what = f"The entry opens to {size:.0f} MB, limit {limit}. Nothing was read."
        ledger.add(node, what, "Split it.", rule="FI-02")
    elif entry.file_size > max(RATIO_FROM_BYTES, RATIO_MOST * entry.compress_size):
        what = f"The entry opens to over {RATIO_MOST} times its packed size. Nothing was read."
        ledger.add(node, what, "Pack the table itself.", rule="FI-02")
