"""The first administrator of an empty site."""

from __future__ import annotations

import io
import re

import pytest

from config.management.commands.set_up import Command
from structures.actions.people import redeem_invite
from structures.models import User
from tests.factories import PASSWORD

pytestmark = pytest.mark.django_db


@pytest.fixture(autouse=True)
def _hashed_quickly(settings):
    settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]


def said_by_a_start():
    out = io.StringIO()
    Command(stdout=out).open_first_account()
    return out.getvalue()


def test_an_empty_site_tells_how_the_first_administrator_comes_in():
    said = said_by_a_start()
    word = re.search(r"[a-z2-9]{4}(-[a-z2-9]{4}){3}", said).group()
    assert "/welcome/ as admin" in said
    redeem_invite(login="admin", word=word, password=PASSWORD)
    assert said_by_a_start() == ""


def test_a_word_that_nobody_read_is_replaced_by_the_next_start():
    first, second = said_by_a_start(), said_by_a_start()
    assert first != second
    assert User.objects.count() == 1
