"""What units are made of, exactly."""

from __future__ import annotations

from typing import Final

SECONDS_PER_HOUR: Final = 3600.0  # exact
SECONDS_PER_DAY: Final = 86400.0  # exact
HOURS_PER_DAY: Final = 24.0  # exact
DAYS_PER_YEAR: Final = 365.25  # exact: the Julian year
FOOT_M: Final = 0.3048  # exact: a third of the yard of 1959 (0.9144 m, international agreement)
