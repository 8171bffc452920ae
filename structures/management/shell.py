"""What the commands without a database share: reading a file, and how a refusal is said."""

from __future__ import annotations

import json
import os
import sys
import tempfile
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING, Any

from structures.errors import Finding, Refused

if TYPE_CHECKING:
    from collections.abc import Iterator

    from django.core.management.base import OutputWrapper


@contextmanager
def refusals_end(stderr: OutputWrapper) -> Iterator[None]:
    """Print every finding of a refusal on standard error and leave with status 1."""
    try:
        yield
    except Refused as refused:
        for line in refusal_lines(refused):
            stderr.write(line)
        sys.exit(1)


def refusal_lines(refused: Refused) -> list[str]:
    if not refused.findings:
        return [refused.sentence()]
    return [finding.sentence() for finding in refused.findings]


def read_file(path: Path, *, most_bytes: int) -> bytes:
    """Read a file whole, or refuse it with a sentence."""
    try:
        size = path.stat().st_size
        if size > most_bytes:
            raise _refused(
                path, f"The file has {size} bytes, the limit is {most_bytes}.", "Split it."
            )
        return path.read_bytes()
    except OSError as error:
        what = f"It cannot be read: {error.strerror}."
        raise _refused(path, what, "Look at its name and its rights.") from error


def write_files(folder: Path, files: dict[str, bytes]) -> None:
    """Write files into a folder, each whole or not at all, or refuse with a sentence."""
    try:
        folder.mkdir(parents=True, exist_ok=True)
        for name, data in files.items():
            handle, half = tempfile.mkstemp(dir=folder, prefix=".half-")
            with os.fdopen(handle, "wb") as file:
                file.write(data)
            Path(half).chmod(0o644)
            Path(half).replace(folder / name)
    except OSError as error:
        what = f"Nothing can be written there: {error.strerror}."
        raise _refused(folder, what, "Name a folder that you may write to.") from error


def json_text(document: Any) -> str:
    return json.dumps(document, ensure_ascii=False, allow_nan=False, indent=1)


def _refused(path: Path, what: str, remedy: str) -> Refused:
    return Refused(
        what, where=str(path), remedy=remedy, findings=(Finding(str(path), "", what, remedy),)
    )
