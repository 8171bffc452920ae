"""Bodies of the runs that speak money."""

from __future__ import annotations

from datetime import date
from functools import partial

from costing.actions.appraisals import APPRAISAL
from costing.actions.estimate import PRICE, freeze_estimate
from costing.actions.mail import DAILY_MAIL, send_daily_mail
from costing.actions.option import Asked, asked_before, freeze_forecast
from costing.appraisal import METHOD, SEED, appraise
from costing.documents.bundle import documents_of, figures_of
from costing.documents.reading import reading_json
from costing.documents.result import as_json
from costing.forecast import forecast
from costing.options import ways
from costing.price.rates import read_rates
from costing.queries.estimates import price_inputs
from costing.queries.forecasts import WORKS_FORECAST, forecast_inputs, other_line
from structures.errors import Refused
from structures.intake.practice import practice_of
from structures.intake.survey_pack import read_pack_bytes
from structures.queries.runs import day_asked
from structures.queries.survey_reading import READ, read_inputs
from structures.runs.clock import every_day
from structures.runs.events import ROCK_FOUND, await_event
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


@register(READ, version=METHOD)
def read_survey(work: Work) -> Outcome:
    """Read a survey of the office without a price: what its sheet shows."""
    survey, pack = read_inputs(work.params)
    work.progress(0.1, "reading soundings, drawing the rock line and the wall")
    day = day_asked(work.held.run_id, survey.site.watershed.district)
    draws = work.params["draws"]
    practice = practice_of(work.params["practice"])
    found = appraise(pack, on=day, draws=draws, practice=practice)
    work.progress(0.8, "drawing the section")
    return Outcome(reading_json(found, draws=draws, seed=SEED))


@register(PRICE, version=METHOD)
def price_estimate(work: Work) -> Outcome:
    """Price a design of the office; the estimate is frozen in the transaction that ends the run."""
    work.progress(0.05, "reading survey and rates")
    inputs = price_inputs(work.params)
    work.progress(0.15, "reading soundings, drawing the rock line, pricing")
    found = appraise(
        inputs.pack,
        schedule=inputs.rates,
        on=day_asked(work.held.run_id, inputs.design.survey.site.watershed.district),
        draws=work.params["draws"],
        seed=work.params["seed"],
        practice=practice_of(work.params["practice"]),
    )
    if found.estimate is None:
        silent = next(one for one in found.cautions if one.level == "block")
        raise Refused(silent.text, where=inputs.pack.site.code)
    work.progress(0.75, "writing drawing, workbook and report")
    documents = {name: keep_bytes(data) for name, data in documents_of(found).items()}
    return Outcome(
        {"appraisal": as_json(found), "figures": figures_of(found), "documents": documents},
        partial(freeze_estimate, work.held.run_id, inputs, found),
    )


@register(WORKS_FORECAST, version=METHOD)
def forecast_works(work: Work) -> Outcome:
    """Price a wall with the rock as found and weigh the ways on; the paper opens as the run ends."""
    work.progress(0.05, "reading drawing, rock as found, rates and measurement book")
    inputs = forecast_inputs(work.params["structure"])
    said = work.params.get("asked")
    asked = asked_before(inputs.structure) if said is None else Asked(**said)
    counted = {"on": inputs.on, "practice": inputs.practice}
    work.progress(0.15, "re-conditioning the rock line, pricing")
    found = forecast(inputs.drawn, inputs.found, inputs.books, draws=inputs.draws, **counted)
    options = ()
    if found.appraisal.design is not None:
        work.progress(0.6, "weighing four ways on")
        rates = {"schedule": inputs.books.schedule, **counted}
        other = None
        if asked.other_survey is not None:
            other = appraise(other_line(inputs.structure, asked.other_survey), **rates)
        options = ways.weigh(
            found,
            appraise(inputs.drawn.pack, **rates),
            inputs.on_site(found.measured and found.measured.amount),
            inputs.season,
            ways.Asked(asked.shelf_m, asked.reach_m, other, asked.licensed_design),
        )
    # Without a sum of money: whoever may see the run may read its result.
    return Outcome(
        {"levels": len(inputs.found), "total_known": found.total is not None},
        partial(freeze_forecast, work.held.run_id, inputs, found, options, asked),
    )


await_event(ROCK_FOUND, kind=WORKS_FORECAST)


@register(DAILY_MAIL, version="1")
def mail_of_the_day(work: Work) -> Outcome:
    """Write to everyone for whom something stands in today's list, once."""
    return Outcome({"sent": send_daily_mail(day=date.fromisoformat(work.params["day"]))})


every_day(DAILY_MAIL, kind=DAILY_MAIL)
