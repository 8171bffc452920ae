"""Observation pipes of a wall: what stands there, and entering those that were set with it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from django import forms
from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods

from structures.access import Act, may
from structures.actions.pipes import Pipe, enter_pipes
from structures.errors import Refused
from structures.intake.values import with_point
from structures.queries.districts import today_of
from structures.queries.structures import visible_structures
from structures.queries.wells import pipes_of
from structures.web.refusals import STATUS, refuse

if TYPE_CHECKING:
    from django.http import HttpRequest, HttpResponse

METHODS: Final = ["GET", "HEAD", "POST"]
SIDES: Final = (
    ("upstream", gettext_lazy("Upstream of the wall"), "U"),
    ("downstream", gettext_lazy("Downstream of the wall"), "D"),
)
ASKED: Final = (
    ("code", gettext_lazy("Code of the pipe"), ""),
    ("distance_m", gettext_lazy("Distance from the wall (m)"), ""),
    ("depth_m", gettext_lazy("Bottom below ground (m)"), gettext_lazy("Sounded with the tape.")),
    (
        "ground_level_m",
        gettext_lazy("Level of the ground (m)"),
        gettext_lazy("Above the site's bench mark, levelled."),
    ),
    (
        "mark_height_m",
        gettext_lazy("Measuring point above ground (m)"),
        gettext_lazy("The edge from which every depth is read."),
    ),
    ("diameter_m", gettext_lazy("Inner width (m)"), gettext_lazy("If known.")),
    (
        "mark_what",
        gettext_lazy("What the measuring point is"),
        gettext_lazy("As: red edge, north."),
    ),
)
NEEDED: Final = ("distance_m", "depth_m", "ground_level_m", "mark_height_m")


class PipesForm(forms.Form):
    """Both sides of the wall; a side with only its code is left out."""

    set_on = forms.DateField(
        label=gettext_lazy("Set on"),
        widget=forms.DateInput(format="%Y-%m-%d", attrs={"type": "date"}),
    )

    def __init__(self, *args: Any, code: str, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        for side, _words, letter in SIDES:
            for key, label, help_text in ASKED:
                css = {"class": "figure", "inputmode": "decimal"} if key.endswith("_m") else {}
                self.fields[f"{side}.{key}"] = forms.CharField(
                    label=label,
                    help_text=help_text,
                    required=False,
                    max_length=200,
                    initial=f"{code}-P{letter}" if key == "code" else "",
                    widget=forms.TextInput(attrs={"autocomplete": "off", **css}),
                )

    def sides(self) -> list[tuple[str, str, list[forms.BoundField]]]:
        return [
            (side, words, [self[f"{side}.{key}"] for key, _label, _help in ASKED])
            for side, words, _letter in SIDES
        ]

    def pipes(self) -> list[Pipe]:
        """Sides of which something was measured."""
        said = self.cleaned_data
        return [
            Pipe(side, *(_typed(key, said[f"{side}.{key}"]) for key, _label, _help in ASKED))
            for side, _words, _letter in SIDES
            if any(said[f"{side}.{key}"].strip() for key in NEEDED)
        ]


def _typed(key: str, text: str) -> str:
    """Take a decimal comma for what it is; words stay as they are."""
    return with_point(text) if key.endswith("_m") else text


@require_http_methods(METHODS)
def pipes(request: HttpRequest, code: str) -> HttpResponse:
    structure = get_object_or_404(visible_structures(request.user), site__code=code)
    today = today_of(structure.site.watershed.district)
    form = PipesForm(request.POST or None, code=code, initial={"set_on": today})
    if request.method == "POST" and form.is_valid():
        try:
            kept = enter_pipes(
                structure_id=structure.pk,
                set_on=form.cleaned_data["set_on"],
                pipes=form.pipes(),
                by=request.user,
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            told = _("Entered as wells, each with its measuring point: %(codes)s.")
            messages.success(request, told % {"codes": ", ".join(one.code for one in kept)})
            return redirect("structures:pipes", code)
    context = {
        "site": structure.site,
        "form": form,
        "kept": pipes_of(request.user, structure.site),
        "may_enter": may(request.user, Act.ENTER_WELL, structure),
    }
    wrong = form.is_bound and form.errors
    return render(request, "structures/pipes.html", context, status=STATUS if wrong else 200)
