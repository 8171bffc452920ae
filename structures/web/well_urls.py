"""Addresses of wells, their readings and what they say of a wall."""

from __future__ import annotations

from django.urls import path

from structures.web import effect, hydrograph, reading_files, repairs, well_round, wells

urlpatterns = [
    path("wells/", wells.wells, name="wells"),
    path("wells/new/", wells.new_well, name="new-well"),
    path("wells/<str:code>/", wells.well, name="well"),
    path("wells/<str:code>/edit/", wells.edit_well, name="well-edit"),
    path("wells/<str:code>/mark/", wells.new_mark, name="new-mark"),
    path("wells/<str:code>/apart/", wells.keep_apart, name="well-apart"),
    path("today/wells/", well_round.round_of_today, name="well-round"),
    path("today/wells/<str:code>/", well_round.read_well, name="read-well"),
    path("hydrograph/", hydrograph.hydrograph, name="hydrograph"),
    path("hydrograph/drawing.svg", hydrograph.drawing_svg, name="hydrograph-svg"),
    path("hydrograph/drawing.pdf", hydrograph.drawing_pdf, name="hydrograph-pdf"),
    path("hydrograph/levels.csv", hydrograph.readings_csv, name="hydrograph-csv"),
    path("sites/<str:code>/effect/", effect.effect, name="effect"),
    path("sites/<str:code>/complaints/new/", effect.new_complaint, name="new-complaint"),
    path("complaints/<str:code>/", effect.complaint, name="complaint"),
    path("readings/", reading_files.readings_file, name="readings-file"),
    path("files/<int:file_id>/take-back/", reading_files.back, name="file-back"),
    path("repairs/", repairs.repairs, name="repairs"),
    path("repairs/<int:repair_id>/", repairs.repair, name="repair"),
]
