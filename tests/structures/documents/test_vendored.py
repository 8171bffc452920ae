"""What is shipped but not ours: fonts, each as it was published, with its licence."""

import hashlib
import json
from pathlib import Path

import pytest

import structures.documents

ROOT = Path(structures.documents.__file__).parents[1]
FOLDERS = pytest.mark.parametrize("folder", ["documents/fonts", "static/underbund/fonts"])


def listed(folder):
    return json.loads((ROOT / folder / "MANIFEST.json").read_text(encoding="utf-8"))["files"]


@FOLDERS
def test_every_file_is_the_one_in_the_manifest(folder):
    """Oracle: SHA-256 of the files as they came from their package."""
    for entry in listed(folder):
        content = (ROOT / folder / entry["file"]).read_bytes()
        assert hashlib.sha256(content).hexdigest() == entry["sha256"], entry["file"]
        assert entry["name"]
        assert entry["version"]
        assert entry["from"]
        assert entry["licence"] == "SIL Open Font License 1.1"


def test_every_script_is_the_one_in_its_manifest():
    """Oracle: SHA-256 of the files as they came from their package; nothing else lies there."""
    folder = ROOT / "static/underbund/vendor"
    entries = listed("static/underbund/vendor")
    for entry in entries:
        content = (folder / entry["file"]).read_bytes()
        assert hashlib.sha256(content).hexdigest() == entry["sha256"], entry["file"]
        assert all(entry[key] for key in ("name", "version", "licence", "from"))
    there = {path.name for path in folder.iterdir()} - {"MANIFEST.json"}
    assert there == {entry["file"] for entry in entries}


@FOLDERS
def test_nothing_else_lies_beside_it(folder):
    there = {path.name for path in (ROOT / folder).iterdir()} - {"MANIFEST.json"}
    assert there == {entry["file"] for entry in listed(folder)}


@FOLDERS
def test_the_licence_is_there_in_full(folder):
    text = (ROOT / folder / "OFL.txt").read_text(encoding="utf-8")
    assert "SIL OPEN FONT LICENSE Version 1.1" in text
    assert "Copyright 20" in text
