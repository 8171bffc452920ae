"""Bodies of the runs that speak money."""

from __future__ import annotations

from datetime import date

from costing.actions.appraisals import APPRAISAL
from costing.appraisal import METHOD, appraise
from costing.documents.bundle import documents_of, figures_of
from costing.documents.result import as_json
from costing.price.rates import read_rates
from structures.intake.survey_pack import read_pack_bytes
from structures.runs.files import keep_bytes, kept_bytes
from structures.runs.queue import Outcome, Work, register


@register(APPRAISAL, version=METHOD)
def appraise_pack(work: Work) -> Outcome:
    """Appraise a pack that was handed in, and keep its drawing, workbook and report."""
    handed, rates = work.params["pack"], work.params["rates"]
    work.progress(0.05, "reading the survey")
    pack = read_pack_bytes(handed["name"], kept_bytes(handed["digest"]))
    schedule = None
    if rates is not None:
        schedule = read_rates(
            rates["name"], kept_bytes(rates["digest"]), currency_default=work.params["currency"]
        )
    work.progress(0.15, "reading soundings, drawing the rock line, pricing")
    found = appraise(pack, schedule=schedule, on=date.fromisoformat(work.params["on"]))
    work.progress(0.75, "writing drawing, workbook and report")
    documents = {name: keep_bytes(data) for name, data in documents_of(found).items()}
    return Outcome(
        {
            "appraisal": as_json(found),
            "site": {"name": pack.site.name, "stream": pack.site.stream},
            "figures": figures_of(found),
            "documents": documents,
        }
    )
