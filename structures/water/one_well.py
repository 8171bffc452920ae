"""Why one well stands where it stands: the dry year, a step of its measuring point, and what is left.

For complaints: "since the wall was built our well has gone down". Control wells tell what the rain
did; a single step that no control well made is the measuring point, or the tape; only the rest can
be the wall.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

import numpy as np

from structures.water.pairs import make_pairs
from structures.water.rivals import moved_marks, near_completion
from structures.water.serial import SerialDesign, in_median_gaps
from structures.water.steps import find_step

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from numpy.typing import NDArray

    from structures.intake.rain import Rain
    from structures.intake.readings import WellReading
    from structures.water.pairs import Pairs
    from structures.water.rivals import MovedMark
    from structures.water.rules import EffectRules
    from structures.water.serial import Mixture
    from structures.water.steps import Step

LEAST_PAIRS: Final = 4  # of the time complained of, and before completion (project choice)
MONTHS: Final = 12
YEARS_BACK: Final = 60  # of records of a gauge


@dataclass(frozen=True, slots=True)
class Share:
    """A part of a change with its range; ends are None where none can be told."""

    change_m: float
    low_m: float | None = None
    high_m: float | None = None


@dataclass(frozen=True, slots=True)
class StepOfMark:
    """A step of the readings between two days on which the well was read."""

    after_day: date
    by_day: date
    size: Share


@dataclass(frozen=True, slots=True)
class Explained:
    """The change of one well since a day against the same months before the wall.

    `change_m` = rain + measuring point + rest, negative where the water reads lower. `marks` are
    the moved measuring points that the readings name and that are allowed for already; `rain_mm`
    the rain of the same months before and since. `dry` counts the pairs before and since in which
    the well or the control wells were dry: with any, rain and rest are bounds without a range.
    """

    well: str
    since: date
    change_m: float
    rain: Share
    mark: StepOfMark | None
    mark_m: float
    rest: Share
    pairs: tuple[int, int]
    controls: tuple[str, ...]
    marks: tuple[MovedMark, ...]
    rain_mm: tuple[float, float] | None = None
    dry: tuple[int, int] = (0, 0)

    def sentences(self) -> tuple[str, ...]:
        """Say it in plain words, the largest matters first."""
        lower = "lower" if self.change_m < 0.0 else "higher"
        change = (
            f"Since {self.since} {self.well} reads {abs(self.change_m):.2f} m {lower} than in the same "
            f"months before the wall ({self.pairs[0]} pairs before, {self.pairs[1]} since)."
        )
        if any(self.dry):
            change += (
                f" {self.dry[0]} of the pairs before and {self.dry[1]} since were dry: there the water "
                "stood lower than was read, nobody knows by how much."
            )
        rain = (
            f"{_signed(self.rain.change_m)} m{_range(self.rain)} of it the control wells "
            f"{', '.join(self.controls)} made as well: the rain of these years."
        )
        if self.rain_mm is not None:
            before_mm, since_mm = self.rain_mm
            rain += (
                f" It rained {since_mm:.0f} mm since, {before_mm:.0f} mm in the same months before."
            )
        said = [change, rain]
        if self.mark is not None:
            size = self.mark.size
            said.append(
                f"{_signed(self.mark_m)} m of it comes from one step of {_signed(size.change_m)} m{_range(size)} "
                f"between {self.mark.after_day} and {self.mark.by_day} that no control well made: a "
                "parapet raised or a tape cut? Measure from the old mark to the new one."
            )
        said.append(
            f"{_signed(self.rest.change_m)} m{_range(self.rest)} is left: {self._verdict_of_rest()}"
        )
        return tuple(said)

    def _verdict_of_rest(self) -> str:
        if any(self.dry):
            return "whether the wall has part in it is not known, as wells were dry."
        if self.rest.low_m is None or self.rest.low_m <= 0.0 <= self.rest.high_m:
            return "nothing that these readings can lay to the wall."
        way = "lower" if self.rest.high_m < 0.0 else "higher"
        return (
            f"the well stands {way} than rain and measuring point explain; the wall is one cause."
        )


def explain_well(
    readings: Sequence[WellReading],
    well: str,
    completed: date,
    since: date,
    rules: EffectRules,
    *,
    rain: Rain | None = None,
) -> Explained | None:
    """Explain the change of one well; None where readings or control wells are too few.

    Source: handbook 10.1 and 10.10 for the pairs, 10.5 for the ranges of step and rest; rule LV-14.
    Months count alike in before and since; the range of the rain is that of the control wells.

    Parameters
    ----------
    readings
        Of the well and of control wells; other wells are passed over.
    well
        The well complained of, whatever its role.
    since
        From which day on it is said to stand otherwise.
    rain
        Of a gauge near the well, for the words beside what the control wells say.

    Raises
    ------
    ValueError
        If `since` lies before completion.
    """
    if since < completed:
        raise ValueError(f"the change is looked for since {since}, before completion")
    own = [replace(one, role="affected") for one in readings if one.well == well]
    controls = [one for one in readings if one.role == "control" and one.well != well]
    pairs = make_pairs([*own, *controls], completed, rules)
    now = np.array([day >= since for day in pairs.days], dtype=bool)
    weight_before, weight_now = _like_months(pairs, ~pairs.after, now)
    counts = int((weight_before > 0).sum()), int((weight_now > 0).sum())
    if not pairs.control_wells or min(counts) < LEAST_PAIRS:
        return None
    contrast = weight_now - weight_before
    change_m = float(contrast @ pairs.affected_m)
    rain_m = float(contrast @ pairs.control_m)
    step, law = _step_and_rest(pairs, completed)
    mark_m = 0.0 if step is None else step.size_m * float(contrast @ step.columns[:, -1])
    rest_m = change_m - rain_m - mark_m
    low, high = law.interval(rules.confidence)
    middle = law.quantile(0.5)
    dry = tuple(int((pairs.bounded & (side > 0)).sum()) for side in (weight_before, weight_now))
    bound = any(dry)
    ends = _ends_of_controls(controls, own, pairs, completed, since, rules)
    return Explained(
        well,
        since,
        change_m,
        Share(rain_m) if bound else Share(rain_m, *ends),
        None if step is None else _mark(step, pairs, own, rules),
        mark_m,
        Share(rest_m) if bound else Share(rest_m, rest_m + low - middle, rest_m + high - middle),
        counts,
        pairs.control_wells,
        tuple(one for one in moved_marks(own) if one.day >= completed),
        None if rain is None else rain_of_like_months(rain, since, pairs.days[-1], completed),
        dry,
    )


def rain_of_like_months(
    rain: Rain, since: date, last: date, completed: date
) -> tuple[float, float] | None:
    """Give the rain of whole months since a day, and the mean of the same months in years before.

    None where no month since, or in no year before all of the same months, is known.
    """
    first = since.year * MONTHS + since.month - 1
    months = [
        month
        for month in (
            (one // MONTHS, one % MONTHS + 1)
            for one in range(first, last.year * MONTHS + last.month)
        )
        if rain.months.get(month) is not None
    ]
    now_mm = rain.sum_mm(months)
    end = (completed.year, completed.month)
    earlier = [
        rain.sum_mm((year - back, month) for year, month in months)
        for back in range(1, YEARS_BACK)
        if months and (months[-1][0] - back, months[-1][1]) < end
    ]
    known = [one for one in earlier if one is not None]
    return (float(np.mean(known)), now_mm) if known else None


def _like_months(
    pairs: Pairs, before: NDArray[np.bool_], now: NDArray[np.bool_]
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Give weights that average each side over the months both have, each month alike."""
    weights = np.zeros((2, len(pairs.days)))
    places: list[dict[int, list[int]]] = [defaultdict(list), defaultdict(list)]
    for place, day in enumerate(pairs.days):
        for side, inside in enumerate((before, now)):
            if inside[place]:
                places[side][day.month].append(place)
    common = places[0].keys() & places[1].keys()
    for side in (0, 1):
        for month in common:
            weights[side, places[side][month]] = 1.0 / len(places[side][month]) / len(common)
    return weights[0], weights[1]


