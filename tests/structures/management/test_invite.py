"""The command that opens an account from the shell: its word works, its refusals say why."""

from __future__ import annotations

import re

import pytest
from django.core.management import CommandError, call_command

from structures.actions.people import redeem_invite
from structures.models import Posting, Role, User
from tests.factories import PASSWORD, a_district, a_user

pytestmark = pytest.mark.django_db


@pytest.fixture(autouse=True)
def _hashed_quickly(settings):
    settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]


def invited(capsys, *arguments):
    call_command("invite", *arguments)
    said = capsys.readouterr()
    return said.out.strip(), said.err


def test_the_printed_word_opens_the_first_administrator(capsys):
    word, advice = invited(capsys, "first", "--role", "admin")
    assert re.fullmatch(r"([a-z2-9]{4}-){3}[a-z2-9]{4}", word)
    assert "/welcome/ as first within 24 hours" in advice
    assert word not in advice
    redeem_invite(login="first", word=word, password=PASSWORD)
    posting = Posting.objects.get()
    assert (posting.role, posting.district) == (Role.ADMIN, None)


def test_an_account_of_a_district_is_reset_and_keeps_its_posting(capsys):
    district = a_district("QU")
    user = a_user(Role.ENGINEER, district, login="eng")
    user.set_password(PASSWORD)
    user.save()
    invited(capsys, "eng", "--role", "engineer", "--district", "QU")
    user.refresh_from_db()
    assert not user.has_usable_password()
    assert Posting.objects.count() == 1


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        (["x", "--role", "field"], "The role field is held in a district."),
        (["x", "--role", "field", "--district", "ZZ"], "There is no district ZZ. Known: QU."),
        (["a b", "--role", "admin"], "Enter a valid username."),
    ],
)
def test_what_cannot_be_ends_with_its_sentence_and_status_one(capsys, arguments, sentence):
    a_district("QU")
    with pytest.raises(SystemExit) as leaving:
        call_command("invite", *arguments)
    assert leaving.value.code == 1
    said = capsys.readouterr()
    assert sentence in said.err
    assert said.out == ""
    assert not User.objects.exists()


def test_an_unknown_role_is_wrong_use(capsys):
    with pytest.raises(CommandError, match="invalid choice"):
        call_command("invite", "x", "--role", "king")
