"""What is said where a default of the licensed engineer does not hold: the value, and whose word."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.life.cautions import caution

if TYPE_CHECKING:
    from structures.intake.defaults import Default
    from structures.intake.practice import Decision
    from structures.life.cautions import Caution

NOBODY_NAMED: Final = "A licensed engineer's name, licence number, date and reason are asked for."


def changed_default(default: Default, value: float, decision: Decision | None) -> Caution:
    """Say which value counts in place of a default, and who decided it.

    Source: handbook 12, last sentence: the sheet prints name, licence, date and reason. A value
    that is not the one decided, as in a pack with settings of its own, has nobody behind it.
    """
    unit = "" if default.unit == "-" else f" {default.unit}"
    return caution(
        "default-changed",
        words=default.words.capitalize(),
        value=value,
        unit=unit,
        default=default.value,
        low=default.low,
        high=default.high,
        who=NOBODY_NAMED if decision is None or decision.value != value else _who(decision),
    )


def _who(decision: Decision) -> str:
    reason = " ".join(decision.reason.split()).rstrip(".")  # it was typed, perhaps in lines
    return (
        f"Decided by {decision.name}, licence {decision.licence}, on {decision.on.isoformat()}: "
        f"{reason}."
    )
