"""Forms of a person's own account: coming in, the first password, another password."""

from __future__ import annotations

from django import forms
from django.contrib.auth.forms import AuthenticationForm
from django.utils.translation import gettext_lazy as _

LOGIN_MOST = 150  # characters, as the table of users keeps them
PASSWORD_HELP = _("12 characters or more, none that everybody takes.")


def _password(label, *, new, **more):
    fill = "new-password" if new else "current-password"
    # A password may begin or end with a blank; what was typed is what counts.
    widget = forms.PasswordInput(attrs={"autocomplete": fill})
    return forms.CharField(label=label, strip=False, widget=widget, **more)


class SignInForm(AuthenticationForm):
    """Name and password; a wrong one says nothing of which of the two was wrong."""

    error_messages = {
        "invalid_login": _(
            "That name and password do not fit. Look at capital letters and try again, "
            "or ask an administrator for a one-time word."
        ),
        "inactive": _("This account is closed. Ask an administrator."),
    }

    def __init__(self, *args, **kwargs):
        super().__init__(*args, **kwargs)
        self.fields["username"].label = _("Name")
        self.fields["password"].label = _("Password")


class _TwicePasswordForm(forms.Form):
    """A new password, typed twice."""

    def clean(self):
        cleaned = super().clean()
        first, again = cleaned.get("password"), cleaned.get("again")
        if first and again and first != again:
            self.add_error("again", _("The two passwords differ. Type the same one twice."))
        return cleaned


class WelcomeForm(_TwicePasswordForm):
    """The one-time word against a password of one's own."""

    login = forms.CharField(
        label=_("Name"),
        max_length=LOGIN_MOST,
        widget=forms.TextInput(
            attrs={"autocomplete": "username", "autocapitalize": "none", "spellcheck": "false"}
        ),
    )
    word = forms.CharField(
        label=_("One-time word"),
        max_length=LOGIN_MOST,
        help_text=_("Four groups of four, as abcd-efgh-jkmn-pqrs; it opens once, within 24 hours."),
        widget=forms.TextInput(
            attrs={"autocomplete": "one-time-code", "autocapitalize": "none", "spellcheck": "false"}
        ),
    )
    password = _password(_("New password"), new=True, help_text=PASSWORD_HELP)
    again = _password(_("New password once more"), new=True)


class PasswordForm(_TwicePasswordForm):
    """Another password, by who knows the old one."""

    old = _password(_("Password until now"), new=False)
    password = _password(_("New password"), new=True, help_text=PASSWORD_HELP)
    again = _password(_("New password once more"), new=True)

    def __init__(self, *args, user, **kwargs):
        super().__init__(*args, **kwargs)
        self.user = user

    def clean_old(self):
        old = self.cleaned_data["old"]
        if not self.user.check_password(old):
            raise forms.ValidationError(_("That is not the password until now. Type it again."))
        return old
