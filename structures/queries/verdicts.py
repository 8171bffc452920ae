"""What a wall does, as far as it is known: the verdict that stands, what was proposed, the evidence.

Every wall that is covered starts at "not known"; only a reviewed verdict says anything else.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import date
from typing import TYPE_CHECKING, Any, Final
from zoneinfo import ZoneInfo

from django.db.models import Case, CharField, OuterRef, Subquery, Value, When
from django.db.models.functions import Coalesce

from structures import access
from structures.documents.effect_result import effect_json
from structures.intake.readings import WellReading
from structures.life.stages import COVERED, LINE
from structures.life.verdict import Head, Limits, Measured, Suggestion, from_readings, judge
from structures.models import Entry, Reading, Verdict, Well
from structures.queries.districts import today_of
from structures.queries.runs import runs_of_kind, site_subject
from structures.queries.settings import settings_in_force
from structures.queries.wells_of_wall import wall_wells
from structures.water.head import head_across
from structures.water.rules import EffectRules

if TYPE_CHECKING:
    from django.db.models import QuerySet

    from structures.models import District, Site, Structure, User
    from structures.water.head import HeadAcross

EFFECT: Final = "wells.effect"  # the kind of run that compares affected with control wells
STANDING: Final = LINE[LINE.index(COVERED) :]  # stages at which a wall stands and can be judged
NOT_KNOWN: Final = Verdict.Word.NOT_KNOWN.value
SENT_BACK: Final = "verdict sent back"
COUNTS: Final = (Reading.Standing.TAKEN, Reading.Standing.REPAIRED)
CONTROLS: Final = Well.Role.CONTROL
NO_WELL: Final = "No well was read."  # as the rule says it where it is handed no comparison
NOT_COMPARED: Final = "Wells: no comparison computed yet."


def visible_verdicts(user: User) -> QuerySet[Verdict]:
    found = Verdict.objects.filter(structure__site__in=access.sites(user))
    return found.select_related(
        "structure__site__watershed__district", "proposed_by", "reviewed_by", "entry"
    )


def with_verdict(found: QuerySet[Site]) -> QuerySet[Site]:
    """Sites with the word on their wall: empty where none stands, "not known" until one is reviewed."""
    newest = Verdict.objects.filter(
        structure__site=OuterRef("pk"), reviewed_by__isnull=False
    ).order_by("-water_year", "-version")
    word = Coalesce(Subquery(newest.values("word")[:1]), Value(NOT_KNOWN))
    return found.annotate(
        verdict_word=Case(
            When(structure__stage__in=STANDING, then=word),
            default=Value(""),
            output_field=CharField(),
        )
    )


def standing_verdict(structure: Structure) -> Verdict | None:
    """Give the newest verdict that another person reviewed."""
    found = structure.verdicts.filter(reviewed_by__isnull=False)
    return found.select_related("proposed_by", "reviewed_by", "entry").first()


def open_proposal(structure: Structure) -> Verdict | None:
    """Give the newest proposal that waits: neither reviewed nor sent back."""
    newest = structure.verdicts.select_related("proposed_by").order_by("-pk").first()
    if newest is None or newest.reviewed_by_id is not None or sent_back(newest) is not None:
        return None
    return newest


def sent_back(verdict: Verdict) -> Entry | None:
    """Give the entry by which a proposal was sent back."""
    return Entry.objects.filter(
        structure=verdict.structure_id, act=SENT_BACK, content__verdict=verdict.pk
    ).first()


@dataclass(frozen=True, slots=True)
class Unknown:
    """One thing that is not known, and what would end it."""

    what: str
    ends: str


@dataclass(frozen=True, eq=False, slots=True)
class Evidence:
    """All that a verdict rests on today; what is None was not measured."""

    structure: Structure
    today: date
    completed: date | None
    water_year: int
    limits: Limits
    head: HeadAcross | None
    pipes: tuple[str, str] | None
    effect: dict[str, Any] | None
    effect_on: date | None
    controls: tuple[Well, ...]
    upstream: tuple[Well, ...]
    waiting: int
    suggestion: Suggestion
    unknown: tuple[Unknown, ...]

    @property
    def full_years(self) -> tuple[int, int]:
        """Full water years before and after covering, as the comparison counted them."""
        if self.effect is None:
            return 0, 0
        return self.effect["before"]["full_years"], self.effect["after"]["full_years"]

    @property
    def pairs(self) -> int | None:
        if self.effect is None:
            return None
        return self.effect["before"]["pairs"] + self.effect["after"]["pairs"]

    @property
    def head_now_m(self) -> float | None:
        return None if self.head is None or self.head.now_m is None else self.head.now_m[1]

    @property
    def rain_mm(self) -> tuple[float | None, float | None]:
        """Rain a year before and after."""
        rain = (self.effect or {}).get("rain") or {}
        return rain.get("before_mm_a_year"), rain.get("after_mm_a_year")


def evidence_of(structure: Structure) -> Evidence:
    """Gather what is known of a wall today and what the rule makes of it."""
    site = structure.site
    district = site.watershed.district
    today, rules = today_of(district), rules_of(district)
    completed = completed_on(structure)
    wells = _wells(site)
    pipes = _pipes(wells)
    head = None
    if completed is not None and pipes is not None:
        head = head_across(
            _readings(pipes, district), pipes[0].code, pipes[1].code, completed, rules
        )
    effect, effect_on = _effect(site)
    limits = Limits(rules.least_effect_m, rules.least_full_years, rules.least_pairs)
    controls = tuple(one for one in wells if one.role == CONTROLS)
    waiting = Reading.objects.filter(well__in=wells, standing=Reading.Standing.HELD).count()
    across = None if head is None else head.measured
    measured = None if effect is None else _measured(effect)
    upstream = tuple(one for one in wells if one.site_id == site.pk and one.role == "upstream")
    return Evidence(
        structure,
        today,
        completed,
        last_full_year(today, rules),
        limits,
        head,
        None if pipes is None else (pipes[0].code, pipes[1].code),
        effect,
        effect_on,
        controls,
        upstream,
        waiting,
        _judged(across, measured, limits),
        tuple(_unknown(completed, pipes, across, measured, controls, waiting, limits)),
    )


def _judged(head: Head | None, wells: Measured | None, limits: Limits) -> Suggestion:
    """Give what the rule says; that nobody compared the wells yet is not that nobody read them."""
    said = judge(head, wells, limits)
    if wells is not None:
        return said
    reasons = tuple(NOT_COMPARED if one == NO_WELL else one for one in said.reasons)
    return replace(said, reasons=reasons)


def rules_of(district: District) -> EffectRules:
    """Give what the office sets for comparing wells."""
    lines = settings_in_force(district)
    lag = lines["serial_lag"].value
    return EffectRules(
        least_full_years=int(lines["effect_least_full_years"].value),
        least_effect_m=lines["effect_least_m"].value,
        confidence=lines["effect_confidence"].value,
        least_pairs=int(lines["effect_least_pairs"].value),
        months_of_full_year=int(lines["effect_months_of_full_year"].value),
        serial_lag=None if lag is None else int(lag),
        year_starts=(district.water_year_month, district.water_year_day),
    )


def completed_on(structure: Structure) -> date | None:
    """Give the day on which the last strip was covered; of walls from before that of the move."""
    strips = list(structure.strips.values_list("covered_on", flat=True))
    if strips and None not in strips:
        return max(strips)
    if structure.stage not in STANDING:
        return None
    moved = structure.moves.filter(to_stage=COVERED).order_by("-number").first()
    return None if moved is None else moved.day


def last_full_year(today: date, rules: EffectRules) -> int:
    """Give the year in which the newest water year began that is over."""
    return rules.water_year(today) - 1


def year_words(water_year: int) -> str:
    """Write a water year by both its calendar years: 2024-25."""
    return f"{water_year}-{(water_year + 1) % 100:02d}"


def _wells(site: Site) -> list[Well]:
    """A site's own wells and pipes, and the control wells of its watershed."""
    controls = site.watershed.wells.filter(role=CONTROLS, ended_on__isnull=True)
    own = site.wells.exclude(role=CONTROLS)
    return sorted({*own, *controls}, key=lambda one: one.code)


