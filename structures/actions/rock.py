"""Settling a rock line: an engineer's points, with the reason and the tests they rest on."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Final

from django.db import transaction
from django.db.models import Max

from structures.access import Act, insist
from structures.actions.refusals import as_documents, blocking, refusal
from structures.actions.register import append
from structures.actions.survey_reading import start_reading
from structures.errors import Finding, Refused
from structures.models import RockLine, Site, Structure, Survey
from structures.queries.surveys import names_of_tests, pack_of
from structures.runs.book import input_digest

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from structures.models import User

ABOVE_A_FOOT: Final = "RK-03"  # a pack keeps such a line in doubt; settling one anew is refused
POINTS_LEAST: Final = 2  # a line


@transaction.atomic
def settle_rock_line(
    *,
    survey_id: int,
    points: Sequence[Mapping[str, float]],
    reason: str,
    rests_on: Sequence[str],
    by: User,
    seen_version: int | None = None,
) -> RockLine:
    """Settle the rock line of a site's newest survey; a later line is a new version beside it.

    `seen_version` is the line that its hand had before it (0: none); None where nobody looked.

    Raises
    ------
    Refused
        If a newer survey or a newer line than the one seen is there, the reason is missing, a test is not one of this survey, or the
        line cannot be: out of order, outside or above the ground, above the foot of a probe.
    """
    survey = Survey.objects.select_related("site__watershed__district").get(pk=survey_id)
    insist(by, Act.SETTLE_ROCK, survey)
    # The site row locks its versions: no newer survey comes in between.
    Site.objects.select_for_update().get(pk=survey.site_id)
    _check_newest(survey)
    if seen_version is not None:
        _check_seen(survey, seen_version)
    if not reason.strip():
        raise Refused("The reason is missing.", where="reason", remedy="Write why the rock is so.")
    line = [{key: float(point[key]) for key in ("offset_m", "level_m")} for point in points]
    if len(line) < POINTS_LEAST:
        raise Refused(
            f"A rock line has {POINTS_LEAST} points or more.",
            where="rock line",
            remedy="Add points, or leave the line to the estimate.",
        )
    findings = _judge(survey, line, rests_on)
    newest = survey.rock_lines.aggregate(newest=Max("version"))["newest"] or 0
    settled = RockLine.objects.create(
        survey=survey,
        version=newest + 1,
        points=line,
        digest=input_digest({"survey": survey.digest, "rock_line": line}),
        reason=reason.strip(),
        rests_on=list(dict.fromkeys(rests_on)),
        findings=as_documents(findings),
        by=by,
    )
    _enter(survey, settled, by)
    start_reading(survey=survey, by=by)
    return settled


def _enter(survey: Survey, settled: RockLine, by: User) -> None:
    structure = Structure.objects.get(site=survey.site_id)
    append(
        district=survey.site.watershed.district,
        by=by,
        act="rock line settled",
        subject=f"rock line {settled.version} on survey {survey.version} of {survey.site.code}",
        structure=structure,
        content={
            "survey": survey.digest,
            "rock_line": settled.digest,
            "points": settled.points,
            "reason": settled.reason,
            "rests_on": settled.rests_on,
        },
    )


def _check_newest(survey: Survey) -> None:
    newer = survey.site.surveys.filter(version__gt=survey.version).select_related("by").first()
    if newer is not None:
        raise Refused(
            f"Survey {newer.version} came in from {newer.by.username} since; "
            f"this line is drawn on survey {survey.version}.",
            where="rock line",
            remedy=f"Look at survey {newer.version} and settle the line on it.",
        )


def _check_seen(survey: Survey, version: int) -> None:
    newer = survey.rock_lines.filter(version__gt=version).select_related("by").first()
    if newer is not None:
        raise Refused(
            f"Line {newer.version} was settled by {newer.by.username} since you opened this.",
            where="rock line",
            remedy="Open it again, look at that line, and settle yours where you differ.",
        )


def _judge(
    survey: Survey, line: list[dict[str, float]], rests_on: Sequence[str]
) -> tuple[Finding, ...]:
    """Read the survey with this line in it, so that the rules of a pack's line are those here."""
    pack = pack_of(survey, points=line)
    known = names_of_tests(pack)
    if known and not rests_on:
        raise Refused(
            "It is not said on which tests the line rests.",
            where="rests on",
            remedy=f"Name at least one of: {', '.join(known)}.",
        )
    findings = [
        replace(one, level="block") if one.rule == ABOVE_A_FOOT else one
        for one in pack.findings[len(survey.findings) :]
    ]
    findings += [
        Finding("rests on", "", f"This survey has no test {name}.", f"Known: {', '.join(known)}.")
        for name in rests_on
        if name not in known
    ]
    if blocking(findings):
        raise refusal(findings, "rock line")
    return tuple(findings)
