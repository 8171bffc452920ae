"""Addresses of a wall that is done: as built, observation pipes, handed over, judged."""

from __future__ import annotations

from django.urls import path

from structures.web import as_built, handover, pipes, verdict

urlpatterns = [
    path("sites/<str:code>/as-built/", as_built.as_built, name="as-built"),
    path(
        "sites/<str:code>/as-built/as-built.<str:form>",
        as_built.as_built_file,
        name="as-built-file",
    ),
    path("sites/<str:code>/pipes/", pipes.pipes, name="pipes"),
    path("sites/<str:code>/handover/", handover.handover, name="handover"),
    path("sites/<str:code>/verdict/", verdict.verdict, name="verdict"),
]
