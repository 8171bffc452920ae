"""Every page of sites, surveys and people, on one screen."""

from __future__ import annotations

from django.urls import path

from structures.web import accounts

app_name = "structures"

urlpatterns = [
    path("sign-in/", accounts.SignIn.as_view(), name="sign-in"),
    path("sign-out/", accounts.sign_out, name="sign-out"),
    path("sign-out-everywhere/", accounts.sign_out_everywhere, name="sign-out-everywhere"),
    path("password/", accounts.password, name="password"),
    path("welcome/", accounts.welcome, name="welcome"),
]
