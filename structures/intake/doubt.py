"""A doubt about a value that was sent: what was sent, and what may have been meant, side by side."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from structures.errors import Finding

if TYPE_CHECKING:
    from structures.errors import Level


@dataclass(frozen=True, slots=True)
class Doubt:
    """One doubt. `raw` is what was sent in `field`, `suggested` what may have been meant or empty."""

    rule: str
    field: str
    level: Level
    what: str
    remedy: str
    raw: str = ""
    suggested: str = ""

    def finding(self, where: str) -> Finding:
        """Give it as it is told to people."""
        return Finding(where, self.field, self.what, self.remedy, self.level, self.rule)
