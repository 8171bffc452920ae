"""Appraisals to print: the worked examples, one without rates, one without rock, one estimated."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from functools import cache
from pathlib import Path

from costing.appraisal import appraise
from costing.price.rates import read_rates
from structures.intake.pack import RockTest, Site
from structures.intake.survey_pack import read_pack

ROOT = Path(__file__).parents[3] / "fixtures"
ON = date(2027, 3, 14)


@cache
def rates():
    return read_rates("examples.csv", (ROOT / "rates" / "examples.csv").read_bytes())


def pack(name):
    return read_pack(ROOT / "packs" / f"example-{name.lower()}.json")


@cache
def example(name):
    """Example A, B or C of handbook 13 with its rates."""
    return appraise(pack(name), schedule=rates(), on=ON)


@cache
def unpriced():
    return appraise(pack("B"), on=ON)


@cache
def without_hours():
    """Example B without a plan of pumping: one line has no quantity."""
    survey = pack("B")
    works = replace(survey.works, pump_hours=None)
    return appraise(replace(survey, works=works), schedule=rates(), on=ON)


@cache
def without_rock():
    return appraise(replace(pack("B"), rock_line=None), schedule=rates(), on=ON)


@cache
def estimated():
    """Example B with its three bores in place of the settled line, and a name in two scripts."""
    survey = replace(
        pack("B"),
        site=Site("NE-07", "नेर्लवाडी <ford> & #sys.inputs", "=Nerla+va"),
        rock_line=None,
        rock=(
            RockTest(0.0, 2.7, "bore", met_rock=True),
            RockTest(6.0, 3.2, "bore", met_rock=True),
            RockTest(26.0, 5.4, "bore", met_rock=True),
            RockTest(52.0, 3.4, "bore", met_rock=True),
            RockTest(68.0, 1.8, "bore", met_rock=True),
        ),
    )
    return appraise(survey, schedule=rates(), on=ON)
