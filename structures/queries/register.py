"""The register as a user may read it, and the check that nothing in it was altered since."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from django.db.models import Exists, OuterRef, Q

from structures import access
from structures.access import Act
from structures.life import chain
from structures.life.short_code import read_code
from structures.models import Chain, Entry, Paper

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Mapping
    from typing import Any

    from django.db.models import QuerySet

    from structures.models import User

OF_MONEY: Final = "currency"  # content with this key states a sum of money
ROWS_AT_ONCE: Final = 500  # entries in memory while a chain is walked


def visible_entries(user: User) -> QuerySet[Entry]:
    """Entries of the sites and districts the user may see; those with money for who may see it.

    Entries of the office itself, and of a district as such, are shown to whoever serves there or
    keeps it.
    """
    seen, paid = (access.sites(user, act) for act in (Act.SEE, Act.SEE_MONEY))
    whole = Q(structure__isnull=True)
    districts = access.districts(user)
    kept = access.administered(user)
    here = Q(structure__site__in=seen) | whole & (
        Q(chain__district__in=districts) | Q(chain__district__in=kept)
    )
    if access.keeps_office(user) or districts.exists():
        here |= whole & Q(chain__district__isnull=True)
    with_money = Q(content__has_key=OF_MONEY)
    may_read = Q(structure__site__in=paid) | whole & Q(
        chain__district__in=access.districts(user, Act.SEE_MONEY)
    )
    found = Entry.objects.filter(here).filter(~with_money | may_read)
    return found.select_related("chain__district", "structure__site", "by", "corrects")


def newest_entries(user: User) -> QuerySet[Entry]:
    later = Entry.objects.filter(corrects=OuterRef("pk"))
    return visible_entries(user).annotate(corrected=Exists(later)).order_by("-at", "-pk")


def entries_of(user: User, code: str) -> QuerySet[Entry]:
    """The thread of one structure, oldest first."""
    return newest_entries(user).filter(structure__site__code=code).order_by("at", "number")


def entry_by_code(user: User, text: str) -> Entry | None:
    """Find an entry by the code that a document prints, however it was typed."""
    code = read_code(text)
    return None if code is None else newest_entries(user).filter(code=code).first()


def corrections_of(user: User, entry: Entry) -> QuerySet[Entry]:
    return visible_entries(user).filter(corrects=entry).order_by("number")


def with_acts(entries: QuerySet[Entry], text: str) -> QuerySet[Entry]:
    """Entries whose act, subject or person holds the text."""
    return entries.filter(
        Q(act__icontains=text) | Q(subject__icontains=text) | Q(by_name__icontains=text)
    )


def entry_of_paper(user: User, paper: Paper) -> Entry | None:
    """The entry that took a paper in; None for one taken over from before."""
    found = visible_entries(user).filter(
        structure=paper.structure_id, content__paper=paper.kind, content__digest=paper.digest
    )
    return found.order_by("number").first()


def entry_naming(user: User, act: str, key: str, digest: str) -> Entry | None:
    """The entry of an act whose content names a digest, as `estimate` does; None where none is."""
    named = {f"content__{key}": digest}
    return visible_entries(user).filter(act=act, **named).order_by("number").first()


def as_record(entry: Entry) -> chain.Entry:
    """Give an entry as the chain computes with it."""
    return chain.Entry(
        number=entry.number,
        at=entry.at,
        by=entry.by_id,
        by_name=entry.by_name,
        act=entry.act,
        content=entry.content,
        structure=entry.structure_id,
        subject=entry.subject,
        corrects="" if entry.corrects is None else entry.corrects.digest,
        content_digest=entry.content_digest,
        previous_digest=entry.previous_digest,
        digest=entry.digest,
        code=entry.code,
    )


@dataclass(frozen=True, slots=True)
class Checked:
    """One chain as it was walked: how many entries fit, and the first that does not."""

    where: str
    count: int
    number: int | None
    why: str

    @property
    def whole(self) -> bool:
        return not self.why


def check_registers() -> Iterator[Checked]:
    """Walk every chain and the records its entries froze; of the whole office, for its operator."""
    for end in Chain.objects.select_related("district").order_by("district__code"):
        yield check_chain(end)


def check_chain(end: Chain) -> Checked:
    """Walk one chain from its first entry to its end, then the papers that it names."""
    where = "office" if end.district is None else end.district.code
    rows = end.entries.select_related("corrects").order_by("number")
    misfit = chain.first_misfit(
        (as_record(one) for one in rows.iterator(ROWS_AT_ONCE)),
        length=end.length,
        digest=end.digest,
    )
    if misfit is not None:
        return Checked(where, end.length, misfit.number, misfit.why)
    for number, why in _altered_papers(end):
        return Checked(where, end.length, number, why)
    return Checked(where, end.length, None, "")


def _altered_papers(end: Chain) -> Iterator[tuple[int, str]]:
    """Compare every paper with the digest under which the register took it in."""
    filed = end.entries.filter(content__has_key="paper").order_by("number")
    for entry in filed.iterator(ROWS_AT_ONCE):
        told = entry.content
        paper = Paper.objects.filter(
            structure=entry.structure_id,
            kind=told["paper"],
            about=told["about"],
            version=told["version"],
        ).first()
        name = f"{told['paper']} {told['version']}"
        if paper is None:
            yield entry.number, f"the paper it names, {name}, is gone"
        elif _digest_of(paper) != told["digest"]:
            yield entry.number, f"the paper it names, {name}, is not what was filed"


def _digest_of(paper: Paper) -> str:
    scans = (one.sha256 for one in paper.photos.all())
    return paper_digest(paper.kind, paper.about, paper.content, scans)


def paper_digest(kind: str, about: str, content: Mapping[str, Any], scans: Iterable[str]) -> str:
    """Digest of a paper with its photos: what the register takes in when it is filed."""
    told = {"kind": kind, "about": about, "content": content, "photos": sorted(scans)}
    return chain.content_digest(told)
