"""The draft of an answer to people who say that a wall took their water: in plain words, from data."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from datetime import date

    from structures.water.one_well import Explained

TOO_LITTLE: Final = (
    "We cannot say yet why the water stands as it does: too few readings of this well or of control "
    "wells lie before and after the day you name. Nothing is said for or against the wall."
)
NO_WELL: Final = (
    "Your complaint names no well that is read, so there is no series of levels to look into. "
    "Tell us which well is meant; it is read from then on."
)
NEXT: Final = (
    "If you wish, come and read the well together with our reader; the readings are open to you."
)


def mark_sentences(explained: Explained) -> tuple[str, ...]:
    """Say which measuring points of the well moved, and that the comparison allows for it.

    People see the tape, not the level: from a raised parapet the same water reads deeper.
    """
    told = []
    for one in explained.marks:
        if one.well != explained.well:
            continue
        raised = one.change_m > 0.0
        told.append(
            f"The measuring point of {one.well} was {'raised' if raised else 'lowered'} by "
            f"{abs(one.change_m):.2f} m before {one.day}: read from it the same water lies "
            f"{abs(one.change_m):.2f} m {'deeper' if raised else 'higher'}. This is allowed for "
            "above; whoever measures from the parapet sees it as well."
        )
    return tuple(told)


def draft_answer(
    received_on: date, well: str, completed: date | None, explained: Explained | None
) -> str:
    """Draft the answer; whoever answers reads it, changes it, and signs it.

    Source: handbook 10.1 and 10.9; field practice 6, "most effects are rain and datum".

    Parameters
    ----------
    well
        Code of the well that the complaint names; empty where it names none.
    explained
        What the readings of the well say; None where they are too few.
    """
    lines = [f"You wrote to us on {received_on:%d %B %Y}. We have looked into what was measured."]
    if not well:
        return "\n\n".join([*lines, NO_WELL, NEXT])
    if completed is None:
        lines.append(f"No wall is completed at this site, so none can have changed {well}.")
        return "\n\n".join([*lines, NEXT])
    lines.append(f"The wall was completed on {completed:%d %B %Y}.")
    if explained is None:
        return "\n\n".join([*lines, TOO_LITTLE, NEXT])
    lines += [*explained.sentences(), *mark_sentences(explained), NEXT]
    return "\n\n".join(lines)
