"""Taking a survey in: looked at whole first, then kept as the site's next version."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import TYPE_CHECKING, Any, Final

from django.db import transaction
from django.db.models import Max

from structures.access import Act, insist
from structures.actions.inbox import mark_kept, receive_file, refuse_same_file, told_of
from structures.actions.refusals import as_documents
from structures.actions.survey_reading import start_reading
from structures.errors import Finding, Refused
from structures.ground.bed import bed_level_m
from structures.intake.pack_writer import pack_document
from structures.intake.survey_pack import read_pack_bytes
from structures.models import (
    GroundPoint,
    Probe,
    RefractionLine,
    RefractionPick,
    RockTest,
    Site,
    Sounding,
    SoundingReading,
    Survey,
    Upload,
)
from structures.queries.settings import counted_in
from structures.queries.sites import bed_on_profile_m
from structures.runs.book import input_digest

if TYPE_CHECKING:
    from structures.intake.pack import SurveyPack
    from structures.models import User

BED_AGREES_M: Final = 0.3  # XS-06


@dataclass(frozen=True, slots=True)
class SurveyRead:
    """A survey as it was read: the pack, its canonical document with digest, and what is doubted."""

    pack: SurveyPack
    document: dict[str, Any]
    digest: str
    rows: int
    findings: tuple[Finding, ...]


def preview_survey(*, site_id: int, name: str, data: bytes, by: User) -> SurveyRead:
    """Read a survey as `accept_survey` would, and keep nothing.

    Raises
    ------
    Refused
        If it could not be kept; `findings` names each file, line or cell and field.
    """
    site = _site(site_id, by)
    district = site.watershed.district
    refuse_same_file(kind=Upload.Kind.SURVEY, name=name, data=data, district=district, by=by)
    return _read(site, name, data)


def accept_survey(*, site_id: int, name: str, data: bytes, by: User) -> Survey:
    """Keep a survey as the next version of its site; the file itself is kept whole either way.

    Raises
    ------
    Refused
        If the survey cannot be used or this very file is there already; no survey is added.
    """
    site = _site(site_id, by)
    upload = receive_file(
        kind=Upload.Kind.SURVEY, name=name, data=data, owner=site.watershed, by=by
    )
    with told_of(upload):
        read = _read(site, upload.name, data)
        with transaction.atomic():
            # The site row locks its versions: two surveys cannot take one number.
            locked = Site.objects.select_for_update().get(pk=site.pk)
            refuse_same_file(
                kind=upload.kind, name=upload.name, data=data, district=upload.district, by=by
            )
            mark_kept(upload, rows=read.rows, findings=read.findings)
            survey = _keep(locked, upload, read, by)
            start_reading(survey=survey, by=by)
            return survey


def _site(site_id: int, by: User) -> Site:
    site = Site.objects.select_related("watershed__district").get(pk=site_id)
    insist(by, Act.ACCEPT_SURVEY, site)
    return site


def _read(site: Site, name: str, data: bytes) -> SurveyRead:
    pack = read_pack_bytes(name, data)
    if pack.site.code != site.code:
        what = f"This survey is of {pack.site.code}, the site is {site.code}."
        remedy = f"Hand it in at {pack.site.code}, or mend site.code."
        finding = Finding(name, "site.code", what, remedy)
        raise Refused(what, where=f"{name}, site.code", remedy=remedy, findings=(finding,))
    document = pack_document(pack)
    return SurveyRead(
        pack=pack,
        document=document,
        digest=input_digest(document),
        rows=_rows(pack),
        findings=pack.findings + _bed_agrees(site, pack, name),
    )


def _bed_agrees(site: Site, pack: SurveyPack, name: str) -> tuple[Finding, ...]:
    """Compare the bed on the wall line with the long profile (XS-06)."""
    profile_m = bed_on_profile_m(site)
    if profile_m is None:
        return ()
    offsets, levels = zip(*((one.offset_m, one.level_m) for one in pack.ground), strict=True)
    bed_m = bed_level_m(offsets, levels, pack.toes.left_m, pack.toes.right_m)
    if abs(bed_m - profile_m) <= BED_AGREES_M:
        return ()
    what = f"Bed is {bed_m:.2f} m on the cross line and {profile_m:.2f} m on the long line."
    remedy = "Which benchmark was used?"
    return (Finding(name, "ground.level_m", what, remedy, level="warn", rule="XS-06"),)


def _rows(pack: SurveyPack) -> int:
    nested = [one.readings for one in pack.soundings] + [one.picks for one in pack.refraction]
    flat = (pack.ground, pack.rock, pack.probes, pack.rock_line or ())
    return sum(len(rows) for rows in (*flat, *nested))


def _keep(site: Site, upload: Upload, read: SurveyRead, by: User) -> Survey:
    newest = site.surveys.aggregate(newest=Max("version"))["newest"] or 0
    survey = Survey.objects.create(
        site=site,
        version=newest + 1,
        upload=upload,
        pack=read.document,
        digest=read.digest,
        left_toe_m=read.pack.toes.left_m,
        right_toe_m=read.pack.toes.right_m,
        findings=as_documents(read.findings),
        notes=[asdict(note) for note in read.pack.notes],
        by=by,
    )
    _keep_tests(survey, read.pack)
    _keep_soundings(survey, read.pack)
    _keep_refraction(survey, read.pack)
    return survey


def _keep_tests(survey: Survey, pack: SurveyPack) -> None:
    GroundPoint.objects.bulk_create(
        GroundPoint(survey=survey, offset_m=one.offset_m, level_m=one.level_m, note=one.note or "")
        for one in pack.ground
    )
    RockTest.objects.bulk_create(RockTest(survey=survey, **asdict(one)) for one in pack.rock)
    Probe.objects.bulk_create(
        Probe(survey=survey, **{**asdict(one), "why_stopped": one.why_stopped or ""})
        for one in pack.probes
    )


def _keep_soundings(survey: Survey, pack: SurveyPack) -> None:
    rows = Sounding.objects.bulk_create(
        Sounding(
            survey=survey, order=order, label=one.label, offset_m=one.offset_m, array=one.array
        )
        for order, one in enumerate(pack.soundings, start=1)
    )
    # Of a reading that states no noise the table keeps what counts on the day it came in.
    unstated = counted_in(survey.site.watershed.district).practice.sounding_noise * 100
    SoundingReading.objects.bulk_create(
        SoundingReading(
            sounding=row,
            order=order,
            **asdict(reading) | {"sd_percent": reading.sd_percent or unstated},
        )
        for row, one in zip(rows, pack.soundings, strict=True)
        for order, reading in enumerate(one.readings, start=1)
    )


def _keep_refraction(survey: Survey, pack: SurveyPack) -> None:
    rows = RefractionLine.objects.bulk_create(
        RefractionLine(survey=survey, order=order, label=one.label, offset_m=one.offset_m)
        for order, one in enumerate(pack.refraction, start=1)
    )
    RefractionPick.objects.bulk_create(
        RefractionPick(line=row, order=order, **asdict(pick))
        for row, one in zip(rows, pack.refraction, strict=True)
        for order, pick in enumerate(one.picks, start=1)
    )
