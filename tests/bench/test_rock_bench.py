"""Rock line with whole-line draws beside a general machine-learning library, in one run."""

from __future__ import annotations

from time import perf_counter

import numpy as np
import pytest
from sklearn.gaussian_process import GaussianProcessRegressor
from sklearn.gaussian_process.kernels import ConstantKernel, Matern

from structures.ground.gaussian import Covariance, Observations, draw_lines, predict

pytestmark = pytest.mark.benchmark

DRAWS, ROUNDS = 1000, 7
X = np.array([0.0, 10.0, 22.0, 35.0, 50.0, 64.0])
Z = np.array([98.2, 95.1, 93.4, 94.6, 97.9, 99.0])
SD = np.array([0.05, 0.6, 0.6, 0.05, 0.3, 0.1])
AT = np.linspace(0.0, 64.0, 101)


def ours(bounds=0):
    places = np.concatenate([np.linspace(4.0, 60.0, bounds), AT])
    found = predict(Observations(X, Z, SD), Covariance(9.0, 20.0), places, trend_m=96.0)
    most = found.mean_m[:bounds] - 0.5
    return draw_lines(found, most, draws=DRAWS, steady_m2=9e-9, rng=np.random.default_rng(1))


def library():
    kernel = ConstantKernel(9.0, "fixed") * Matern(20.0, "fixed", nu=0.5)
    process = GaussianProcessRegressor(kernel, alpha=SD**2, optimizer=None)
    process.fit(X[:, None], Z - 96.0)
    return process.sample_y(AT[:, None], DRAWS, random_state=1).T + 96.0


def best_ms(call):
    times = []
    for _ in range(ROUNDS):
        start = perf_counter()
        call()
        times.append(perf_counter() - start)
    return 1e3 * min(times)


def test_a_thousand_lines_beside_the_library(capsys):
    """The same law twice: means within 5 standard errors; then both are timed side by side."""
    here, there = ours(), library()
    error = there.std(axis=0) / DRAWS**0.5
    # At a firm test both scatter by its small error, so the comparison keeps a floor of 1 mm.
    assert (
        np.abs(here.mean(axis=0) - there.mean(axis=0)) < 5 * np.hypot(error, error) + 1e-3
    ).all()
    plain, bounded, other = best_ms(ours), best_ms(lambda: ours(6)), best_ms(library)
    with capsys.disabled():
        print(  # noqa: T201 -- the ratio is what a benchmark is read for
            f"\nrock line, {DRAWS} draws at {AT.size} places: {plain:.1f} ms; with 6 upper bounds "
            f"{bounded:.1f} ms; the library without bounds {other:.1f} ms; ratio {plain / other:.2f}"
        )
