"""Addresses of wells, their readings and what they say of a wall."""

from __future__ import annotations

from django.urls import path

from structures.web import reading_files, repairs, wells

urlpatterns = [
    path("wells/", wells.wells, name="wells"),
    path("wells/new/", wells.new_well, name="new-well"),
    path("wells/<str:code>/", wells.well, name="well"),
    path("wells/<str:code>/edit/", wells.edit_well, name="well-edit"),
    path("wells/<str:code>/mark/", wells.new_mark, name="new-mark"),
    path("wells/<str:code>/apart/", wells.keep_apart, name="well-apart"),
    path("readings/", reading_files.readings_file, name="readings-file"),
    path("files/<int:file_id>/take-back/", reading_files.back, name="file-back"),
    path("repairs/", repairs.repairs, name="repairs"),
    path("repairs/<int:repair_id>/", repairs.repair, name="repair"),
]
