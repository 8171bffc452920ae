"""Soundings made from a model, and the field soundings of the fixtures."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import numpy as np
import pytest

from structures.ground.resistivity import apparent_resistivity, spread
from structures.intake.pack import Sounding, SoundingReading

ROOT = Path(__file__).parents[3]


@pytest.fixture(scope="session")
def sounding_oracle():
    return json.loads((ROOT / "tests/oracles/soundings.json").read_text())


@pytest.fixture(scope="session")
def field_spread(sounding_oracle):
    """The 20 readings of table 2: AB/2 and MN/2, three segments with two repeats."""
    readings = np.array(sounding_oracle["table_2"]["readings"])
    return readings[:, 0], readings[:, 1]


@pytest.fixture(scope="session")
def make_sounding(field_spread):
    """Make a sounding from a model, with noise and segment factors on demand."""

    def make(resistivity_ohm_m, thickness_m, *, log_error=0.0, array="schlumberger", spacing=None):
        ab2, mn2 = spacing or field_spread
        computed = apparent_resistivity(spread(ab2, mn2), resistivity_ohm_m, thickness_m)
        values = computed * np.exp(log_error)
        readings = tuple(
            SoundingReading(float(s), float(b), float(value))
            for s, b, value in zip(ab2, mn2, values, strict=True)
        )
        return Sounding(12.0, array, readings, "made")

    return make


@pytest.fixture(scope="session")
def field_soundings():
    readings: dict[str, list[SoundingReading]] = {}
    with (ROOT / "fixtures/soundings/soundings.csv").open() as lines:
        for row in csv.DictReader(lines):
            numbers = (row["ab2_m"], row["mn2_m"], row["apparent_resistivity_ohm_m"])
            readings.setdefault(row["sounding_id"], []).append(
                SoundingReading(*(float(number) for number in numbers))
            )
    return {
        label: Sounding(
            None, "wenner" if label.startswith("aung") else "schlumberger", tuple(rows), label
        )
        for label, rows in readings.items()
    }
