"""Every page of sites, surveys and people, on one screen."""

from __future__ import annotations

from django.urls import path

from structures.web import accounts, guide, people, settings

app_name = "structures"

urlpatterns = [
    path("sign-in/", accounts.SignIn.as_view(), name="sign-in"),
    path("sign-out/", accounts.sign_out, name="sign-out"),
    path("sign-out-everywhere/", accounts.sign_out_everywhere, name="sign-out-everywhere"),
    path("password/", accounts.password, name="password"),
    path("welcome/", accounts.welcome, name="welcome"),
    path("people/", people.people, name="people"),
    path("people/new/", people.new_person, name="new-person"),
    path("people/<int:user_id>/", people.person, name="person"),
    path("people/<int:user_id>/word/", people.another_word, name="another-word"),
    path("people/<int:user_id>/end-sessions/", people.end_sessions, name="end-sessions"),
    path("people/<int:user_id>/postings/new/", people.posting, name="new-posting"),
    path("people/<int:user_id>/postings/<int:posting_id>/", people.posting, name="posting"),
    path("settings/", settings.settings, name="settings"),
    path("settings/<str:key>/", settings.setting, name="setting"),
    path("districts/new/", settings.new_district, name="new-district"),
    path("districts/<str:code>/", settings.district, name="district"),
    path("help/", guide.guide, name="help"),
]
