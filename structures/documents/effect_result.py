"""What the wells say of a wall, as JSON values and as text: the same words for shell and page."""

from __future__ import annotations

from dataclasses import asdict
from textwrap import wrap
from typing import TYPE_CHECKING, Any, Final

from structures.life.cautions import CLOSING_SENTENCE, WORDS
from structures.water.estimate import MORE_YEARS

if TYPE_CHECKING:
    from collections.abc import Iterable
    from datetime import date

    from structures.errors import Finding
    from structures.life.verdict import Suggestion
    from structures.water.contrast import Contrast
    from structures.water.effect import Effect
    from structures.water.estimate import Estimate
    from structures.water.rain_share import PairedYears, RainAdjusted
    from structures.water.rivals import Rivals

WIDTH: Final = 88  # characters a line of text
NO_METHOD: Final = "None: too little to measure."
SIGNED: Final = "The head across the wall and an engineer's signature come before it."


def effect_json(
    effect: Effect, suggestion: Suggestion, completed: date, findings: Iterable[Finding] = ()
) -> dict[str, Any]:
    """Give the result of `assess_effect`; what is not known is null and a caution says why.

    Source: the interface of `assess_effect --json`; the keys after `cautions` are added to it.
    """
    found, pairs, rivals = effect.estimate, effect.pairs, effect.rivals
    before, after = effect.counts
    return {
        "effect_m": found and found.effect_m,
        "low_m": found and found.low_m,
        "high_m": found and found.high_m,
        "confidence": effect.rules.confidence,
        "method": found.method if found else NO_METHOD,
        "readings": {
            "taken": effect.taken,
            "left_out": [{"reason": reason, "count": count} for reason, count in effect.left_out],
        },
        "before": {"pairs": before, "full_years": len(pairs.full_before)},
        "after": {"pairs": after, "full_years": len(pairs.full_after)},
        "wells": {"affected": len(pairs.affected_wells), "control": len(pairs.control_wells)},
        "rivals": _rivals(rivals),
        "smallest_seen_m": found and found.smallest_seen_m,
        "suggested_verdict": suggestion.verdict,
        "cautions": [asdict(one) for one in effect.cautions],
        "completed": completed.isoformat(),
        "claim": None if found is None else "effect" if effect.is_effect else "change",
        "reasons": list(suggestion.reasons),
        "rule": suggestion.rule,
        "more_years": {"years": MORE_YEARS, "smallest_seen_m": found and found.more_years_m},
        "first_rains": _filling(found),
        "change": {
            "affected_m": rivals and rivals.change_affected_m,
            "control_m": rivals and rivals.change_control_m,
        },
        "rain": _rain(rivals),
        "beside": _beside(found),
        "seed": effect.seed,
        "findings": [asdict(one) for one in findings],
    }


def _filling(found: Estimate | None) -> dict[str, Any] | None:
    if found is None or found.filling is None:
        return None
    return asdict(found.filling) | {"until": found.filling.until.isoformat()}


def _rivals(rivals: Rivals | None) -> list[dict[str, Any]]:
    rain = (None, None)
    if rivals is not None:
        both = (rivals.rain_at_affected, rivals.rain_in_effect)
        rain = tuple(one and one.rain_share_m for one in both)
    return [
        {"what": "rain", "share_m": rain[0], "in_effect_m": rain[1]},
        {
            "what": "measuring point",
            "share_m": rivals and rivals.mark_share_m,
            "in_effect_m": rivals and rivals.mark_in_effect_m,
        },
    ]


def _rain(rivals: Rivals | None) -> dict[str, Any] | None:
    if rivals is None:
        return None
    before_mm, after_mm = rivals.rain_mm or (None, None)
    return {
        "before_mm_a_year": before_mm,
        "after_mm_a_year": after_mm,
        "at_affected": _adjusted(rivals.rain_at_affected),
        "in_effect": _adjusted(rivals.rain_in_effect),
        "paired_years": _paired(rivals.paired_years),
    }


def _adjusted(one: RainAdjusted | None) -> dict[str, Any] | None:
    return None if one is None else asdict(one)


def _paired(one: PairedYears | None) -> dict[str, Any] | None:
    if one is None:
        return None
    return {
        "pairs": [{"after": after, "before": before} for after, before in one.pairs],
        "affected_m": one.affected_m,
        "control_m": one.control_m,
        "difference_m": one.difference_m,
        "used_twice": list(one.twice),
    }


