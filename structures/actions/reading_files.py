"""Files of readings and rain: looked at row by row, kept as one step, taken back as one step."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any, Final
from zoneinfo import ZoneInfo

from django.db import transaction

from structures.access import Act, insist
from structures.actions.inbox import receive_file, refuse_same_file, told_of
from structures.actions.rain import keep_rain
from structures.actions.readings import ALREADY, HELD, KEPT, REFUSED, Answer, take_readings
from structures.actions.recount import recount
from structures.actions.refusals import as_documents, refusal
from structures.actions.register import append
from structures.errors import Finding, Refused
from structures.intake.grid import read_grids
from structures.intake.level_sheet import LevelSheet, Office, Question, read_level_sheet
from structures.intake.rain_sheet import RainRow, is_rain, read_rain_sheet
from structures.intake.tree import Ledger
from structures.models import (
    ColumnChoice,
    District,
    RainDay,
    RainMonth,
    Repair,
    Upload,
    Well,
)
from structures.queries.districts import today_of
from structures.queries.wells import visible_wells
from structures.water.well_rules import alike_names

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from structures.intake.grid import Grid
    from structures.models import User

REMEMBERED: Final = (
    "state",
    "comma",
    "minus",
    "letters",
)  # answers that hold for the next file too
FINDINGS_MOST: Final = 2000  # that are kept with a file
PAIRS: Final = ("LV-13", "PC-02")  # doubts that two readings raise about each other


@dataclass(frozen=True, slots=True)
class FileRead:
    """A file as it was read: the fate of every row, and what has to be answered first."""

    kind: str
    answers: tuple[Answer, ...] = ()
    rain: tuple[RainRow, ...] = ()
    questions: tuple[Question, ...] = ()
    findings: tuple[Finding, ...] = ()
    sheet: LevelSheet | None = None
    counts: Counter[str] = field(default_factory=Counter)

    @property
    def rows(self) -> int:
        return self.counts.total()


def preview_file(
    *,
    district_id: int,
    name: str,
    data: bytes,
    by: User,
    columns: Mapping[str, str] | None = None,
    answers: Mapping[str, str] | None = None,
) -> FileRead:
    """Read a file and tell the fate of every row; nothing is kept.

    Raises
    ------
    Refused
        If the user may not send readings there, or this very file was kept before (FI-01).
    """
    district = District.objects.get(pk=district_id)
    insist(by, Act.SEND_READINGS, district)
    with transaction.atomic():
        found = _read(district, name, data, by, columns or {}, answers or {}, None)
        transaction.set_rollback(True)
    return found


def keep_file(
    *,
    district_id: int,
    name: str,
    data: bytes,
    by: User,
    columns: Mapping[str, str] | None = None,
    answers: Mapping[str, str] | None = None,
) -> Upload:
    """Keep what a file says, all its rows in one step.

    Raises
    ------
    Refused
        If a question is open, nothing of it can be kept, or this very file was kept before.
    """
    district = District.objects.get(pk=district_id)
    insist(by, Act.SEND_READINGS, district)
    ledger = Ledger()
    grids = read_grids(name, data, ledger)
    kind = Upload.Kind.RAIN if is_rain(grids) else Upload.Kind.READINGS
    upload = receive_file(kind=kind, name=name, data=data, owner=district, by=by)
    with told_of(upload), transaction.atomic():
        # The district row locks its files: the same bytes do not come in twice at once.
        District.objects.select_for_update().get(pk=district_id)
        refuse_same_file(kind=kind, name=upload.name, data=data, district=district, by=by)
        found = _read(district, name, data, by, columns or {}, answers or {}, upload)
        _insist_kept(found, name)
        _count(upload, found, answers or {})
        _remember(found, district, by, columns or {}, answers or {})
    return upload


@transaction.atomic
def take_back(*, upload_id: int, by: User) -> Upload:
    """Take a file back as one step: what it added is there no more, the file itself stays.

    Raises
    ------
    Refused
        If it was not kept, holds no readings or rain, or somebody has decided on a reading of it.
    """
    upload = (
        Upload.objects.select_for_update(of=("self",)).select_related("district").get(pk=upload_id)
    )
    insist(by, Act.SEND_READINGS, upload.district)
    if upload.outcome != Upload.Outcome.KEPT or upload.kind not in (
        Upload.Kind.READINGS,
        Upload.Kind.RAIN,
    ):
        raise Refused(
            "There is nothing to take back.", where=upload.name, remedy="Choose a file kept."
        )
    repairs = Repair.objects.filter(reading__upload=upload)
    decided = repairs.exclude(decision="").count()
    if decided:
        raise Refused(
            f"Somebody has decided on {decided} doubts of this file.",
            where=upload.name,
            remedy="Leave those readings out one by one instead.",
        )
    wells = list(
        Well.objects.select_for_update(of=("self",))
        .select_related("watershed__district")
        .filter(readings__upload=upload)
        .order_by("code")
    )
    repairs.delete()
    times = set(upload.readings.values_list("well_id", "read_at"))
    gone = upload.readings.all().delete()[0]
    gone += RainDay.objects.filter(upload=upload).delete()[0]
    gone += RainMonth.objects.filter(upload=upload).delete()[0]
    for well in {one.pk: one for one in wells}.values():
        _settle_pairs(well, {at for pk, at in times if pk == well.pk})
    upload.outcome = Upload.Outcome.BACK
    upload.save()
    append(
        district=upload.district,
        by=by,
        act="file taken back",
        subject=f"{upload.name}: {gone} rows",
        content={"file": upload.pk, "sha256": upload.sha256, "rows": gone},
    )
    return upload


def _settle_pairs(well: Well, times: set[Any]) -> None:
    """Let go of doubts that only stood because of what was taken back."""
    for at in times:
        alone = list(well.readings.filter(read_at=at))
        if len(alone) == 1:
            Repair.objects.filter(reading=alone[0], decision="", rule__in=PAIRS).delete()
            recount(well, alone)


def remembered(*, by: User, district: District, digest: str) -> dict[str, dict[str, str]]:
    """What the sender said of a table with the same headings before."""
    one = ColumnChoice.objects.filter(by=by, district=district, heading_digest=digest).first()
    return {"columns": {}, "answers": {}} if one is None else one.choices


def _read(
    district: District,
    name: str,
    data: bytes,
    by: User,
    columns: Mapping[str, str],
    answers: Mapping[str, str],
    upload: Upload | None,
) -> FileRead:
    ledger = Ledger()
    grids = read_grids(name, data, ledger)
    if is_rain(grids):
        return _read_rain(district, grids, ledger, by, answers, upload)
    office = _office(district, by, grids)
    said = dict(columns)
    first = read_level_sheet(grids, office, columns=said, answers=answers, ledger=Ledger())
    for sheet in first.sheets:
        before = remembered(by=by, district=district, digest=sheet.columns.digest)
        said = {**before["columns"], **said}
        answers = {**before["answers"], **answers}
    sheet = read_level_sheet(grids, office, columns=said, answers=answers, ledger=ledger)
    told = (*sheet.findings, *_list_of_wells(grids))
    if sheet.questions:
        return FileRead("readings", (), (), sheet.questions, told, sheet)
    taken = take_readings(records=sheet.records, by=by, upload=upload)
    counts = Counter(one.result for one in taken)
    return FileRead("readings", taken, (), (), told, sheet, counts)


def _read_rain(
    district: District,
    grids: Sequence[Grid],
    ledger: Ledger,
    by: User,
    answers: Mapping[str, str],
    upload: Upload | None,
) -> FileRead:
    rows = read_rain_sheet(grids, ledger, gauge=answers.get("gauge", ""))
    counts = keep_rain(district=district, rows=rows, by=by, upload=upload)
    return FileRead("rain", (), tuple(rows), (), tuple(ledger.findings), None, counts)


def _office(district: District, by: User, grids: Iterable[Grid]) -> Office:
    wells: dict[str, str] = {}
    for one in visible_wells(by).filter(watershed__district=district):
        for known in (one.code, one.name, *one.other_names):
            if known:
                wells[known.lower()] = one.code
    names = {
        str(line.cell(0)).strip().lower()
        for grid in grids
        for line in grid.lines[:200]
        if isinstance(line.cell(0), str)
    }
    likely = {
        name: code
        for name in names - wells.keys()
        for known, code in wells.items()
        if known != code.lower() and alike_names(name, known)
    }
    return Office(wells, ZoneInfo(district.zone), today_of(district), likely)


def _list_of_wells(grids: Sequence[Grid]) -> list[Finding]:
    """Tell of a list of wells where readings are read, and of names in it that may be one (34)."""
    found = []
    for grid in grids:
        heads = {str(cell).strip().lower() for cell in grid.lines[0].cells}
        if not {"well", "lat", "lon"} <= heads:
            continue
        what = "This is a list of wells, not of readings."
        found.append(Finding(grid.where, "", what, "Enter each well once on its page.", "block"))
        names = [(grid.place(line), str(line.cell(0))) for line in grid.lines[1:]]
        for place, (where, name) in enumerate(names):
            for _, other in names[:place]:
                if alike_names(name, other):
                    what = f"{name} and {other} may be one well."
                    remedy = "Join or keep, with reason: other spellings are its other names."
                    found.append(Finding(where, "well", what, remedy, "hold", "WL-03"))
                    break
    return found


def _insist_kept(found: FileRead, name: str) -> None:
    blocked = [one for one in found.findings if one.level == "block"]
    if blocked:
        raise refusal(found.findings, "file")
    if found.questions:
        asked = found.questions[0]
        raise Refused(asked.asks, where=name, remedy="Answer it, then keep the file.")
    if not found.rows - found.counts[REFUSED]:
        rows = [find for one in found.answers for find in one.findings if find.level == "block"]
        rows += [find for one in found.rain for find in one.findings if find.level == "block"]
        raise Refused(
            "No row of this file can be kept.",
            where=name,
            remedy="Put right what is listed and send it again.",
            findings=tuple(rows[:FINDINGS_MOST]),
        )


def _count(upload: Upload, found: FileRead, answers: Mapping[str, str]) -> None:
    upload.outcome = Upload.Outcome.KEPT
    upload.rows_in = found.rows
    upload.rows_kept = found.counts[KEPT]
    upload.rows_held = found.counts[HELD]
    upload.rows_refused = found.counts[REFUSED] + found.counts[ALREADY]
    told = [*found.findings]
    if answers:
        said = ", ".join(f"{key}: {value}" for key, value in sorted(answers.items()))
        told.append(
            Finding(upload.name, "", f"Answered by the sender: {said}.", "", "note", "FI-04")
        )
    told += [find for one in found.answers for find in one.findings if one.result != KEPT]
    told += [find for one in found.rain for find in one.findings]
    upload.findings = as_documents(told[:FINDINGS_MOST])
    upload.save()


def _remember(
    found: FileRead,
    district: District,
    by: User,
    columns: Mapping[str, str],
    answers: Mapping[str, str],
) -> None:
    kept = {key: value for key, value in answers.items() if key in REMEMBERED}
    for sheet in found.sheet.sheets if found.sheet else ():
        ColumnChoice.objects.update_or_create(
            by=by,
            district=district,
            heading_digest=sheet.columns.digest,
            defaults={"choices": {"columns": dict(columns), "answers": kept}},
        )
