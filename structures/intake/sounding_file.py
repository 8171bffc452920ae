"""One sounding from a CSV file of its own: the same readings and checks as in a pack."""

from __future__ import annotations

from pathlib import PurePosixPath
from typing import TYPE_CHECKING

from structures.intake.archive import too_large
from structures.intake.builder import refusal
from structures.intake.delimited import read_delimited
from structures.intake.fields import ARRAYS
from structures.intake.pack import Sounding
from structures.intake.parts import read_readings
from structures.intake.tree import Ledger, Node

if TYPE_CHECKING:
    from typing import Literal


def read_sounding(
    name: str, data: bytes, array: Literal["schlumberger", "wenner"] = "schlumberger"
) -> Sounding:
    """Read a sounding that was handed in alone.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    data
        CSV with `ab2_m,mn2_m,apparent_resistivity_ohm_m`, for Wenner
        `a_m,apparent_resistivity_ohm_m`; `sd_percent` may follow. Half spacings and a in m.
    array
        How the electrodes were laid out.

    Returns
    -------
    Sounding
        Without an offset; `findings` holds what the reader doubts.

    Raises
    ------
    Refused
        If the file cannot be used; `findings` names each line and field.
    ValueError
        If the array is none that is known.
    """
    if array not in ARRAYS:
        raise ValueError(f"array is one of {', '.join(ARRAYS)}, not {array}")
    ledger = Ledger()
    if what := too_large(len(data)):
        ledger.add(Node(None, name), what, "Send one sounding.", rule="FI-02")
        raise refusal(ledger, "sounding")
    label = PurePosixPath(name).stem
    table = read_delimited(label, name, data, ledger)
    if table is None:
        raise refusal(ledger, "sounding")
    rows = [table.node(row, "") for row in table.rows]
    node = Node(rows, name, tabular=True)
    readings = read_readings(node, array, ledger)
    if ledger.blocks:
        raise refusal(ledger, "sounding")
    return Sounding(None, array, readings, label, findings=tuple(ledger.findings))
