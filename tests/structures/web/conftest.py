"""What the page tests share: quick hashing, and the text of an answer on one line."""

from __future__ import annotations

import pytest


@pytest.fixture(autouse=True)
def _hashed_quickly(request, settings):
    """Argon2 takes its time on purpose; the test that looks at it waits for it."""
    if "argon2" not in request.node.name:
        settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]
