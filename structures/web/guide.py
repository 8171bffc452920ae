"""What this program does for whom, in which order, and the cautions that always hold."""

from __future__ import annotations

from django.shortcuts import render
from django.views.decorators.http import require_GET

from structures.access import MAY, Act
from structures.life.cautions import ALWAYS, CATALOGUE, CLOSING_SENTENCE, caution
from structures.life.trench import spoil_distance_m
from structures.queries.settings_sheet import least_in_force


@require_GET
def guide(request):
    least_m = spoil_distance_m(0.0)  # deeper trenches ask for more; their sheets say how much
    entry_m = least_in_force(request.user, "depth_without_entry_m")
    context = {
        "who_may": [
            (act.value, sorted(str(role.label) for role in roles))
            for act, roles in MAY.items()
            if act != Act.SEE
        ],
        "cautions": [
            caution(code, distance_m=least_m, entry_m=entry_m)
            for code in CATALOGUE
            if code in ALWAYS
        ],
        "closing": CLOSING_SENTENCE,
    }
    return render(request, "structures/guide.html", context)
