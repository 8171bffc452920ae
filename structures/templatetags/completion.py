"""A wall that is done, on the page of its structure: its verdict first, and what is still missing."""

from __future__ import annotations

from django import template

from structures.queries.verdicts import NOT_KNOWN, STANDING, standing_verdict
from structures.queries.wells import pipes_of

register = template.Library()


@register.inclusion_tag("structures/_completion.html", takes_context=True)
def completion(context, structure):
    """Word on the wall, pipes and links, from the day its first strip is cut."""
    stands = structure.stage in STANDING
    if not stands and not structure.strips.exists():
        return {"shown": False}
    newest = standing_verdict(structure)
    return {
        "shown": True,
        "stands": stands,
        "site": structure.site,
        "word": NOT_KNOWN if newest is None else newest.word,
        "pipes": pipes_of(context["user"], structure.site),
    }
