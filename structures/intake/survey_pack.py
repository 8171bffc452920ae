"""One site's survey pack from a file, a folder or bytes: the door through which all packs come."""

from __future__ import annotations

from typing import TYPE_CHECKING

from structures.intake.builder import build_pack
from structures.intake.json_form import read_json
from structures.intake.tree import Ledger

if TYPE_CHECKING:
    from pathlib import Path

    from structures.intake.pack import SurveyPack


def read_pack(source: Path) -> SurveyPack:
    """Read a survey pack from a JSON file."""
    return read_pack_bytes(source.name, source.read_bytes())


def read_pack_bytes(name: str, data: bytes) -> SurveyPack:
    """Read a survey pack from the bytes of a file."""
    return build_pack(read_json(name, data), Ledger())
