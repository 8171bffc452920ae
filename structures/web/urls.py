"""Every page of sites, surveys and people, on one screen."""

from __future__ import annotations

from django.urls import path

from structures.web import (
    accounts,
    entry,
    files,
    guide,
    people,
    runs,
    settings,
    sites,
    surveys,
    watersheds,
)

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
    path("sites/", sites.sites, name="sites"),
    path("sites/<str:code>/", sites.site, name="site"),
    path("sites/<str:code>/edit/", sites.edit, name="site-edit"),
    path("sites/<str:code>/rock/", sites.rock, name="rock"),
    path("sites/<str:code>/try/", sites.try_other_wall, name="try"),
    path("sites/<str:code>/surveys/new/", surveys.new_survey, name="new-survey"),
    path("sites/<str:code>/surveys/<int:version>/", surveys.survey, name="survey"),
    path(
        "sites/<str:code>/surveys/<int:version>/against/<int:other>/",
        surveys.against,
        name="survey-against",
    ),
    path(
        "sites/<str:code>/surveys/<int:version>/soundings/<int:order>/",
        surveys.sounding,
        name="sounding",
    ),
    path("watersheds/", watersheds.watersheds, name="watersheds"),
    path("watersheds/<str:code>/", watersheds.watershed, name="watershed"),
    path("entry/", entry.entry, name="entry"),
    path("files/", files.files, name="files"),
    path("files/<int:file_id>/", files.file, name="file"),
    path("files/<int:file_id>/as-received/", files.as_received, name="file-as-received"),
    path("runs/", runs.runs, name="runs"),
    path("runs/<uuid:run_id>/", runs.run, name="run"),
    path("runs/<uuid:run_id>/cancel/", runs.cancel, name="cancel-run"),
]
