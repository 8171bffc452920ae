"""Keeping rain: days and months of gauges, what was not read kept apart from no rain."""

from __future__ import annotations

import re
from collections import Counter
from typing import TYPE_CHECKING, Final

from django.db import transaction

from structures.access import Act, insist
from structures.intake.fields import CODE_PATTERN
from structures.models import District, Gauge, RainDay, RainMonth

if TYPE_CHECKING:
    from collections.abc import Sequence
    from datetime import date

    from structures.intake.rain_sheet import RainRow
    from structures.models import Upload, User

AT_ONCE: Final = 1000
NOT_READ: Final = "RN-01"


@transaction.atomic
def keep_rain(
    *, district: District, rows: Sequence[RainRow], by: User, upload: Upload | None = None
) -> Counter[str]:
    """Keep rows of rain; gives how many were kept, held, already here or refused.

    A day or month that is there already stays as it is: with another amount the row is refused.
    """
    District.objects.select_for_update().get(pk=district.pk)
    insist(by, Act.SEND_READINGS, district)
    gauges = _gauges(district, {row.gauge for row in rows if not row.blocked})
    counts: Counter[str] = Counter()
    known = _known(gauges, rows)
    days, months = [], []
    for row in rows:
        gauge = gauges.get(row.gauge)
        if row.blocked or gauge is None:
            counts["refused"] += 1
            continue
        key = (gauge.pk, row.day, row.monthly)
        if key in known:
            counts["already here" if known[key] == row.rain_mm else "refused"] += 1
            continue
        known[key] = row.rain_mm
        held = any(one.level == "hold" for one in row.findings)
        counts["held" if held else "kept"] += 1
        values = {"gauge": gauge, "rain_mm": row.rain_mm, "upload": upload, "by": by}
        if row.monthly:
            months.append(RainMonth(month=row.day, **values))
        else:
            rules = [one.rule for one in row.findings if one.rule]
            rules += [NOT_READ] if row.rain_mm is None else []
            remark, trace = row.remark[:200], row.trace
            more = {"day": row.day, "days": row.days, "remark": remark, "trace": trace}
            days.append(RainDay(rules=rules, **more, **values))
    RainDay.objects.bulk_create(days, batch_size=AT_ONCE)
    RainMonth.objects.bulk_create(months, batch_size=AT_ONCE)
    return counts


def _gauges(district: District, codes: set[str]) -> dict[str, Gauge]:
    found = {one.code: one for one in Gauge.objects.filter(district=district, code__in=codes)}
    for code in sorted(codes - found.keys()):
        if re.match(CODE_PATTERN, code):
            found[code] = Gauge.objects.create(district=district, code=code)
    return found


def _known(
    gauges: dict[str, Gauge], rows: Sequence[RainRow]
) -> dict[tuple[int, date, bool], float | None]:
    if not rows:
        return {}
    first, last = min(row.day for row in rows), max(row.day for row in rows)
    ids = [one.pk for one in gauges.values()]
    days = RainDay.objects.filter(gauge__in=ids, day__range=(first, last))
    months = RainMonth.objects.filter(gauge__in=ids, month__range=(first, last))
    known = {(one, day, False): mm for one, day, mm in days.values_list("gauge", "day", "rain_mm")}
    known |= {
        (one, day, True): mm for one, day, mm in months.values_list("gauge", "month", "rain_mm")
    }
    return known
