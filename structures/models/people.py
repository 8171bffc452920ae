"""People who sign in."""

from __future__ import annotations

from django.contrib.auth.models import AbstractUser


class User(AbstractUser):
    """A person with an account; where and as what they serve stands in their postings."""
