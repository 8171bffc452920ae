"""Letting somebody act in one's place for some days, and taking it back."""

from __future__ import annotations

from django import forms
from django.contrib import messages
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy
from django.views.decorators.http import require_http_methods, require_POST

from structures.actions.delegation import Days, delegate, end_delegation
from structures.errors import Refused
from structures.queries.delegation import (
    delegations_given,
    delegations_held,
    own_to_delegate,
    possible_delegates,
)
from structures.web.people_forms import day_field
from structures.web.refusals import STATUS, refuse


class DelegationForm(forms.Form):
    """To whom, which posting, from when to when, and why."""

    posting = forms.ModelChoiceField(
        label=gettext_lazy("Your posting"), queryset=None, empty_label=None
    )
    to = forms.ModelChoiceField(
        label=gettext_lazy("Who acts for you"),
        queryset=None,
        empty_label=gettext_lazy("not chosen"),
    )
    first = day_field(gettext_lazy("From"))
    last = day_field(gettext_lazy("Until"), help_text=gettext_lazy("The last day counts."))
    reason = forms.CharField(label=gettext_lazy("Reason"), max_length=300)

    def __init__(self, *args, by, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["posting"].queryset = own_to_delegate(by)
        self.fields["to"].queryset = possible_delegates(by)


@require_http_methods(["GET", "HEAD", "POST"])
def delegations(request):
    form = DelegationForm(request.POST or None, by=request.user)
    if request.method == "POST" and form.is_valid():
        said = form.cleaned_data
        try:
            lent = delegate(
                posting_id=said["posting"].pk,
                to_id=said["to"].pk,
                days=Days(said["first"], said["last"]),
                reason=said["reason"],
                by=request.user,
            )
        except Refused as refused:
            refuse(form, refused)
        else:
            words = _("%(who)s acts for you until %(day)s.")
            messages.success(request, words % {"who": lent.user.username, "day": lent.valid_to})
            return redirect("structures:delegations")
    context = {
        "form": form,
        "may_lend": own_to_delegate(request.user).exists(),
        "given": delegations_given(request.user),
        "held": delegations_held(request.user),
    }
    wrong = form.is_bound and form.errors
    return render(request, "structures/delegations.html", context, status=STATUS if wrong else 200)


@require_POST
def end(request, posting_id):
    lent = get_object_or_404(delegations_given(request.user), pk=posting_id)
    end_delegation(posting_id=lent.pk, by=request.user)
    messages.success(request, _("It is taken back."))
    return redirect("structures:delegations")
