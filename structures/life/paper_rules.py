"""Rules that look at a paper as a whole, each with the message of its rule.

Source: the office's practice, "validation rules" (PL, UF, SG, VR) and "none found is an answer,
blank is not".
"""

from __future__ import annotations

from datetime import date
from typing import TYPE_CHECKING, Any, Final, NamedTuple

from structures.errors import Finding

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable

    from structures.errors import Level

Content = dict[str, Any]
ACCURACY_MOST_M: Final = 30.0  # rule PL-03
RAIN_ALIKE_SHARE: Final = 0.20  # rule VR-03
NOT_KNOWN: Final = "not known"
K_FIELDS: Final = ("k_low_m_per_day", "k_likely_m_per_day", "k_high_m_per_day")


class Rule(NamedTuple):
    """One rule and the fields it looks at; it is asked only where none of them is refused."""

    judge: Callable[[Content], list[Finding]]
    needs: tuple[str, ...]


def unheard(downstream: Iterable[str], minutes: Iterable[Content]) -> tuple[str, ...]:
    """Give the settlements of the downstream list that no minutes name, in the list's order."""
    heard = {_plain(row["settlement"]) for paper in minutes for row in paper["settlements"]}
    return tuple(name for name in downstream if _plain(name) not in heard)


def unanswered(minutes: Content) -> tuple[str, ...]:
    """Give the objections of minutes that have no answer: "Pirrumad: the lower well"."""
    return tuple(
        f"{row['settlement']}: {row['objection']}"
        for row in minutes["objections"]
        if not row["answer"]
    )


def open_findings(sheet: Content) -> tuple[str, ...]:
    """Give what a check sheet still holds open."""
    return tuple(row["what"] for row in sheet["findings"] if row["state"] == "open")


def underflow_m3_per_day(sheet: Content) -> tuple[float, float, float]:
    """Give Q = K A i for the low, likely and high conductivity of an underflow sheet.

    Source: Darcy's law, handbook section 9.
    """
    area_m2, gradient = sheet["wetted_area_m2"], sheet["gradient"]
    low, likely, high = (sheet[name] for name in K_FIELDS)
    return low * area_m2 * gradient, likely * area_m2 * gradient, high * area_m2 * gradient


def say(
    paper: str, field: str, what: str, remedy: str, level: Level = "block", rule: str = ""
) -> Finding:
    """Give one finding of a paper."""
    return Finding(paper, field, what, remedy, level, rule)


def list_or_none(paper: str, content: Content, rows: str, none: str, blank: str) -> list[Finding]:
    """Tell where a list is blank without a "none", or where both are given."""
    listed, said = bool(content[rows]), bool(content[none])
    if listed != said:
        return []
    if listed:
        return [say(paper, rows, "Rows are listed, and none is said to be.", "Leave one out.")]
    return [say(paper, rows, blank, "Write the list, or say that there are none.")]


def services_not_known(paper: str) -> Finding:
    """Give the hold of a place where nobody knows what lies in the ground."""
    what = "Cables and pipes: not known."
    return say(paper, "services", what, "Ask their owners before any digging.", "hold")


def _accuracy(content: Content) -> list[Finding]:
    accuracy_m = content["accuracy_m"]
    if accuracy_m is None or accuracy_m <= ACCURACY_MOST_M:
        return []
    what = f"The position is only good to {accuracy_m:g} m."
    remedy = "Take it again under open sky if you can."
    return [say("note of a place", "accuracy_m", what, remedy, "warn", "PL-03")]


def _downstream(content: Content) -> list[Finding]:
    paper = "walk-over sheet"
    listed, none_km = content["downstream"], content["none_found_within_km"]
    if not listed and none_km is None:
        what = "Who uses water below this place is blank."
        remedy = 'Write the list, or "none found" within how many km.'
        return [say(paper, "downstream", what, remedy, rule="PL-05")]
    if listed and none_km is not None:
        what = f"Users are listed ({len(listed)}), and none is said to be within {none_km:g} km."
        return [say(paper, "downstream", what, "Leave one of the two out.")]
    return []


def _wells(content: Content) -> list[Finding]:
    blank = "Wells nearby are blank."
    return list_or_none("walk-over sheet", content, "wells", "no_wells", blank)


def _land(content: Content) -> list[Finding]:
    paper = "survey plan with permission"
    return [
        say(paper, "land", f"Leave to enter {row['land']} was refused.", "Survey another line.")
        for row in content["land"]
        if row["leave"] == "refused"
    ]


def _services(content: Content) -> list[Finding]:
    paper = "survey plan with permission"
    if content["services"] == NOT_KNOWN:
        return [services_not_known(paper)]
    if content["services"] == "found" and not content["services_where"]:
        what = "Cables or pipes were found."
        return [say(paper, "services_where", what, "Write where they run.")]
    return []


