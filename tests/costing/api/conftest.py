"""A district with a site and its people; a client that speaks JSON."""

from __future__ import annotations

import pytest
from django.core.cache import cache
from rest_framework.test import APIClient

from tests import factories as make


@pytest.fixture(autouse=True)
def _apart(settings, tmp_path):
    settings.MEDIA_ROOT = tmp_path
    settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]
    cache.clear()


@pytest.fixture
def site():
    return make.a_site()


@pytest.fixture
def engineer(site):
    return make.an_engineer(site.watershed.district)


@pytest.fixture
def as_user():
    def signed_in(user):
        client = APIClient()
        client.force_login(user)
        return client

    return signed_in


@pytest.fixture
def office(as_user, engineer):
    return as_user(engineer)
