"""What the browser tests bring along: the file as it was published, with its licence."""

from __future__ import annotations

import hashlib
import json
from pathlib import Path

VENDOR = Path(__file__).with_name("vendor")
LISTED = json.loads((VENDOR / "MANIFEST.json").read_text(encoding="utf-8"))["files"]


def test_every_file_is_the_one_in_the_manifest_and_nothing_else_lies_beside_it():
    """Oracle: SHA-256 of the files as they came from their package."""
    there = {path.name for path in VENDOR.iterdir()} - {"MANIFEST.json"}
    assert there == {entry["file"] for entry in LISTED}
    for entry in LISTED:
        content = (VENDOR / entry["file"]).read_bytes()
        assert hashlib.sha256(content).hexdigest() == entry["sha256"], entry["file"]
        assert entry["version"] in entry["from"]


def test_the_licence_is_there_in_full():
    licence = (VENDOR / "axe-LICENSE.txt").read_text(encoding="utf-8")
    assert licence.startswith("Mozilla Public License, version 2.0")
    assert "Exhibit B" in licence
