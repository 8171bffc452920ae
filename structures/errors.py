"""What goes wrong with what people hand in: one finding, or a refusal that carries them all."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, Literal

Level = Literal["block", "hold", "warn", "note"]
LEVELS: Final[tuple[Level, ...]] = ("block", "hold", "warn", "note")


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing found in what was handed in.

    `where` names file, line or cell ("ground.csv line 4", "survey.xlsx ground!B4", "$.ground[2]");
    `field` the field as the pack names it; `level` is "block" where nothing can be kept.
    """

    where: str
    field: str
    what: str
    remedy: str
    level: Level = "block"
    rule: str = ""

    def sentence(self) -> str:
        """Give the finding as one line: where, field, what is wrong, what to do."""
        place = ", ".join(part for part in (self.where, self.field) if part)
        return f"{place}: {self.what} {self.remedy}".strip()


class Refused(Exception):  # noqa: N818 -- a refusal is an answer to a person, not a defect
    """What was asked cannot be done; says what, where, and what to do instead."""

    def __init__(
        self, what: str, *, where: str = "", remedy: str = "", findings: tuple[Finding, ...] = ()
    ) -> None:
        self.what = what
        self.where = where
        self.remedy = remedy
        self.findings = findings
        super().__init__(self.sentence())

    def sentence(self) -> str:
        """Give the refusal as one line."""
        lead = f"{self.where}: {self.what}" if self.where else self.what
        return f"{lead} {self.remedy}".strip()