def _pipes(wells: list[Well]) -> tuple[Well, Well] | None:
    """Give the pipes nearest to the two faces."""
    pipes = [one for one in wells if one.kind == Well.Kind.PIPE]
    sides = [
        min(
            (one for one in pipes if one.role == role),
            key=lambda one: abs(one.upstream_of_wall_m or 0.0),
            default=None,
        )
        for role in ("upstream", "downstream")
    ]
    return None if None in sides else (sides[0], sides[1])


def _readings(pipes: tuple[Well, Well], district: District) -> list[WellReading]:
    zone = ZoneInfo(district.zone)
    rows = Reading.objects.filter(
        well__in=pipes,
        state=Reading.State.STATIC,
        standing__in=COUNTS,
        level_m__isnull=False,
        depth_m__isnull=False,
    ).select_related("well")
    return [
        WellReading(
            one.well.code,
            "affected",
            one.read_at.astimezone(zone),
            one.state,
            one.dry,
            one.depth_m,
            one.level_m + one.depth_m,
        )
        for one in rows
    ]


def _effect(site: Site) -> tuple[dict[str, Any] | None, date | None]:
    run = (
        runs_of_kind(EFFECT)
        .filter(subject=site_subject(site.code), state="done")
        .order_by("-created_at")
        .first()
    )
    if run is None:
        compared = wall_wells(site)
        if compared.effect is None or not compared.effect.taken:  # nothing was read at rest
            return None, None
        said = from_readings(compared.effect.measured, compared.effect.limits)
        today = today_of(site.watershed.district)
        return effect_json(compared.effect, said, compared.completed), today
    whole = run.result.get("effect") or run.result
    return (whole if "readings" in whole else None), run.created_at.date()


