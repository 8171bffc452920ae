"""A person's daily list: the lines of the ground and of the money, what stands still first."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django.utils.translation import gettext as _

from costing.queries.decisions import waiting, waiting_papers
from structures.queries.notices import Notice, notices_of_works

if TYPE_CHECKING:
    from collections.abc import Iterator

    from structures.models import User


def notices_of(user: User) -> list[Notice]:
    """Every line for one person; holds first, then as the queries order them."""
    lines = [*notices_of_works(user), *_papers(user), *_decisions(user)]
    return sorted(lines, key=lambda one: not one.hold)


def _papers(user: User) -> Iterator[Notice]:
    for one in waiting_papers(user):
        if one.kind == "option":
            said = _("Rock runs deeper: the option paper is open and its strips stand still.")
            yield Notice(one.site.code, said, one.since, "costing:option", (one.pk,), hold=True)
        else:
            said = _("Bill %(number)s waits to be decided.") % {"number": one.name}
            yield Notice(one.site.code, said, one.since, "costing:bill", (one.pk,))


def _decisions(user: User) -> Iterator[Notice]:
    for one in waiting(user):
        if one.mine:
            code = one.structure.site.code
            said = _("It waits for your %(what)s.") % {"what": one.what}
            yield Notice(code, said, one.since, "costing:decision", (code,))
