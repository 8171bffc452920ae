"""Sanctions and bills of before: their tables, read as those of `structures.intake.history`."""

from __future__ import annotations

from typing import Final

from structures.intake.history_tables import STRUCTURE, Column, HistoryTable, exact, who

PAID: Final = "paid"
RECEIVED: Final = "received"

SANCTIONS: Final = HistoryTable(
    "sanctions",
    (
        Column("site_id", "code", to="sites"),
        Column("kind", "choice", choices=("technical", "administrative")),
        Column("number"),
        Column("dated", "day"),
        exact("amount"),
        Column("currency", to="currencies"),
        who("given_by"),
    ),
    ("site_id", "kind", "number"),
)
BILLS: Final = HistoryTable(
    "bills",
    (
        Column("bill_id"),
        STRUCTURE,
        Column("kind", "choice", choices=("running", "final")),
        Column("line_no", "whole", low=1, high=10_000),
        Column("entry_id"),
        Column("item", "code"),
        exact("quantity"),
        Column("unit"),
        exact("rate"),
        exact("amount"),
        Column("currency", to="currencies"),
        Column("billed_on", "day"),
        Column("status", "choice", choices=(PAID, RECEIVED)),
    ),
    ("bill_id", "line_no"),
    {"measurements": ("entry_id", "structure_id", "item", "unit")},
)
MONEY_TABLES: Final = (SANCTIONS, BILLS)
