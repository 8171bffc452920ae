"""Time of measuring whole-line draws against a limit, and against a loop over single lines."""

from time import perf_counter

import numpy as np
import pytest

from structures.intake.pack import GroundPoint, Toes, WallSettings
from structures.takeoff.sheet import measure
from structures.wall.cutoff import cut
from structures.wall.section import make_section

DRAWS, OFFSETS = 2000, 150
LIMIT_S = 1.0  # 2000 draws on 150 offsets, best of three
LOOPED = 100  # draws of the loop that is timed for the ratio


def valley():
    """A valley 149 m wide, ground and rock at every metre, draws that sway as whole lines."""
    rng = np.random.default_rng(7)
    x = np.arange(float(OFFSETS))
    bank = np.maximum(np.abs(x - 74.5) - 30.0, 0.0) * 0.15
    ground = tuple(GroundPoint(a, 100.0 + b) for a, b in zip(x, bank, strict=True))
    rock = 93.0 + 1.6 * bank + np.cos(x / 9.0)
    sway = rng.normal(0.0, 1.0, (DRAWS, 1)) * np.cos(x / 40.0 + rng.uniform(0, 6, (DRAWS, 1)))
    return ground, Toes(44.0, 105.0), x, np.minimum(rock + sway, 100.0 + bank), WallSettings()


@pytest.mark.benchmark
def test_two_thousand_draws_within_a_second(capsys):
    ground, toes, x, lines, wall = valley()

    def run(rows):
        started = perf_counter()
        takings = measure(cut(make_section(ground, toes, x, rows, wall)), wall)
        return perf_counter() - started, takings

    best, takings = min((run(lines) for _ in range(3)), key=lambda pair: pair[0])
    started = perf_counter()
    singly = [run(row)[1] for row in lines[:LOOPED]]
    looped = (perf_counter() - started) * DRAWS / LOOPED
    with capsys.disabled():
        print(  # noqa: T201 -- the ratio is what a benchmark is read for
            f"\n{DRAWS} draws x {OFFSETS} offsets, {takings.excavation_m3.shape[1]} lifts: "
            f"{best:.3f} s; one by one {looped:.2f} s, {looped / best:.1f} times as long"
        )
    for i, alone in enumerate(singly):
        assert takings.works.clay_m3[i] == pytest.approx(alone.works.clay_m3[0], rel=1e-12)
    assert best < LIMIT_S
