"""The register: one entry at a time, at the end of its chain. Nothing else writes an entry."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from django.db import transaction
from django.utils import timezone

from structures.errors import Refused
from structures.life import chain
from structures.models import Chain, Entry
from structures.queries.register import as_record

if TYPE_CHECKING:
    from collections.abc import Mapping

    from structures.models import District, Structure, User


@transaction.atomic
def append(
    *,
    district: District | None,
    by: User,
    act: str,
    subject: str,
    content: Mapping[str, Any],
    structure: Structure | None = None,
    corrects: Entry | None = None,
) -> Entry:
    """Append an entry to the register of a district, or (None) to that of the office.

    Call it inside the transaction of the act itself, after every other lock: the chain's row is
    locked until that ends, and act and entry are kept together or not at all.

    Parameters
    ----------
    act
        A verb or noun of at most 40 characters, as "technical sanction"; the register filters by it.
    subject
        What it is about, in words, without a sum of money.
    content
        What was decided on, frozen, as plain JSON values: days and Decimals as text. Content with
        a key `currency` counts as money and is shown only to those who may see money.
    corrects
        The entry that this one corrects; that one stays as it is.

    Raises
    ------
    Refused
        If it would correct an entry of another register.
    ValueError
        If the content is not JSON.
    """
    Chain.objects.get_or_create(district=district)
    # The end of the chain is locked: two signatures cannot take one number.
    end = Chain.objects.select_for_update().get(district=district)
    if corrects is not None and corrects.chain_id != end.pk:
        raise Refused(
            "The entry to correct stands in another register.",
            where=corrects.code,
            remedy="Correct it in its own district.",
        )
    last = end.entries.filter(number=end.length).first()
    sealed = chain.seal(
        chain.Entry(
            number=0,
            at=timezone.now(),
            by=by.pk,
            by_name=by.username,
            act=act,
            content=content,
            structure=None if structure is None else structure.pk,
            subject=subject,
            corrects="" if corrects is None else corrects.digest,
        ),
        None if last is None else as_record(last),
    )
    entry = Entry.objects.create(
        chain=end,
        number=sealed.number,
        at=sealed.at,
        by=by,
        by_name=sealed.by_name,
        act=act,
        structure=structure,
        subject=subject,
        content=content,
        content_digest=sealed.content_digest,
        previous_digest=sealed.previous_digest,
        digest=sealed.digest,
        code=sealed.code,
        corrects=corrects,
    )
    end.length, end.digest = sealed.number, sealed.digest
    end.save(update_fields=["length", "digest"])
    return entry
