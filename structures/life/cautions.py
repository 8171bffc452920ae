"""The one list of cautions: code, level, words. Pages, sheets and commands print from here.

Levels: block (not to be built or sanctioned so), hold (kept out until decided), warn, note.
The program never declares a trench, a slope, a pit or a water safe. Source: handbook section 11.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from structures.errors import Level

# Cautions of the work itself, whatever the survey says; every other one is about this survey.
ALWAYS: Final = frozenset(
    {
        "trench-collapse",
        "edge",
        "pumping",
        "uplift",
        "flood",
        "geophysics",
        "raw-water",
        "downstream",
    }
)
CONTRADICTED: Final = "rock-line-above-test"  # a test went deeper than the settled line
WORDS: Final[dict[Level, str]] = {  # of the levels, as they are printed
    "block": "BLOCK",
    "hold": "HOLD",
    "warn": "CARE",
    "note": "NOTE",
}
SQUARES: Final = re.compile(r"\bm([23])\b")  # units of settings and reasons that stand in the words
RAISED: Final = {"2": "²", "3": "³"}
CLOSING_SENTENCE: Final = "Local codes and licensed practice decide; this sheet does not."


@dataclass(frozen=True, slots=True)
class Caution:
    """One caution as it is printed; a list of them ends with CLOSING_SENTENCE, once."""

    code: str
    level: Level
    text: str


# code -> (level, words); braces are filled in by `caution`.
CATALOGUE: Final[dict[str, tuple[Level, str]]] = {
    # rock
    "rock-not-known": (
        "block",
        (
            "No rock line: {why} Bore, or open a pit under the trench rules, until rock is met at two "
            "places or more, or have a licensed engineer settle the line."
        ),
    ),
    "rock-untied": (
        "hold",
        (
            "Geophysics alone gives the top of weathered or of sheet rock{where}. Good for a preliminary "
            "estimate, for no design: meet rock in a bore, pit or outcrop on the same line."
        ),
    ),
    "rock-levels-far-apart": (
        "hold",
        (
            "Between {from_m:.2f} and {to_m:.2f} m no test gives a level of rock; probes and holes "
            "only say that it lies no higher. Bore there before the price is sent up."
        ),
    ),
    "rock-bounds-contradict": (
        "warn",
        "Tests contradict each other near {where}: {what} Look at the records, or bore there.",
    ),
    "rock-bounds-thinned": (
        "note",
        (
            "{count} of {total} probes and soil holes bound the line no further and were left out of "
            "the draws; the deepest in each 2 m was kept."
        ),
    ),
    "rock-default-spread": (
        "note",
        (
            "Range {range_m:g} m and sill {sill_m2:.2f} m2 of the rock line are defaults: {count} "
            "observations, 15 are needed to fit them."
        ),
    ),
    "rock-spread-fitted": (
        "note",
        (
            "Range {range_m:.1f} m and sill {sill_m2:.2f} m2 of the rock line were fitted to {count} "
            "observations."
        ),
    ),
    "rock-line-settled": (
        "note",
        (
            "The rock line was settled by an engineer and is used as given: it carries no range, and "
            "nothing varies in the price."
        ),
    ),
    "rock-line-above-test": (
        "block",
        (
            "The settled rock line stands at {line_m:.2f} m at offset {offset_m:.2f} m, but {test} "
            "went down to {test_m:.2f} m. Lower the line."
        ),
    ),
    "sounding-differs": (
        "warn",
        (
            "Sounding {label} reads rock at {depth_m:.1f} m ({low_m:.1f} to {high_m:.1f} m); the "
            "settled line has it at {line_m:.1f} m. Say why in the record, or bore there."
        ),
    ),
    "sounding-not-interpretable": (
        "warn",
        "Sounding {label} gives no depth of rock: {why}",
    ),
    "refraction-not-interpretable": (
        "warn",
        "Refraction line {label} gives no depth of rock: {why}",
    ),
    # wall
    "flank-open-left": (
        "block",
        (
            "OPEN left flank: at {offset_m:.2f} m, where the rock line ends, rock is still {below_m:.2f} m "
            "below the bed. Survey further out; quantities are those of the surveyed part."
        ),
    ),
    "flank-open-right": (
        "block",
        (
            "OPEN right flank: at {offset_m:.2f} m, where the rock line ends, rock is still {below_m:.2f} m "
            "below the bed. Survey further out; quantities are those of the surveyed part."
        ),
    ),
    "low-ground-left": (
        "warn",
        (
            "Low ground on the left from {from_m:.2f} to {to_m:.2f} m: ground lies under the bed level, "
            "water leaves at the surface there, whatever the wall does."
        ),
    ),
    "low-ground-right": (
        "warn",
        (
            "Low ground on the right from {from_m:.2f} to {to_m:.2f} m: ground lies under the bed level, "
            "water leaves at the surface there, whatever the wall does."
        ),
    ),
    "rock-bar": (
        "note",
        (
            "Rock stands above the crest from {from_m:.2f} to {to_m:.2f} m: the wall is interrupted "
            "there and keyed to the rock on each side."
        ),
    ),
    "no-wall": (
        "block",
        (
            "Rock stands at or above the crest all along the surveyed line: there is no room for a "
            "wall and none is measured. Look at another line."
        ),
    ),
    "trench-deep": (
        "block",
        (
            "The trench goes {depth_m:.2f} m down to the bottom of the key, over {limit_m:g} m: it "
            "needs a licensed design."
        ),
    ),
    "side-steep": (
        "block",
        (
            "Sides of {slope:g} across to 1 up are steeper than {limit:g}. Flatten them, or name the "
            "signed support design of a licensed engineer in works.support_design."
        ),
    ),
    "side-drained": (
        "warn",
        (
            "Sides of {slope:g} across to 1 up stand only where the sand is drained and a licensed "
            "engineer signs for it."
        ),
    ),
    "side-supported": (
        "warn",
        "Sides of {slope:g} across to 1 up rest on the support design named: {design}.",
    ),
    "sides-drawn": (
        "warn",
        (
            "The sides drawn are the least asked for by this program, not a proof of safety. Nobody "
            "goes in where the day's look says stop."
        ),
    ),
    "default-changed": (
        "warn",
        ("{words}: {value:g}{unit} instead of {default:g} (accepted {low:g} to {high:g}). {who}"),
    ),
    "default-used": (
        "note",
        "{words} was not measured: {value:g} {unit} is taken ({source}).",
    ),
    "dewatering-not-known": ("warn", "The quantity of dewatering is not known, {why}."),
    # money
    "estimate-incomplete": ("block", "The estimate is incomplete: {lines}."),
    "rates-not-given": ("note", "No rate schedule was given: quantities stand alone, unpriced."),
    "rates-lift-unused": (
        "warn",
        (
            "The rates of excavation from {lifts} m serve no lift of this trench; its lifts begin at "
            "{begins} m. Set wall.lift_m as the schedule has it, or give rates for these lifts."
        ),
    ),
    "rates-out-of-date": (
        "warn",
        "The rate schedule {schedule} ended on {ended}. Price again with this year's rates.",
    ),
    # works and water
    "trench-collapse": (
        "warn",
        (
            "Sand stands only while damp; a wet or drying face fails without warning, in seconds. From "
            "{entry_m:g} m on nobody enters a cut without slope or support; nobody goes in alone, or where the "
            "day's look says stop."
        ),
    ),
    "edge": (
        "warn",
        (
            "Spoil and machines stay {distance_m:.2f} m or more from the edge: nobody goes in until "
            "they are moved. A ladder within 7.6 m from {entry_m:g} m depth; fence and light at night."
        ),
    ),
    "pumping": (
        "warn",
        (
            "Pumping from inside the trench pulls sand from the sides: sump off the wall line. If the "
            "pump stops, people leave. Nearby wells and footings can suffer: tell their owners first."
        ),
    ),
    "neighbours": (
        "warn",
        (
            "Pumping can draw the water down as far as {reach_m:.0f} m from the trench: it lowers wells "
            "and can settle footings. List wells and buildings within it and tell the owners first."
        ),
    ),
    "uplift": (
        "warn",
        (
            "A clay layer can hold water under pressure beneath it. A licensed engineer checks the cover "
            "against uplift before each lift; this program gives no pass for it."
        ),
    ),
    "flood": (
        "warn",
        (
            "A stream can come from rain nobody saw: dry season only, a watch upstream with an agreed "
            "signal, no tools worth going back for."
        ),
    ),
    "geophysics": (
        "note",
        (
            "Geophysics gives a range, not a fact. Boulders pass for rock, thin layers hide; only rock "
            "seen in the trench is seen."
        ),
    ),
    "raw-water": (
        "note",
        (
            "Water behind the wall is raw water: treat and test it under local rules. This program never "
            "says it may be drunk."
        ),
    ),
    "downstream": (
        "note",
        (
            "Water held above is water not passing below. People below are heard before sanction and "
            "their wells are read before."
        ),
    ),
    # wells after the wall
    "effect-no-affected": (
        "block",
        (
            "No affected well was read in {months} of 12 months of a water year before completion. The "
            "verdict is not known."
        ),
    ),
    "effect-no-control": (
        "block",
        (
            "No control well was read in {months} of 12 months of a water year before completion. "
            "Without one rain and wall cannot be told apart: the verdict is not known."
        ),
    ),
    "effect-too-short": (
        "block",
        (
            "{before} full water years before completion and {after} after; {least} are needed on each "
            "side, each with pairs in {months} of 12 months. The verdict is not known: read on."
        ),
    ),
    "effect-few-pairs": (
        "block",
        (
            "{before} pairs before completion and {after} after; {least} are needed on each side. The "
            "verdict is not known: read affected and control wells in the same half months."
        ),
    ),
    "effect-serial-not-judged": (
        "warn",
        (
            "Only {count} pairs: serial correlation is not judged below {least}, and the interval is "
            "likely too narrow."
        ),
    ),
    "effect-dry-left-out": (
        "note",
        "{count} pairs with dry wells are only bounds and were left out, under 1 in 20.",
    ),
    "effect-dry-fitted": (
        "warn",
        (
            "Dry wells make {percent:.0f} % of the pairs only bounds. They were fitted as such; plain "
            "means would hide a gain and are not shown."
        ),
    ),
    "effect-first-filling": (
        "warn",
        (
            "The gain grew with the first rains: the {pairs} pairs until {until} surely stand short of "
            "the later ones and have a level of their own, so the effect is that of the filled ground. "
            "One step at completion would give {one_step_m:+.2f} m ({one_step_low_m:+.2f} to "
            "{one_step_high_m:+.2f}). An engineer looks at both."
        ),
    ),
    "effect-one-control": (
        "warn",
        "{well} alone stands for what happened without the wall. Name a second control well.",
    ),
    "effect-mark-moved": (
        "note",
        (
            "The measuring point of {well} stands {change_m:+.2f} m from the reading of {day} on; levels "
            "follow it."
        ),
    ),
    "effect-jump": (
        "hold",
        (
            "From {day} affected wells stand {size_m:+.2f} m against control wells, in one step that is "
            "not at completion. Measuring point moved, tape cut, a pump begun? Decide before a verdict."
        ),
    ),
    "effect-trend-before": (
        "warn",
        (
            "Affected wells already moved {m_per_year:+.2f} m a year against control wells before "
            "completion; going on like that makes {drift_m:+.2f} m of the change."
        ),
    ),
    "effect-rain-not-given": (
        "note",
        "No rain was given: its share in the change is not known. Control wells felt the same rain.",
    ),
    "effect-rain-too-short": (
        "note",
        (
            "Too short to judge the share of rain: {before} and {after} full water years, 2 are needed "
            "on each side, and the rain of the twelve months before in 10 months of each."
        ),
    ),
    "effect-rain-unlike": (
        "warn",
        (
            "Rain {before_mm:.0f} mm a year before and {after_mm:.0f} mm after: not alike. Control wells "
            "allow for it only as far as they swing like the affected ones."
        ),
    ),
    "water-not-known": ("note", "{what} cannot be computed: {why}."),
    "storage-none": (
        "note",
        (
            "Water stands at {level_m:.2f} m already, at or above the crest at {crest_m:.2f} m: the "
            "wall stores nothing more."
        ),
    ),
}


def caution(code: str, **values: object) -> Caution:
    """Give the caution of a code with its words filled in.

    Raises
    ------
    KeyError
        If the code is not in the list, or a value for its words is missing.
    """
    level, words = CATALOGUE[code]
    return Caution(code, level, SQUARES.sub(_raised, words.format(**values)))


def _raised(unit: re.Match[str]) -> str:
    return f"m{RAISED[unit[1]]}"
