"""Style sheets, fonts and scripts made ready to serve; only when one of them changed."""

from __future__ import annotations

import hashlib
from pathlib import Path
from typing import Final

from django.conf import settings
from django.contrib.staticfiles.finders import get_finders
from django.core.management import call_command

# What comes with the API's packages and no page asks for.
NEVER_SERVED: Final = ["redoc", "rest_framework"]
MADE_OF: Final = "made-of.sha256"


def collect() -> bool:
    """Collect and compress where a source differs from last time; compressing takes seconds.

    Returns
    -------
    bool
        Whether there was anything to do.
    """
    mark = Path(settings.STATIC_ROOT) / MADE_OF
    digest = _digest()
    if mark.exists() and mark.read_text(encoding="ascii") == digest:
        return False
    call_command("collectstatic", interactive=False, verbosity=0, ignore_patterns=NEVER_SERVED)
    mark.write_text(digest, encoding="ascii")
    return True


def _digest() -> str:
    """Digest of name, size and time of every source, and of how they are kept."""
    whole = hashlib.sha256(repr(settings.STORAGES["staticfiles"]).encode())
    for finder in get_finders():
        for name, storage in sorted(finder.list(NEVER_SERVED), key=lambda found: found[0]):
            about = Path(storage.path(name)).stat()
            whole.update(f"{name} {about.st_size} {about.st_mtime_ns}\n".encode())
    return whole.hexdigest()
