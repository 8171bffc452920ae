"""Filters of the lists, named like the fields they look at."""

from __future__ import annotations

from django_filters import rest_framework as filters


class RateScheduleFilter(filters.FilterSet):
    district = filters.CharFilter("district__code")
    code = filters.CharFilter("code")
    version = filters.NumberFilter("version")
    valid_from = filters.DateFilter("valid_from")
    valid_to = filters.DateFilter("valid_to")


class EstimateFilter(filters.FilterSet):
    site = filters.CharFilter("site__code")
    watershed = filters.CharFilter("site__watershed__code")
    district = filters.CharFilter("site__watershed__district__code")
    version = filters.NumberFilter("version")
    survey = filters.NumberFilter("survey_id")
    rate_schedule = filters.NumberFilter("schedule_id")
    run = filters.UUIDFilter("run_id")
    complete = filters.BooleanFilter("complete")
    method = filters.CharFilter("method")


class BillFilter(filters.FilterSet):
    site = filters.CharFilter("structure__site__code")
    watershed = filters.CharFilter("structure__site__watershed__code")
    district = filters.CharFilter("structure__site__watershed__district__code")
    number = filters.CharFilter("number")
    kind = filters.CharFilter("kind")
    state = filters.CharFilter("state")
    billed_on = filters.DateFilter("billed_on")
