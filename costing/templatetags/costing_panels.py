"""Money on a page of metres: the panel is drawn here, so `structures` needs no word of it."""

from __future__ import annotations

from django import template

from costing.queries.decisions import waiting_papers
from costing.queries.estimates import estimates_of, stale_reasons
from costing.queries.ways import ways_of
from structures.access import Act, may

register = template.Library()


@register.inclusion_tag("costing/_estimate_panel.html", takes_context=True)
def estimate_panel(context, site):
    """The newest estimate of a site, and why it is stale; nothing for who may not see money."""
    user = context["user"]
    if not may(user, Act.SEE_MONEY, site):
        return {"seen": False}
    newest = estimates_of(user, site.code).first()
    return {
        "seen": True,
        "site": site,
        "estimate": newest,
        "stale": () if newest is None else stale_reasons(newest),
        "may_ask": may(user, Act.REQUEST_ESTIMATE, site),
        "csrf_token": context.get("csrf_token"),
    }


@register.simple_tag(takes_context=True)
def ways(context, structure):
    """What a structure waits for and where the reader may take it; without a sum of money."""
    return ways_of(context["user"], structure)


@register.simple_tag(takes_context=True)
def papers_waiting(context):
    """Option papers and bills that the reader decides; each has a page of its own."""
    return waiting_papers(context["user"])
