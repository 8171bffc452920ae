"""The daily list: whose lines, in which order, on the page and once a day by mail."""

from __future__ import annotations

from datetime import date, timedelta
from functools import partial

import pytest
from django.core import mail
from django.utils import timezone

from costing.actions.mail import send_daily_mail
from costing.queries.notices import notices_of
from structures.models import DailyMail, Job, Role, Run
from structures.runs import clock
from tests import factories as make
from tests.at_once import at_once
from tests.structures.web.whole_office import whole_office

DAY = date(2026, 4, 10)


@pytest.fixture
def office(db):
    return whole_office("Alderbrook", "7713.53")


def test_each_is_told_what_waits_for_them_and_what_stands_still_first(client, office, settings):
    code, people = office.site.code, office.people
    lines = {role: notices_of(user) for role, user in people.items()}
    told = {role: {(one.page, one.hold) for one in found} for role, found in lines.items()}
    assert ("structures:hold", True) in told[Role.ENGINEER]
    assert ("structures:clash", False) in told[Role.ENGINEER]
    assert [one.hold for one in lines[Role.ENGINEER]] == sorted(
        (one.hold for one in lines[Role.ENGINEER]), reverse=True
    )
    assert ("structures:factor-resets", False) in told[Role.PROGRAMME]
    assert not {page for page, _ in told[Role.FIELD]} & {"structures:hold", "structures:clash"}
    assert lines[Role.AUDITOR] == []
    assert notices_of(make.a_user(Role.ENGINEER, make.a_district("FA"))) == []

    client.force_login(people[Role.ENGINEER])
    page = client.get("/notices/").content.decode()
    assert "What waits for you today?" in page
    assert "asks that H1 be seen" in page
    hold = office.site.structure.strips.get(number=1).holds.get()
    assert f'href="/holds/{hold.pk}/"' in page
    assert "Waits for you" in client.get("/").content.decode()

    settings.MAIL_IS_SET = True
    engineer = people[Role.ENGINEER]
    engineer.email = "engineer@dams.example"
    engineer.save()
    assert [send_daily_mail(day=DAY) for _ in range(2)] == [1, 0]
    (sent,) = mail.outbox
    assert sent.to == ["engineer@dams.example"]
    assert f"- {code} (stands still)" in sent.body
    assert "stand still" in sent.subject
    # A mail lies open on its way: neither names of others nor sums.
    assert people[Role.FIELD].username not in sent.body
    assert "7713" not in sent.body
    assert send_daily_mail(day=DAY + timedelta(days=1)) == 1
    assert DailyMail.objects.count() == 2


@pytest.mark.django_db
def test_a_failed_run_is_told_to_whoever_asked_for_a_week():
    user = make.a_user(Role.ENGINEER, make.a_district())
    failed = {"kind": "x", "state": Run.State.FAILED, "message": "No rock.", "asked_by": user}
    for days in (1, 8):
        ended = timezone.now() - timedelta(days=days)
        Run.objects.create(**failed, digest=str(days), params={}, finished_at=ended)
    (line,) = notices_of(user)
    assert (line.sentence, line.page) == ("It failed: No rock.", "structures:run")


@pytest.mark.django_db
def test_without_a_server_or_an_address_nobody_is_written_to(settings):
    admin = make.a_user(Role.ADMIN)
    assert [one.subject for one in notices_of(admin)] == ["Backup"]
    admin.email = "keeper@dams.example"
    admin.save()
    assert send_daily_mail(day=DAY) == 0
    settings.MAIL_IS_SET = True
    assert send_daily_mail(day=DAY) == 1
    make.a_user(Role.ADMIN)
    assert send_daily_mail(day=DAY) == 0


@pytest.mark.django_db
def test_a_server_that_refuses_leaves_no_mark_and_the_others_get_theirs(settings, monkeypatch):
    settings.MAIL_IS_SET = True
    for name in ("first", "second"):
        user = make.a_user(Role.ADMIN, login=name)
        user.email = f"{name}@dams.example"
        user.save()
    whole = "costing.actions.mail.send_mail"
    sent = []

    def send(subject, text, sender, to):
        if to == ["first@dams.example"]:
            raise ConnectionRefusedError
        sent.extend(to)

    monkeypatch.setattr(whole, send)
    assert send_daily_mail(day=DAY) == 1
    assert sent == ["second@dams.example"]
    assert [one.user.username for one in DailyMail.objects.all()] == ["second"]


@pytest.mark.django_db
def test_a_job_is_claimed_once_a_day(monkeypatch):
    assert [clock.claim_day("x", DAY) for _ in range(2)] == [True, False]
    assert not clock.claim_day("x", DAY - timedelta(days=1))
    assert clock.claim_day("x", DAY + timedelta(days=1))
    assert Job.objects.get(name="x").last_done_on == DAY + timedelta(days=1)
    clock.start_daily(DAY)
    clock.start_daily(DAY)
    assert Run.objects.filter(kind="notices.mail").count() == 1


@pytest.mark.postgres
@pytest.mark.django_db(transaction=True)
def test_of_workers_that_come_at_once_one_has_the_day():
    for day in range(1, 11):
        claimed = at_once(*[partial(clock.claim_day, "x", date(2026, 4, day))] * 6)
        assert sorted(claimed) == [False] * 5 + [True]
