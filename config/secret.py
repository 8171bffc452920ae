"""The secret of a site that was given none: made once, readable by its owner alone."""

from __future__ import annotations

import os
import secrets
import tempfile
from pathlib import Path
from typing import Final

SECRET_BYTES: Final = 64  # more than the 50 characters that Django's security check asks for


def own_secret(file: Path) -> str:
    """Read the secret, or make it; two processes that make it at once agree on one."""
    try:
        if not file.exists():
            _make(file)
        kept = file.read_text(encoding="ascii").strip()
    except OSError:
        # A folder that cannot be written serves the commands without a database all the same.
        return secrets.token_urlsafe(SECRET_BYTES)
    return kept or secrets.token_urlsafe(SECRET_BYTES)


def _make(file: Path) -> None:
    file.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
    handle, half = tempfile.mkstemp(dir=file.parent, prefix=".secret-")  # mode 0600
    try:
        with os.fdopen(handle, "w", encoding="ascii") as out:
            out.write(secrets.token_urlsafe(SECRET_BYTES))
        try:
            os.link(half, file)  # only one of two makers gets through, with a whole file
        except FileExistsError:
            return
    finally:
        Path(half).unlink()
