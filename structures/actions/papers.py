"""Filing a paper: read by the rules of its kind, kept as the next version, entered in the register."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django.db import transaction

from structures.access import Act, insist, place_of, roles
from structures.actions.refusals import as_documents, blocking, refusal
from structures.actions.register import append
from structures.errors import Finding, Refused
from structures.life.drawing_rules import Limits
from structures.life.paper_reader import judge_photo, read_paper
from structures.life.papers import PAPERS
from structures.life.people import title, whom
from structures.models import Paper, Photo, Structure
from structures.queries.register import paper_digest
from structures.queries.settings import settings_in_force

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence
    from uuid import UUID

    from structures.models import District, User

FILED: Final = "paper filed"
OF_A_DRAWING: Final = ("drawing-sheet", "check")
ABOUT_MOST: Final = 120  # characters that tell papers of one kind apart


@transaction.atomic
def file_paper(
    *,
    structure_id: int,
    kind: str,
    given: Mapping[str, object],
    by: User,
    photos: Sequence[UUID] = (),
) -> Paper:
    """Keep a filled form as the next version of its kind; the same again is the one that is there.

    Raises
    ------
    Refused
        If the user's role makes no such paper, a field or rule blocks it, or a photo is missing;
        `findings` names each field.
    """
    structure = _locked(structure_id)
    insist(by, Act.FILL_IN_PAPER, structure)
    form = PAPERS.get(kind)
    if form is None or not form.fields:
        raise Refused(f"There is no form for {kind}.", remedy="Choose one of the list.")
    _insist_maker(by, structure, form)
    content, findings = read_paper(
        kind, given, limits=limits_in_force(structure.site.watershed.district)
    )
    shown = _photos_of(structure, photos)
    findings = (*findings, *judge_photo(kind, len(shown)))
    if blocking(findings):
        raise refusal(findings, form.title)
    about = _about(structure, kind, content, by)
    scans = sorted(one.sha256 for one in shown)
    digest = paper_digest(kind, about, content, scans)
    newest = structure.papers.filter(kind=kind, about=about).order_by("-version").first()
    if newest is not None and newest.digest == digest:
        return newest
    paper = Paper.objects.create(
        structure=structure,
        kind=kind,
        about=about,
        version=1 if newest is None else newest.version + 1,
        content=content,
        findings=as_documents(findings),
        digest=digest,
        by=by,
    )
    paper.photos.set(shown)
    append(
        district=structure.site.watershed.district,
        by=by,
        act=FILED,
        subject=f"{form.title} {paper.version} of {structure.site.code}",
        structure=structure,
        content={
            "paper": kind,
            "about": about,
            "version": paper.version,
            "digest": digest,
            "content": content,
            "photos": scans,
        },
    )
    return paper


def limits_in_force(district: District) -> Limits:
    """Give the settings by which a drawing sheet is judged in a district."""
    lines = settings_in_force(district)
    return Limits(
        licensed_depth_m=lines["licensed_depth_m"].value,
        bund_least_m=lines["clay_pit_from_bund_m"].value,
    )


def _locked(structure_id: int) -> Structure:
    """Lock the structure: its row numbers its papers and moves."""
    return (
        Structure.objects.select_for_update(of=("self",))
        .select_related("site__watershed__district")
        .get(pk=structure_id)
    )


def _insist_maker(by: User, structure: Structure, form: Any) -> None:
    mine = roles(by, place_of(structure))
    if mine.isdisjoint(form.makers):
        raise Refused(
            f"{title(mine)} does not write the {form.title}.",
            where=form.title,
            remedy=f"Ask {whom(form.makers)}.",
        )


def _photos_of(structure: Structure, ids: Sequence[UUID]) -> list[Photo]:
    found = list(Photo.objects.filter(pk__in=ids, site=structure.site_id))
    if len(found) != len(set(ids)):
        raise Refused(
            "A photo named here is not one of this site.",
            where="photo",
            remedy="Choose it again from this page.",
        )
    return found


def _about(structure: Structure, kind: str, content: Mapping[str, Any], by: User) -> str:
    """Say what tells this paper from others of its kind: drawing, settlements, season, halt."""
    if kind in OF_A_DRAWING:
        return _drawing(structure, kind, by)
    if kind == "hearing":
        heard = ", ".join(row["settlement"] for row in content["settlements"])
        return heard[:ABOUT_MOST]
    if kind == "season":
        return f"to open {content['opens_on'][:4]}"
    if kind == "verdict":
        return f"water year {content['water_year']}"[:ABOUT_MOST]
    if kind in ("halt", "restart"):
        halts = structure.moves.filter(to_stage="halted").count()
        # A halt is written before the move, a restart after it.
        return f"halt {halts + 1 if kind == 'halt' else halts}"
    return ""


def _drawing(structure: Structure, kind: str, by: User) -> str:
    design = structure.designs.order_by("-version").first()
    form = PAPERS[kind]
    if design is None:
        raise Refused(
            f"There is no drawing yet that the {form.title} could speak of.",
            where=form.title,
            remedy="Draw the wall first.",
        )
    if kind == "check" and design.by_id == by.pk:
        finding = Finding(
            form.title,
            "",
            f"You drew design {design.version} yourself.",
            "Ask another engineer to check it.",
        )
        raise refusal([finding], form.title)
    return f"design {design.version}"