def _conductivity(content: Content) -> list[Finding]:
    paper = "underflow sheet"
    low, likely, high = (content[name] for name in K_FIELDS)
    if not low <= likely <= high:
        what = f"K runs {low:g}, {likely:g}, {high:g} m/day: the range is upside down."
        return [say(paper, "k_likely_m_per_day", what, "Put low, likely, high in order.")]
    if low == high:
        what = f"Where does K = {likely:g} m/day come from?"
        remedy = "Pumping test, grain size or table? One number is no range."
        return [say(paper, "k_low_m_per_day", what, remedy, rule="UF-02")]
    return []


def _wetted(content: Content) -> list[Finding]:
    if content["only_wetted"]:
        return []
    what = "A counts the dry part above the water table."
    return [say("underflow sheet", "only_wetted", what, "Use the wetted area.", "hold", "UF-04")]


def _worth(content: Content) -> list[Finding]:
    low, _, high = underflow_m3_per_day(content)
    use = content["use_below_m3_per_day"]
    if use is None or low >= use or content["worth_it"]:
        return []
    what, remedy = f"Even at best {high:.1f} m3/day passes.", "Is a wall worth it? Say why."
    return [say("underflow sheet", "worth_it", what, remedy, "warn", "UF-03")]


def _shares(content: Content) -> list[Finding]:
    paper, shares = "underflow sheet", content["shares"]
    if shares and content["nobody_below"]:
        what = "Settlements below are listed, and nobody is said to use water below."
        return [say(paper, "nobody_below", what, "Leave one of the two out.")]
    silent = [row["settlement"] for row in shares if not row["keeps"]]
    if not shares and not content["nobody_below"]:
        silent = ["each settlement"]
    return [
        say(
            paper,
            "shares",
            f"What {name} below keeps in a dry year is blank.",
            f"Say what {name} below keeps in a dry year.",
            rule="UF-05",
        )
        for name in silent
    ]


def _check(content: Content) -> list[Finding]:
    paper = "check sheet"
    found = list_or_none(paper, content, "findings", "none_found", "Findings are blank.")
    for row in content["findings"]:
        if row["state"] == "closed" and not row["answer"]:
            what = f'"{row["what"]}" is closed without an answer.'
            found.append(say(paper, "findings", what, "Write how it was answered."))
    return found + [
        say(paper, "findings", f'"{what}" is open.', "Answer it and close it.", "hold")
        for what in open_findings(content)
    ]


def _present(content: Content) -> list[Finding]:
    paper = "minutes of the hearing"
    return [
        say(paper, "settlements", f"Nobody of {row['settlement']} was present.", "Hear them.")
        for row in content["settlements"]
        if row["present"] == 0
    ]


def _objections(content: Content) -> list[Finding]:
    paper, blank = "minutes of the hearing", "Objections are blank."
    return list_or_none(paper, content, "objections", "none_raised", blank) + [
        say(paper, "objections", f"Without an answer: {what}.", "Answer it.", "hold")
        for what in unanswered(content)
    ]


def _opening(content: Content) -> list[Finding]:
    paper = "season sheet"
    opens, early = (date.fromisoformat(content[name]) for name in ("opens_on", "early_flow_on"))
    needed, deep = content["days_needed"], content["days_needed_deep"]
    if deep < needed:
        what = "Fewer days are needed with rock at the deep limit than with the likely one."
        return [say(paper, "days_needed_deep", what, "Look at both figures.")]
    free = (early - opens).days - content["reserve_days"]  # days there are for the work
    if needed > free:
        what = f"Too late by {_days(needed - free)}."
        return [say(paper, "opens_on", what, "Do not open this season.", rule="SG-01")]
    if deep > free:
        verb = "is" if deep - free == 1 else "are"
        what = f"With rock at the deep limit {_days(deep - free)} {verb} missing."
        remedy = "Open earlier, or work with more gangs."
        return [say(paper, "days_needed_deep", what, remedy, "warn", "SG-02")]
    return []


def _ready(content: Content) -> list[Finding]:
    found = []
    if content["services"] == NOT_KNOWN:
        found.append(services_not_known("season sheet"))
    if content["clay_tested_on"] is None:
        what = "The clay is not tested."
        found.append(say("season sheet", "clay_tested_on", what, "Test it, write the day.", "hold"))
    return found


def _restored_bed(content: Content) -> list[Finding]:
    if content["drained_sand"] or content["remarks"]:
        return []
    what = "Drained sand does not lie upstream."
    remedy = "Put it there, or write in the remarks what lies there and who decided."
    return [say("restored bed", "drained_sand", what, remedy, "hold")]


def _close_off(content: Content) -> list[Finding]:
    if content["ground_safe"]:
        return []
    remedy = "Close trench and pits, take away what can fall or flood."
    return [say("closing sheet", "ground_safe", "The ground is not made safe.", remedy)]


