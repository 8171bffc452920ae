"""Filters of the lists, named like the fields they look at."""

from __future__ import annotations

from django_filters import rest_framework as filters

from structures.life.stages import STAGES
from structures.queries.runs import site_subject


class OfDistrict(filters.FilterSet):
    district = filters.CharFilter("district__code")
    code = filters.CharFilter("code")


class WatershedFilter(OfDistrict):
    name = filters.CharFilter("name", "icontains")


class SiteFilter(filters.FilterSet):
    code = filters.CharFilter("code")
    name = filters.CharFilter("name", "icontains")
    district = filters.CharFilter("watershed__district__code")
    watershed = filters.CharFilter("watershed__code")
    stream = filters.CharFilter("stream__name")
    stage = filters.ChoiceFilter(field_name="structure__stage", choices=list(STAGES.items()))


class OfSite(filters.FilterSet):
    site = filters.CharFilter("site__code")
    watershed = filters.CharFilter("site__watershed__code")
    district = filters.CharFilter("site__watershed__district__code")


class SurveyFilter(OfSite):
    version = filters.NumberFilter("version")
    digest = filters.CharFilter("digest")
    by = filters.CharFilter("by__username")
    at_after = filters.IsoDateTimeFilter("at", "gte")
    at_before = filters.IsoDateTimeFilter("at", "lt")


class SoundingFilter(filters.FilterSet):
    site = filters.CharFilter("survey__site__code")
    survey = filters.NumberFilter("survey_id")
    array = filters.CharFilter("array")
    label = filters.CharFilter("label")


class StructureFilter(OfSite):
    stage = filters.ChoiceFilter(choices=list(STAGES.items()))


class UploadFilter(filters.FilterSet):
    district = filters.CharFilter("district__code")
    watershed = filters.CharFilter("watershed__code")
    kind = filters.CharFilter("kind")
    outcome = filters.CharFilter("outcome")
    sha256 = filters.CharFilter("sha256")
    by = filters.CharFilter("by__username")


class RunFilter(filters.FilterSet):
    kind = filters.CharFilter("kind")
    state = filters.CharFilter("state")
    asked_by = filters.CharFilter("asked_by__username")
    site = filters.CharFilter(method="of_site")

    def of_site(self, found, name, code):
        return found.filter(subject=site_subject(code), asked_by__isnull=False)
