"""Addresses of the works: the trench in the office, and the phone's pages below /today/."""

from __future__ import annotations

from django.urls import path

from structures.web import field, works

urlpatterns = [
    path("sites/<str:code>/works/", works.works, name="works"),
    path("sites/<str:code>/works/strips/<int:number>/", works.strip, name="strip"),
    path("sites/<str:code>/works/clay/", works.clay, name="clay"),
    path("holds/", works.desk, name="desk"),
    path("holds/<uuid:hold_id>/", works.hold, name="hold"),
    path("clashes/<int:clash_id>/", works.clash, name="clash"),
    path("today/", field.today, name="today"),
    path("today/parcel/", field.box, name="parcel-box"),
    path("today/worker.js", field.worker, name="field-worker"),
    path("today/app.webmanifest", field.manifest, name="field-manifest"),
    path("today/at/<str:code>/alarm/", field.alarm, name="alarm"),
    path("today/at/<str:code>/<str:kind>/", field.record, name="record"),
    path(
        "today/at/<str:code>/strips/<int:number>/<str:kind>/",
        field.record,
        name="strip-record",
    ),
]
