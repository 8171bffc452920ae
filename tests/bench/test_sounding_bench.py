"""Soundings timed beside a plain solver in one run; what is judged is the ratio, and one limit."""

from __future__ import annotations

import time
from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import least_squares
from scipy.special import j0, jn_zeros

from structures.ground.inversion import invert
from structures.ground.resistivity import apparent_resistivity, spread
from structures.ground.sounding import interpret
from structures.ground.sounding_curve import curve
from structures.intake.pack import Sounding, SoundingReading

pytestmark = pytest.mark.benchmark

AB2_M = np.array([1.5, 2, 3, 4, 5, 6, 8, 10, 10, 12, 15, 20, 25, 30, 40, 40, 50, 60, 80, 100])
MN2_M = np.array([0.5] * 8 + [2.5] * 7 + [10] * 5)
RESISTIVITY, THICKNESS = np.array([200.0, 40.0, 1000.0]), np.array([2.0, 6.0])
FORWARD_RATIO, INVERSION_RATIO = 20.0, 1.0  # at least so many times as quick as the plain way
LIMIT_S = 1.0  # of one sounding of 20 readings on one core


def best_of(count, work):
    """Shortest processor time of some runs: the machine is shared."""
    taken = []
    for _ in range(count):
        start = time.process_time()
        result = work()
        taken.append(time.process_time() - start)
    return min(taken), result


def transform(wave_number, resistivity, thickness):
    above = resistivity[-1]
    for rho, h in zip(resistivity[-2::-1], thickness[::-1], strict=True):
        th = np.tanh(wave_number * h)
        above = (above + rho * th) / (1 + above * th / rho)
    return above


def integrated(resistivity, thickness):
    """The plain way to one curve: adaptive quadrature between the zeros of J0, each distance anew."""

    def potential(distance):
        end = 12.0 / thickness[0]
        zeros = jn_zeros(0, int(end * distance / np.pi) + 1) / distance
        edges = [0.0, *zeros[zeros < end], end]

        def integrand(wave_number):
            top = transform(wave_number, resistivity, thickness)
            return (top - resistivity[0]) * j0(wave_number * distance)

        return resistivity[0] / distance + sum(quad(integrand, a, b)[0] for a, b in pairwise(edges))

    near, far = AB2_M - MN2_M, AB2_M + MN2_M
    upper = np.array([potential(r) for r in near]) - np.array([potential(r) for r in far])
    return upper / (1 / near - 1 / far)


def plain_matrix():
    """The plain way to many curves: one fixed fine grid, tanh recursion, model after model."""
    edges = np.concatenate([[0.0], np.geomspace(1e-4, np.pi / 110, 12), []])
    edges = np.concatenate([edges, np.arange(edges[-1], 14 / 0.5, np.pi / 110)[1:]])
    node, weight = np.polynomial.legendre.leggauss(6)
    half = np.diff(edges)[:, None] / 2
    wave = (edges[:-1, None] + half * (node + 1)).ravel()
    near, far = (AB2_M - MN2_M)[:, None], (AB2_M + MN2_M)[:, None]
    kernel = (j0(wave * near) - j0(wave * far)) / (1 / near - 1 / far) * (half * weight).ravel()
    return lambda rho, h: rho[0] + kernel @ (transform(wave, rho, h) - rho[0])


def test_forward_model_beside_quadrature(capsys):
    ours, computed = best_of(
        5, lambda: apparent_resistivity(spread(AB2_M, MN2_M), RESISTIVITY, THICKNESS)
    )
    plain, expected = best_of(1, lambda: integrated(RESISTIVITY, THICKNESS))
    np.testing.assert_allclose(computed, expected, rtol=1e-6)
    batch = np.tile(RESISTIVITY, (1000, 1)), np.tile(THICKNESS, (1000, 1))
    many, _ = best_of(5, lambda: apparent_resistivity(spread(AB2_M, MN2_M), *batch))
    with capsys.disabled():
        print(  # noqa: T201 -- a benchmark is read
            f"\nforward model: {1e3 * ours:.2f} ms, by quadrature {1e3 * plain:.0f} ms, ratio "
            f"{plain / ours:.0f}; in batches of 1000 {1e3 * many:.1f} us a model"
        )
    assert plain > FORWARD_RATIO * ours


def test_inversion_beside_a_general_solver(capsys):
    """Same data, same number of starts, same model; scipy with the plain forward model."""
    rng = np.random.default_rng(1)
    observed = integrated(RESISTIVITY, THICKNESS) * np.exp(0.03 * rng.standard_normal(20))
    rows = zip(AB2_M, MN2_M, observed, strict=True)
    readings = tuple(SoundingReading(*(float(value) for value in row)) for row in rows)
    sounding = Sounding(0.0, "schlumberger", readings, "bench")
    prepared = curve(sounding)
    forward = plain_matrix()
    low, high = np.log([1, 1, 1, 0.5, 0.5]), np.log([1e5, 1e5, 1e5, 100, 100])

    def residual(unknowns):
        values = np.exp(unknowns)
        ratio = np.log(observed / forward(values[:3], values[3:]))
        return prepared.whitening @ ratio

    def solve():
        starts = np.log([20, 20, 50, 0.5, 1]) + rng.random((8, 5)) * np.log([75, 75, 120, 12, 25])
        found = [
            least_squares(residual, start, bounds=(low, high), x_scale="jac") for start in starts
        ]
        return min(2 * one.cost for one in found)

    plain, least = best_of(1, solve)
    ours, fit = best_of(3, lambda: invert(prepared, 3, rng=np.random.default_rng(1)))
    whole, read = best_of(3, lambda: interpret(sounding))
    with capsys.disabled():
        print(  # noqa: T201 -- a benchmark is read
            f"\ninversion, 8 starts: {1e3 * ours:.0f} ms, general solver {1e3 * plain:.0f} ms, ratio "
            f"{plain / ours:.0f}; whole sounding with range {whole:.2f} s"
        )
    assert fit.chi_square <= least * (1 + 1e-6)
    assert plain > INVERSION_RATIO * ours
    assert read.refusal is None
    assert whole < LIMIT_S