def _step_and_rest(pairs: Pairs, completed: date) -> tuple[Step | None, Mixture]:
    """Fit well less controls: a step at completion, one at a day nobody named, annual terms."""
    values, after = pairs.difference_m, pairs.after.astype(float)
    time = in_median_gaps(pairs.middle_day)
    columns = np.column_stack([np.ones(values.size), after, pairs.annual_terms()])
    step = find_step(time, columns, values, barred=near_completion(pairs.middle_day, completed))
    design = SerialDesign(time, columns if step is None else step.columns)
    return step, design.mixture(values, 1)


def _mark(step: Step, pairs: Pairs, own: Sequence[WellReading], rules: EffectRules) -> StepOfMark:
    """Give the days of the well's readings between which it stepped, and the size."""
    first = pairs.days[step.first]
    days = sorted(one.day for one in own if not one.left_out)
    size = Share(step.size_m, *step.law.interval(rules.confidence))
    return StepOfMark(
        max(day for day in days if day < first), min(day for day in days if day >= first), size
    )


def _ends_of_controls(
    controls: Sequence[WellReading],
    own: Sequence[WellReading],
    pairs: Pairs,
    completed: date,
    since: date,
    rules: EffectRules,
) -> tuple[float | None, float | None]:
    """Give the least and the greatest change that a single control well made in these months."""
    changes = []
    for name in pairs.control_wells:
        alone = [one for one in controls if one.well == name]
        lone = make_pairs([*own, *alone], completed, rules)
        now = np.array([day >= since for day in lone.days], dtype=bool)
        before, later = _like_months(lone, ~lone.after, now)
        if before.any():
            changes.append(float((later - before) @ lone.control_m))
    return (min(changes), max(changes)) if len(changes) > 1 else (None, None)


def _range(share: Share) -> str:
    if share.low_m is None:
        return ""
    return f" ({_signed(share.low_m)} to {_signed(share.high_m)})"


def _signed(value_m: float) -> str:
    rounded = round(value_m, 2) + 0.0
    return f"{rounded:+.2f}" if rounded else "0.00"
