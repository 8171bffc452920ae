"""A district with one of everything under names of its own, for tests that walk every page."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date
from typing import Any
from uuid import uuid4

from django.utils import timezone

from costing.actions.estimate import request_estimate
from costing.models import Estimate, MoneyLine, RateSchedule, Sanction
from structures.actions.complaints import take_complaint
from structures.actions.day_book import tell_incident
from structures.actions.questions import ask
from structures.actions.strips import cut_wall
from structures.models import (
    Clash,
    FactorReset,
    HoldPoint,
    Paper,
    PhoneRecord,
    Posting,
    Repair,
    Role,
    Run,
    Site,
    Survey,
    Upload,
    User,
)
from structures.runs.queue import execute
from tests import factories as make
from tests.papers import a_paper, a_photo
from tests.structures.web.office_money import money_value, seed_money
from tests.structures.wells import a_well, readings_of

SOUNDING = {
    "offset_m": 30.0,
    "array": "schlumberger",
    # Handbook table 2, every second reading.
    "readings": [
        {"ab2_m": ab2, "mn2_m": mn2, "apparent_resistivity_ohm_m": value}
        for ab2, mn2, value in (
            *((1.5, 0.5, 190.832362), (3, 0.5, 151.362163), (5, 0.5, 98.976746)),
            *((8, 0.5, 69.635646), (10, 2.5, 70.369479), (15, 2.5, 87.197841)),
            *((25, 2.5, 136.601555), (40, 10, 197.168937), (60, 10, 278.057086)),
        )
    ],
}


@dataclass(frozen=True, slots=True)
class Office:
    """One district; `people` by role, the rest as pages name it."""

    people: dict[str, User]
    site: Site
    surveys: tuple[Survey, ...]
    estimates: tuple[Estimate, ...]
    schedules: tuple[RateSchedule, ...]
    run: Run
    upload: Upload
    paper: Paper
    lent: Posting
    sanction: Sanction

    def value(self, collection: str, name: str) -> Any:
        """What stands for a part of an address below a collection; KeyError where nobody said it."""
        watershed = self.site.watershed
        field = self.people[Role.FIELD]
        estimate = self.estimates[-1]
        return {
            ("sites", "code"): self.site.code,
            ("watersheds", "code"): watershed.code,
            ("districts", "code"): watershed.district.code,
            ("surveys", "version"): self.surveys[1].version,
            ("surveys", "other"): self.surveys[0].version,
            ("soundings", "order"): 1,
            ("people", "user_id"): field.pk,
            ("postings", "posting_id"): field.postings.get().pk,
            ("settings", "key"): "key_m",
            ("files", "file_id"): self.upload.pk,
            ("runs", "run_id"): self.run.pk,
            ("appraisals", "run_id"): self.run.pk,
            ("appraisals", "name"): "report.pdf",
            ("estimates", "pk"): estimate.pk,
            ("estimates", "other"): self.estimates[0].pk,
            ("estimates", "name"): sorted(estimate.run.result["documents"])[0],
            ("rates", "pk"): self.schedules[1].pk,
            ("rates", "other"): self.schedules[0].pk,
            ("rate-schedules", "pk"): self.schedules[1].pk,
            ("surveys", "pk"): self.surveys[1].pk,
            ("soundings", "pk"): self.surveys[1].soundings.get().pk,
            ("structures", "code"): self.site.code,
            ("papers", "kind"): "survey-permission",
            ("papers", "paper_id"): self.paper.pk,
            ("questions", "question_id"): self.paper.structure.questions.get().pk,
            ("photos", "photo_id"): self.paper.photos.get().pk,
            ("register", "code"): self.paper.structure.entries.first().code,
            ("delegations", "posting_id"): self.lent.pk,
            ("decisions", "code"): self.site.code,
            ("acts", "act"): "send-back",
            ("sanctions", "pk"): self.sanction.pk,
            ("money-lines", "pk"): self.sanction.money_line.pk,
            ("moves", "to"): "walked",
            **money_value(self.site),
            ("as-built", "form"): "svg",
            ("strips", "number"): 1,
            ("strips", "kind"): "found-level",
            ("strips", "pk"): self.site.structure.strips.get(number=1).pk,
            ("at", "code"): self.site.code,
            ("at", "kind"): "look",
            ("holds", "hold_id"): self.site.structure.strips.get(number=1).holds.get().pk,
            ("clashes", "clash_id"): self.site.phone_records.get().clashes.get().pk,
            ("wells", "code"): self.site.wells.get().code,
            ("complaints", "code"): self.site.complaints.get().code,
            ("repairs", "repair_id"): Repair.objects.get(reading__well__site=self.site).pk,
            ("levels", "pk"): self.site.wells.get().readings.first().pk,
            ("uploads", "pk"): self.upload.pk,
            ("runs", "pk"): self.run.pk,
            ("factor-resets", "reset_id"): self.people[Role.DISTRICT].factor_resets.get().pk,
        }[collection, name]


def whole_office(word: str, price: str) -> Office:
    """Seed a district in which every name, code and file holds the word, and film costs the price."""
    district = make.a_district(f"{word}-D", name=f"{word} district")
    watershed = make.a_watershed(district, f"{word}-W", name=f"{word} valley")
    people = {role: make.a_user(role, district, login=f"{word}-{role}") for role in Role.values}
    engineer = people[Role.ENGINEER]
    site = make.a_site(
        watershed,
        f"{word}-07",
        name=f"{word} ford",
        village_upstream=f"{word} above",
        village_downstream=f"{word} below",
        changed_by=engineer,
    )
    first = make.a_survey(site, engineer)
    second = make.a_survey(site, engineer, wall={"key_m": 0.2}, soundings=[SOUNDING])
    schedules = tuple(
        make.a_schedule(district, engineer, name=f"{word}-{year}.csv", film=film)
        for year, film in ((2025, "61.00"), (2026, price))
    )
    for survey in (first, second):
        request_estimate(site_id=site.pk, by=engineer, survey_id=survey.pk)
    for run in Run.objects.filter(state="queued").order_by("created_at"):
        execute(str(run.pk))
    estimates = tuple(Estimate.objects.filter(site=site).order_by("version"))
    assert len(estimates) == len(schedules)
    _trench(word, people, site)
    _wells(word, people, site)
    _lost_factor(word, people)
    seed_money(word, price, people, site)
    return Office(
        people=people,
        site=site,
        surveys=(first, second),
        estimates=estimates,
        schedules=schedules,
        run=estimates[-1].run,
        upload=second.upload,
        **_papers(word, people, site, estimates[-1]),
    )


def _trench(word: str, people: dict[str, User], site: Site) -> None:
    """Strips, a hold point that waits, an accident, and two forms of one record of a phone."""
    structure, field = site.structure, people[Role.FIELD]
    cut_wall(structure_id=structure.pk, by=people[Role.ENGINEER])
    strip, now = structure.strips.get(number=1), timezone.now()
    HoldPoint.objects.create(
        strip=strip, hold="H1", asked_at=now, asked_by=field, readings={"peg_level_m": 103.0}
    )
    day = timezone.localdate()
    tell_incident(
        structure_id=structure.pk, day=day, by=field, kind="near", what=f"A slab slid at {word}."
    )
    record = PhoneRecord.objects.create(
        id=uuid4(),
        site=site,
        kind="day-sheet",
        content={"type": "day-sheet", "site": site.code, "done": f"Dug at {word}."},
        digest="1" * 64,
        by=field,
        outcome=PhoneRecord.Outcome.KEPT,
    )
    Clash.objects.create(
        record=record, content={**record.content, "people": 4}, digest="2" * 64, by=field
    )


def _lost_factor(word: str, people: dict[str, User]) -> None:
    """A second step that was lost, so that another approver is asked."""
    FactorReset.objects.create(
        user=people[Role.DISTRICT],
        reason=f"Telephone lost at {word}.",
        asked_by=people[Role.ADMIN],
        asked_at=timezone.now(),
    )


def _wells(word: str, people: dict[str, User], site: Site) -> None:
    """A well that was read, and one of its readings in doubt."""
    field = people[Role.FIELD]
    code, name = f"{word}-W1", f"{word} well"
    well = a_well(site.watershed, field, code, site=site, name=name)
    first = readings_of(well, field, count=3)[0]
    Repair.objects.create(
        reading=first, field="depth_m", rule="LV-10", raw="26.3", told=f"Feet at {word}?"
    )
    take_complaint(
        site_id=site.pk,
        received_on=date(2026, 3, 2),
        from_whom=f"farmer at {word}",
        text=f"The well at {word} went down.",
        well=code,
        by=people[Role.DISTRICT],
    )


def _papers(word: str, people: dict[str, User], site: Site, estimate: Estimate) -> dict[str, Any]:
    """A paper with its photo, a question, a posting lent long ago, money from before."""
    district, structure = site.watershed.district, site.structure
    photo = a_photo(site, people[Role.FIELD], what=f"{word} bank")
    said = {"benchmark": f"{word} bridge", "photos": [photo.pk]}
    paper = a_paper(structure, "survey-permission", people[Role.ENGINEER], **said)
    asker = people[Role.DISTRICT]
    ask(structure_id=structure.pk, about=f"{word} plan", text=f"Where is {word}?", by=asker)
    lent = make.a_posting(
        people[Role.ENGINEER],
        Role.DISTRICT,
        district,
        delegated_by=asker,
        valid_to=date(2022, 1, 31),
    )
    line = MoneyLine.objects.create(
        district=district,
        code=f"{word}-ML",
        funder=f"{word}-F",
        currency="INR",
        amount=estimate.total,
        valid_from=date(2022, 1, 1),
        by=people[Role.PROGRAMME],
    )
    given = Sanction.objects.create(
        structure=structure,
        kind=Sanction.Kind.ADMINISTRATIVE,
        number=f"{word}-AA",
        day=date(2022, 1, 1),
        currency="INR",
        amount=estimate.total,
        money_line=line,
        by=asker,
    )
    return {"paper": paper, "lent": lent, "sanction": given}
