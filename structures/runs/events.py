"""Names of things that happened, and the kinds of run that wait for them.

Whoever stands higher names a kind for a happening (`await_event`); whoever writes the happening
says it (`happened`) inside its transaction, so that row and run are kept together or not at all.
Where nobody waits, nothing is started and what happened stands all the same.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.runs.queue import start_run

if TYPE_CHECKING:
    from structures.models.people import User
    from structures.models.run import Run

ROCK_FOUND: Final = "rock-found"
EVENTS: Final = (ROCK_FOUND,)
_WAITING: dict[str, list[str]] = {}


def await_event(name: str, *, kind: str) -> None:
    """Have a run of a kind started each time this happens to a structure.

    Its parameters are `structure` (number) and `cause` (the record that it happened by).

    Raises
    ------
    KeyError
        If nothing of that name ever happens.
    """
    if name not in EVENTS:
        raise KeyError(f"nothing called {name!r} ever happens")
    kinds = _WAITING.setdefault(name, [])
    if kind not in kinds:
        kinds.append(kind)


def happened(
    name: str, structure_id: int, *, cause: str, subject: str = "", by: User | None = None
) -> tuple[Run, ...]:
    """Start the runs that wait for this; they are sent after commit.

    Parameters
    ----------
    cause
        Identifier of the record that tells of it: another record is another happening, the same
        one told twice starts nothing more.
    """
    params = {"structure": structure_id, "cause": cause}
    return tuple(
        start_run(kind=kind, params=params, subject=subject, asked_by=by)
        for kind in _WAITING.get(name, ())
    )
