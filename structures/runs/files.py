"""Bytes kept by their digest: what a run is given and what it makes. A name is never a path."""

from __future__ import annotations

import hashlib
import os
import re
import tempfile
from pathlib import Path
from typing import Final

from django.conf import settings

DIGEST: Final = re.compile(r"[0-9a-f]{64}")


def keep_bytes(data: bytes) -> str:
    """Keep bytes, whole or not at all, and give their SHA-256; the same bytes are kept once."""
    digest = hashlib.sha256(data).hexdigest()
    path = _path(digest)
    if not path.exists():
        path.parent.mkdir(parents=True, exist_ok=True)
        handle, half = tempfile.mkstemp(dir=path.parent, prefix=".half-")
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        Path(half).replace(path)
    return digest


def kept_bytes(digest: str) -> bytes:
    """Give the bytes of a digest.

    Raises
    ------
    FileNotFoundError
        If none were kept under it.
    """
    return _path(digest).read_bytes()


def _path(digest: str) -> Path:
    if not DIGEST.fullmatch(digest):
        raise FileNotFoundError(digest)
    return Path(settings.MEDIA_ROOT) / digest[:2] / digest