def _handed_wells(content: Content) -> list[Finding]:
    paper, found = "hand-over sheet", []
    if not any(row["role"] == "control" for row in content["wells"]):
        what = "No control well is named."
        remedy = "Without it rain and wall cannot be told apart: name one outside the wall's reach."
        found.append(say(paper, "wells", what, remedy, rule="WL-04"))
    if not any(row["reader"] for row in content["wells"]):
        found.append(say(paper, "wells", "Nobody is named who reads.", "Name the reader."))
    return found


def _raw_water(content: Content) -> list[Finding]:
    if content["raw_water"]:
        return []
    what = "The raw-water sheet was not explained."
    return [say("hand-over sheet", "raw_water", what, "Explain it before anybody draws water.")]


def _full_years(content: Content) -> list[Finding]:
    before, after = content["years_before"], content["years_after"]
    needed = content["years_needed"]
    if content["verdict"] == NOT_KNOWN or min(before, after) >= needed:
        return []
    what = f"{after} full water years after covering, {before} before; {needed} needed."
    return [say("verdict paper", "verdict", what, "The verdict is *not known*.", rule="VR-01")]


def _controls(content: Content) -> list[Finding]:
    if content["verdict"] == NOT_KNOWN or content["controls"]:
        return []
    remedy = "The verdict is *not known*."
    return [say("verdict paper", "controls", "No control pair.", remedy, rule="VR-02")]


def _head(content: Content) -> list[Finding]:
    if content["verdict"] == NOT_KNOWN or content["head_across_m"] is not None:
        return []
    what = "The head across the wall is blank."
    return [say("verdict paper", "head_across_m", what, "Read both pipes on one day.")]


def _waiting(content: Content) -> list[Finding]:
    waiting = content["readings_waiting"]
    if content["verdict"] == NOT_KNOWN or not waiting:
        return []
    what = f"Readings that wait for a decision on a changed mark: {waiting}."
    return [say("verdict paper", "readings_waiting", what, "Decide them first.", rule="VR-04")]


def _rain(content: Content) -> list[Finding]:
    before_mm, after_mm = content["rain_before_mm"], content["rain_after_mm"]
    if content["verdict"] == NOT_KNOWN or content["rain_allowed_for"]:
        return []
    if before_mm is None or after_mm is None:
        what = "The rain of the years compared is blank."
    elif abs(after_mm - before_mm) > RAIN_ALIKE_SHARE * before_mm:
        what = f"Rain {before_mm:g} and {after_mm:g} mm: not alike."
    else:
        return []
    remedy = "Say how it was allowed for."
    return [say("verdict paper", "rain_allowed_for", what, remedy, "warn", "VR-03")]


def _plain(name: str) -> str:
    return " ".join(name.split()).casefold()


def _days(count: int) -> str:
    return "1 day" if count == 1 else f"{count} days"


_Q_FIELDS: Final = (*K_FIELDS, "wetted_area_m2", "gradient")
_OPENING_FIELDS: Final = (
    "opens_on",
    "early_flow_on",
    "days_needed",
    "days_needed_deep",
    "reserve_days",
)
RULES: Final[dict[str, tuple[Rule, ...]]] = {
    "note": (Rule(_accuracy, ("accuracy_m",)),),
    "walk-over": (
        Rule(_downstream, ("downstream", "none_found_within_km")),
        Rule(_wells, ("wells", "no_wells")),
    ),
    "survey-permission": (
        Rule(_land, ("land",)),
        Rule(_services, ("services", "services_where")),
    ),
    "underflow": (
        Rule(_conductivity, K_FIELDS),
        Rule(_wetted, ("only_wetted",)),
        Rule(_worth, (*_Q_FIELDS, "use_below_m3_per_day", "worth_it")),
        Rule(_shares, ("shares", "nobody_below")),
    ),
    "check": (Rule(_check, ("findings", "none_found")),),
    "hearing": (
        Rule(_present, ("settlements",)),
        Rule(_objections, ("objections", "none_raised")),
    ),
    "season": (
        Rule(_opening, _OPENING_FIELDS),
        Rule(_ready, ("services", "clay_tested_on")),
    ),
    "restored-bed": (Rule(_restored_bed, ("drained_sand",)),),
    "close-off": (Rule(_close_off, ("ground_safe",)),),
    "handover": (Rule(_handed_wells, ("wells",)), Rule(_raw_water, ("raw_water",))),
    "verdict": (
        Rule(_full_years, ("verdict", "years_before", "years_after", "years_needed")),
        Rule(_controls, ("verdict", "controls")),
        Rule(_head, ("verdict", "head_across_m")),
        Rule(_waiting, ("verdict", "readings_waiting")),
        Rule(_rain, ("verdict", "rain_before_mm", "rain_after_mm", "rain_allowed_for")),
    ),
}