def _beside(found: Estimate | None) -> dict[str, Any] | None:
    """Give the plain forms for those who check; they judge no serial correlation or only some."""
    if found is None or found.pooled is None:
        return None
    bartlett = found.bartlett
    return {
        "pooled": _contrast(found.pooled),
        "unequal_variance": _contrast(found.unequal),
        "bartlett": {
            "change_m": float(bartlett.coefficient[1]),
            "standard_error_m": float(bartlett.bartlett_error[1]),
            "lag": bartlett.lag,
        },
    }


def _contrast(one: Contrast | None) -> dict[str, float] | None:
    return None if one is None else asdict(one)


def effect_text(whole: dict[str, Any]) -> str:
    """Give the text of a result from its JSON values: the answer first, then what it rests on."""
    lines = [f"wells and the wall completed on {whole['completed']}", *_answer(whole), ""]
    lines += _told(
        f"suggested verdict: {whole['suggested_verdict']} (rule {whole['rule']}). {SIGNED}"
    )
    for reason in whole["reasons"]:
        lines += wrap(reason, WIDTH, initial_indent="  ", subsequent_indent="  ")
    lines += ["", *_rests_on(whole), *_other_explanations(whole)]
    told = [(one["level"], one["text"]) for one in whole["cautions"]]
    told += [
        (one["level"], " ".join(filter(None, (f"{one['where']}:", one["what"], one["remedy"]))))
        for one in whole["findings"]
    ]
    if told:
        lines.append("")
    for level, words in told:
        head = f"  {WORDS[level]:<6}"
        lines += wrap(words, WIDTH, initial_indent=head, subsequent_indent=" " * len(head))
    if told:
        lines.append(f"  {CLOSING_SENTENCE}")
    lines += ["", *wrap(f"Method: {whole['method']}", WIDTH)]
    return "\n".join(lines) + "\n"


def _answer(whole: dict[str, Any]) -> list[str]:
    if whole["effect_m"] is None:
        return ["effect not known"]
    words = (
        f"{whole['claim']} {_signed(whole['effect_m'])} m, with {whole['confidence']:.0%} confidence "
        f"between {_signed(whole['low_m'])} and {_signed(whole['high_m'])} m"
    )
    smallest = f"an effect of {whole['smallest_seen_m']:.2f} m would have been seen 4 times in 5"
    more = whole["more_years"]
    if more["smallest_seen_m"] is not None:
        smallest += f", with {more['years']} more years of readings {more['smallest_seen_m']:.2f} m"
    return [words, *_told(smallest)]


def _rests_on(whole: dict[str, Any]) -> list[str]:
    wells, readings = whole["wells"], whole["readings"]
    sides = [
        f"{whole[side]['pairs']} pairs {side} ({whole[side]['full_years']} full water years)"
        for side in ("before", "after")
    ]
    left = ", ".join(f"{one['count']} {one['reason']}" for one in readings["left_out"]) or "none"
    return [
        *_told(
            f"rests on {wells['affected']} affected and {wells['control']} control wells, "
            f"{sides[0]} and {sides[1]}"
        ),
        *_told(f"readings taken: {readings['taken']}; left out: {left}"),
    ]


def _other_explanations(whole: dict[str, Any]) -> list[str]:
    lines = []
    change = whole["change"]
    if change["affected_m"] is not None:
        lines.append(
            f"affected wells changed by {_signed(change['affected_m'])} m, "
            f"control wells by {_signed(change['control_m'])} m"
        )
    for one in whole["rivals"]:
        if one["share_m"] is None:
            lines.append(f"share of {one['what']}: not known")
            continue
        rest = one["in_effect_m"]
        left = "" if rest is None else f", {_signed(rest)} m in affected less control wells"
        lines += _told(
            f"share of {one['what']}: {_signed(one['share_m'])} m of the change at affected "
            f"wells{left}"
        )
    paired = (whole["rain"] or {}).get("paired_years")
    if paired:
        years = ", ".join(f"{one['after']} with {one['before']}" for one in paired["pairs"])
        lines += _told(
            f"water years paired by rain ({years}): affected {_signed(paired['affected_m'])} m, control "
            f"{_signed(paired['control_m'])} m, difference {_signed(paired['difference_m'])} m"
        )
    return lines


def _signed(value_m: float) -> str:
    """Write metres with their sign; what rounds to zero has none."""
    rounded = round(value_m, 2) + 0.0
    return f"{rounded:+.2f}" if rounded else "0.00"


def _told(words: str) -> list[str]:
    return wrap(words, WIDTH, subsequent_indent="  ")