def _measured(effect: dict[str, Any]) -> Measured:
    return Measured(
        gain_m=effect["effect_m"],
        low_m=effect["low_m"],
        high_m=effect["high_m"],
        smallest_seen_m=effect["smallest_seen_m"],
        pairs=(effect["before"]["pairs"], effect["after"]["pairs"]),
        full_years=(effect["before"]["full_years"], effect["after"]["full_years"]),
        controls=effect["wells"]["control"],
    )


def _unknown(
    completed: date | None,
    pipes: tuple[Well, Well] | None,
    head: Head | None,
    wells: Measured | None,
    controls: tuple[Well, ...],
    waiting: int,
    limits: Limits,
) -> list[Unknown]:
    """Say what is not known, and what would end it."""
    said = []
    if completed is None:
        said.append(Unknown("The day on which the wall was covered.", "Cover every strip."))
    if pipes is None:
        what = "The head across the wall: no pipe stands on both its faces."
        said.append(
            Unknown(what, "Set pipes up- and downstream, enter them, read both on one day.")
        )
    elif head is None or head.gain_m is None:
        what = "How much more water stands against the wall than before."
        ends = f"Read both pipes in {limits.least_full_years} full water years after covering."
        said.append(Unknown(what, f"{ends} What stood there before can no longer be read."))
    if not controls:
        what = "Whether rain or the wall moved the wells: there is no control well."
        said.append(Unknown(what, "Name a control well outside the reach of the wall and read it."))
    if wells is None:
        what = "Whether the wells of the reach changed: no comparison computed yet."
        said.append(Unknown(what, "Have affected and control wells compared."))
    elif min(wells.full_years) < limits.least_full_years:
        before, after = wells.full_years
        what = f"{after} full water years after covering, {before} before; {limits.least_full_years} needed."
        said.append(Unknown(what, "Read on: every well in 10 of 12 months, pump off."))
    if waiting:
        what = f"What {waiting} readings mean that wait for a decision."
        said.append(Unknown(what, "Decide each of them; until then they count nowhere."))
    return said
