"""Every address of the site, taken from its list, for every role, beside a district it must not show.

An address that is added is walked at once; one with a part that nobody can fill fails here.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

import pytest
from django.apps import apps
from django.db import transaction
from django.test import Client, override_settings
from django.urls import URLResolver, get_resolver, reverse

from structures.models import Role
from tests.structures.web.whole_office import whole_office

pytestmark = pytest.mark.django_db
NEAR, FAR = "Alderbrook", "Zyxxavor"
NEAR_PRICE, FAR_PRICE = "7713.53", "9917.31"
# Open to everyone: one survey appraised without an account, health, the ways in, what is published.
OPEN = {
    *("costing:front", "costing:pack-schema", "costing:appraisal", "costing:cancel"),
    *("costing:document", "healthz", "readyz", "structures:sign-in", "structures:welcome"),
    *("schema", "docs", "pack-schema", "sign-in"),
}
API = "/api/"
# It answers whatever no other line of the API knows.
NOWHERE = "^api/v1/"
# They end the session of whoever asks; what they do is tested with the accounts.
LEAVING = {"structures:sign-out", "structures:sign-out-everywhere"}
BROKEN = 500
# Begun one-time codes guard the account of whoever begins them; they record nothing.
OWN_CODES = "structures.SecondFactor"
PART = re.compile(r"<(?:\w+:)?(\w+)>|\(\?P<(\w+)>")
# Written by reading and refusing alike: sessions, and wrong passwords.
NOT_COUNTED = {"sessions.Session", "axes.AccessAttempt", "axes.AccessLog", "axes.AccessFailureLog"}


@dataclass(frozen=True)
class Address:
    """One line of the list: its name, and (collection, part) for each part that is to be filled."""

    name: str
    parts: tuple[tuple[str, str], ...]

    def at(self, office):
        filled = {name: office.value(collection, name) for collection, name in self.parts}
        return reverse(self.name, kwargs=filled)


def addresses(resolver=None, route="", spaces=()):
    """Every named line below a resolver, with the parts of its whole route."""
    found = []
    for line in (resolver or get_resolver()).url_patterns:
        whole = route + str(line.pattern)
        if isinstance(line, URLResolver):
            inner = (*spaces, line.namespace) if line.namespace else spaces
            found += addresses(line, whole, inner)
        elif whole != NOWHERE:
            assert line.name, f"{whole} has no name; give it one, so that it is walked."
            found.append(Address(":".join((*spaces, line.name)), tuple(parts(whole))))
    return found


def parts(route):
    """Each part with the collection it stands below: the last plain word before it."""
    for part in PART.finditer(route):
        before = re.findall(r"[a-z-]+", PART.sub("", route[: part.start()]))
        yield [word for word in before if word != "against"][-1], part[1] or part[2]


EVERY = addresses()
# What is the same for everyone and holds nobody's record is looked at without a session only.
WALKED = [one for one in EVERY if one.name not in LEAVING and (one.parts or one.name not in OPEN)]


@pytest.fixture(scope="module")
def offices(django_db_setup, django_db_blocker, tmp_path_factory):
    """Two districts, seeded once for all roles and taken away at the end."""
    with (
        django_db_blocker.unblock(),
        override_settings(
            MEDIA_ROOT=tmp_path_factory.mktemp("files"),
            PASSWORD_HASHERS=["django.contrib.auth.hashers.MD5PasswordHasher"],
        ),
        transaction.atomic(),
    ):
        yield whole_office(NEAR, NEAR_PRICE), whole_office(FAR, FAR_PRICE)
        transaction.set_rollback(True)


def signed_in(user):
    client = Client(raise_request_exception=True)
    client.force_login(user)
    return client


def said(answer):
    """All that an answer tells, in small letters, without the marks that group a number."""
    body = b"".join(answer.streaming_content) if answer.streaming else answer.content
    told = f"{dict(answer.headers)} {body.decode(errors='replace')}"
    return told.lower().replace(",", "")


def rows():
    """How many rows every table holds."""
    return {
        model._meta.label: model._base_manager.count()
        for model in apps.get_models(include_auto_created=True)
        if model._meta.label not in NOT_COUNTED
    }


def test_the_list_of_addresses_is_whole():
    """Oracle: places that the office promises."""
    names = {address.name for address in EVERY}
    assert len(names) > 40
    for place in ("sites", "watersheds", "files", "runs", "people", "settings", "help", "entry"):
        assert f"structures:{place}" in names
    assert {"costing:rates", "costing:estimates"} <= names


@pytest.mark.parametrize("address", EVERY, ids=lambda address: address.name)
def test_without_a_session_there_is_only_the_way_in(offices, address):
    near, _ = offices
    url = address.at(near)
    answer = Client().get(url)
    if address.name in OPEN:
        assert "/sign-in/" not in answer.headers.get("Location", "")
    elif url.startswith(API):
        assert answer.status_code in {401, 403, 405}
    else:
        assert (answer.status_code, answer.url.partition("?")[0]) == (302, "/sign-in/")
    # A problem repeats the address that was asked for, and nothing else.
    assert NEAR.lower() not in answer.content.decode().lower().replace(url.lower(), "")


@pytest.mark.parametrize("role", Role.values)
def test_no_role_is_shown_another_district(offices, role):
    near, _ = offices
    client = signed_in(near.people[role])
    for address in WALKED:
        answer = client.get(address.at(near))
        assert answer.status_code != BROKEN, address
        assert FAR.lower() not in said(answer), address
        assert FAR_PRICE not in said(answer), address


@pytest.mark.parametrize("role", Role.values)
def test_what_lies_in_another_district_is_not_there_and_cannot_be_touched(offices, role):
    near, far = offices
    client = signed_in(near.people[role])
    before = rows()
    own = {"structures:setting"}  # the same figure in every district; the district is asked for
    for address in WALKED:
        if not address.parts or address.name in own:
            continue
        url = address.at(far)
        for answer in (client.get(url), client.post(url)):
            assert answer.status_code in {400, 403, 404, 405, 415}, (address, answer.status_code)
            assert FAR.lower() not in said(answer).replace(url.lower(), ""), address
    assert client.get("/settings/?district=" + far.site.watershed.district.code).status_code == 404
    assert rows() == before


@pytest.mark.parametrize("text", [FAR, FAR.lower(), f"{FAR}-07", f"{FAR} below"])
@pytest.mark.parametrize("role", [Role.ENGINEER, Role.ADMIN, Role.AUDITOR])
def test_a_search_finds_nothing_of_another_district(offices, role, text):
    near, _ = offices
    client = signed_in(near.people[role])
    for name in ("structures:sites", "structures:watersheds", "structures:people"):
        answer = client.get(reverse(name), {"q": text})
        shown = said(answer).replace(f'value="{text.lower()}"', "")
        assert FAR.lower() not in shown, name


def test_its_own_people_are_shown_their_district(offices):
    """The telltale word does show where it may: the tests above look for the right thing."""
    _, far = offices
    client = signed_in(far.people[Role.ENGINEER])
    for name in ("sites", "watersheds", "files", "runs"):
        assert FAR.lower() in said(client.get(f"/{name}/")), name
    for url in (f"/sites/{far.site.code}/", f"/estimates/{far.estimates[-1].pk}/"):
        assert FAR.lower() in said(client.get(url))
    assert FAR_PRICE in said(client.get(f"/rates/{far.schedules[1].pk}/"))


def test_field_staff_are_shown_no_money(offices):
    near, _ = offices
    client = signed_in(near.people[Role.FIELD])
    estimate = near.estimates[-1]
    figures = {NEAR_PRICE, *(str(getattr(estimate, one)) for one in ("total", "sanction", "p50"))}
    for address in WALKED:
        told = said(client.get(address.at(near)))
        assert not any(figure in told for figure in figures - {"None"}), address
        assert "inr" not in re.findall(r"[a-z]+", told), address


def test_those_who_may_see_money_are_shown_it(offices):
    """The figures looked for above are those that pages print."""
    near, _ = offices
    estimate = near.estimates[-1]
    page = said(signed_in(near.people[Role.AUDITOR]).get(f"/estimates/{estimate.pk}/"))
    for figure in (NEAR_PRICE, str(estimate.total), "inr"):
        assert figure in page


def test_an_auditor_writes_nothing_anywhere(offices):
    near, _ = offices
    client = signed_in(near.people[Role.AUDITOR])
    before = rows()
    for address in WALKED:
        answer = client.post(address.at(near))
        assert answer.status_code != BROKEN, address
    assert {**rows(), OWN_CODES: 0} == before
