"""A whole appraisal: how much of it the 2000 draws cost, beside pricing them one by one."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from pathlib import Path
from time import perf_counter

import pytest

from costing.appraisal import appraise
from costing.documents.bundle import documents_of
from costing.documents.result import as_json
from costing.price.rates import read_rates
from structures.intake.pack import RockLinePoint
from structures.intake.survey_pack import read_pack

pytestmark = pytest.mark.benchmark

PACK = Path("fixtures/packs/OD-01.json")
RATES = Path("fixtures/rates/RS-2025-26.csv")
DAY = date(2026, 4, 10)
ONE_BY_ONE = 100  # draws priced as settled lines


def seconds(call):
    start = perf_counter()
    found = call()
    return perf_counter() - start, found


def test_a_whole_appraisal(capsys):
    schedule = read_rates(RATES.name, RATES.read_bytes())
    settled = read_pack(PACK)
    open_line = replace(settled, rock_line=None)
    dry = replace(open_line, soundings=())
    read_s, _ = seconds(lambda: read_pack(PACK))
    whole_s, whole = seconds(lambda: appraise(open_line, schedule=schedule, on=DAY))
    bounds_s, estimated = seconds(lambda: appraise(dry, schedule=schedule, on=DAY))
    given_s, _ = seconds(
        lambda: appraise(replace(settled, soundings=()), schedule=schedule, on=DAY)
    )
    write_s, _ = seconds(lambda: documents_of(whole))
    rock = estimated.rock

    def one_by_one():
        for line in rock.draws_m[:ONE_BY_ONE]:
            points = tuple(map(RockLinePoint, rock.offset_m.tolist(), line.tolist()))
            appraise(replace(dry, rock_line=points), schedule=schedule, on=DAY)

    single_s, _ = seconds(one_by_one)
    per_draw = (bounds_s - given_s) / rock.draws_m.shape[0]
    assert as_json(estimated)["estimate"]["draws"] == 2000
    with capsys.disabled():
        print(  # noqa: T201 -- the ratio is what a benchmark is read for
            f"\nappraisal of OD-01: read {read_s:.3f} s, settled line {given_s:.3f} s, estimated line "
            f"with 2000 draws {bounds_s:.2f} s, with two soundings {whole_s:.2f} s, files {write_s:.2f} s"
            f"\na draw costs {1e3 * per_draw:.3f} ms together and {1e3 * single_s / ONE_BY_ONE:.2f} ms "
            f"one by one: {single_s / ONE_BY_ONE / per_draw:.0f} times as much"
        )
