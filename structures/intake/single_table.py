"""A file that holds one table, CSV or XLSX: level readings, rain."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from structures.intake.archive import is_packed, too_large
from structures.intake.delimited import read_delimited
from structures.intake.tree import Node, shown
from structures.intake.workbook import read_list_sheet

if TYPE_CHECKING:
    from structures.intake.tables import Table
    from structures.intake.tree import Ledger

LINES_MOST: Final = 200_000  # ten wells read daily for half a century


def read_single_table(name: str, data: bytes, part: str, ledger: Ledger) -> Table | None:
    """Read the table of a file; None where a finding says why it cannot be read.

    Parameters
    ----------
    name
        Name of the file, as findings name it.
    part
        What the table holds; a workbook of several sheets is asked for the sheet of this name.
    """
    if what := too_large(len(data)):
        ledger.add(Node(None, name), what, "Send one site at a time.", rule="FI-02")
        return None
    if is_packed(data):
        return read_list_sheet(name, data, part, ledger)
    return read_delimited(part, name, data, ledger, lines_most=LINES_MOST)


def tell_columns(
    table: Table, known: tuple[str, ...], required: tuple[str, ...], ledger: Ledger
) -> bool:
    """Tell of columns that are missing or have no use here; whether all required ones are there."""
    spare = [heading for heading in table.headings if heading not in known]
    for heading in spare:
        what = f"Nothing is read from the column {shown(heading)}; it is left with the file."
        ledger.add(Node(None, table.where), what, "", level="note", rule="FI-03")
    missing = [key for key in required if key not in table.headings]
    for key in missing:
        what = "This column is missing."
        remedy = f"The heading line is {','.join(known)}."
        ledger.add(Node(None, table.where, key), what, remedy, rule="FI-03")
    return not missing
