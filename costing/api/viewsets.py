"""Rates and estimates, for those who may see money."""

from __future__ import annotations

from http import HTTPStatus

from drf_spectacular.utils import OpenApiExample, extend_schema
from rest_framework import exceptions
from rest_framework.generics import get_object_or_404
from rest_framework.response import Response
from rest_framework.reverse import reverse

from costing.actions.bills import BillGiven, write_bill
from costing.actions.estimate import request_estimate
from costing.actions.schedule import import_schedule, preview_schedule
from costing.api import filters, serializers
from costing.price.billing import BillLineAsked
from costing.queries.bills import visible_bills
from costing.queries.estimates import visible_estimates
from costing.queries.schedules import visible_schedules
from costing.queries.ways import ways_of
from structures.access import Act
from structures.actions.devices import Answered
from structures.api.examples import FORM
from structures.api.serializers import RunSerializer
from structures.api.views import RATE_FILES, OfficeView, handed_in, insist, named_district
from structures.api.viewsets import PROBLEM, Collection
from structures.api.writes import DISTRICT, KEY, PREVIEW, is_preview, once
from structures.queries.sites import visible_sites
from structures.queries.structures import visible_structures
from structures.queries.surveys import surveys_of


class RateSchedules(Collection):
    serializer_class = serializers.RateScheduleSerializer
    whole_serializer_class = serializers.RateScheduleWholeSerializer
    filterset_class = filters.RateScheduleFilter
    ordering_fields = ("at", "code", "version", "valid_from", "valid_to")
    ordering = ("-at", "-id")
    lookup_value_regex = "[0-9]+"
    query = staticmethod(visible_schedules)
    parser_classes = RATE_FILES

    @extend_schema(
        summary="Bring in a rate schedule",
        description=(
            "CSV or JSON as the body, or a form with one file. The file's name "
            "(`Content-Disposition: attachment; filename=...`) is the schedule's where the file "
            "gives it none. With `preview=true` it is compared with the one before and not kept."
        ),
        parameters=[KEY, DISTRICT, PREVIEW],
        request={
            "text/csv": {"type": "string"},
            "application/json": {"type": "object"},
            "multipart/form-data": FORM,
        },
        responses={
            200: serializers.SchedulePreviewSerializer,
            201: serializers.RateScheduleWholeSerializer,
            403: PROBLEM,
            409: PROBLEM,
            413: PROBLEM,
            422: PROBLEM,
        },
        filters=False,
    )
    def create(self, request):
        district = named_district(request, Act.IMPORT_SCHEDULE)
        file = handed_in(request)
        handed = {
            "district_id": district.pk,
            "name": file.name,
            "data": file.data,
            "by": request.user,
        }
        if is_preview(request):
            read = preview_schedule(**handed)
            return Response(serializers.SchedulePreviewSerializer(read).data)

        def write():
            kept = visible_schedules(request.user).get(pk=import_schedule(**handed).pk)
            told = serializers.RateScheduleWholeSerializer(kept).data
            place = reverse("rate-schedules-detail", [kept.pk], request=request)
            return Answered(HTTPStatus.CREATED, told, {"Location": place})

        return once(request, write)


class Estimates(Collection):
    serializer_class = serializers.EstimateSerializer
    whole_serializer_class = serializers.EstimateWholeSerializer
    filterset_class = filters.EstimateFilter
    ordering_fields = ("frozen_at", "site__code", "version", "total", "sanction")
    ordering = ("-frozen_at", "-id")
    lookup_value_regex = "[0-9]+"
    query = staticmethod(visible_estimates)


class SiteEstimates(Estimates):
    """Estimates of one site; one is asked for here."""

    ordering = ("-version",)

    def visible(self, user):
        site = get_object_or_404(visible_sites(user), code=self.kwargs["code"])
        return visible_estimates(user).filter(site=site)

    @extend_schema(
        summary="Ask for an estimate",
        description=(
            "Answers at once with the run that prices the site; its address is in `Location`. The "
            "same inputs give the run there is already."
        ),
        parameters=[KEY],
        request=serializers.EstimateRequestSerializer,
        responses={202: RunSerializer, 403: PROBLEM, 404: PROBLEM, 409: PROBLEM, 422: PROBLEM},
        examples=[
            OpenApiExample("Everything newest", {}, request_only=True),
            OpenApiExample(
                "A thicker wall on an older survey",
                {"survey": 12, "rate_schedule": 3, "wall": {"thickness_m": 1.2}},
                request_only=True,
            ),
        ],
    )
    def create(self, request, code):
        site = get_object_or_404(visible_sites(request.user), code=code)
        insist(request.user, Act.REQUEST_ESTIMATE, site)
        said = serializers.EstimateRequestSerializer(data=request.data)
        said.is_valid(raise_exception=True)
        wanted = said.validated_data
        survey = _named("survey", surveys_of(request.user, code), wanted)
        here = visible_schedules(request.user).filter(district=site.watershed.district)
        schedule = _named("rate_schedule", here, wanted)

        def write():
            run = request_estimate(
                site_id=site.pk,
                by=request.user,
                survey_id=survey,
                schedule_id=schedule,
                wall=wanted.get("wall"),
            )
            place = reverse("runs-detail", [run.pk], request=request)
            return Answered(HTTPStatus.ACCEPTED, RunSerializer(run).data, {"Location": place})

        return once(request, write)


class Bills(Collection):
    """Bills; a draft is written here, and decided by a person on the page only."""

    serializer_class = serializers.BillSerializer
    whole_serializer_class = serializers.BillWholeSerializer
    filterset_class = filters.BillFilter
    ordering_fields = ("billed_on", "number", "claimed", "payable")
    ordering = ("-billed_on", "-id")
    lookup_value_regex = "[0-9]+"
    query = staticmethod(visible_bills)

    @extend_schema(
        summary="Write a bill",
        description=(
            "Keeps a draft, which an engineer hands in and the district office decides on the page. "
            "An entry is billed once; a line that a rule blocks refuses the bill whole."
        ),
        parameters=[KEY],
        request=serializers.BillGivenSerializer,
        responses={
            201: serializers.BillWholeSerializer,
            403: PROBLEM,
            404: PROBLEM,
            409: PROBLEM,
            422: PROBLEM,
        },
        filters=False,
    )
    def create(self, request):
        said = serializers.BillGivenSerializer(data=request.data)
        said.is_valid(raise_exception=True)
        wanted = said.validated_data
        structure = get_object_or_404(visible_structures(request.user), site__code=wanted["site"])
        insist(request.user, Act.WRITE_BILL, structure)
        lines = None
        if "lines" in wanted:
            lines = tuple(
                BillLineAsked(
                    one["line"], one["entry"], one["quantity"], one["rate"], one.get("amount")
                )
                for one in wanted["lines"]
            )
        given = BillGiven(
            wanted["number"], wanted["kind"], wanted["billed_on"], lines, wanted.get("total")
        )

        def write():
            kept = write_bill(structure_id=structure.pk, given=given, by=request.user)
            told = serializers.BillWholeSerializer(visible_bills(request.user).get(pk=kept.pk)).data
            place = reverse("bills-detail", [kept.pk], request=request)
            return Answered(HTTPStatus.CREATED, told, {"Location": place})

        return once(request, write)


def _named(field, found, wanted):
    """Give the number of a record that was named, if it is there for this site."""
    number = wanted.get(field)
    if number is not None and not found.filter(pk=number).exists():
        raise exceptions.ValidationError({field: [f"There is no {number} for this site."]})
    return number


class Missing(OfficeView):
    """What a structure waits for; a move itself is made on the page, in a session."""

    @extend_schema(
        summary="What a structure waits for",
        description="Stages are moved and decisions given on the pages: no token does either.",
        responses={200: serializers.MissingSerializer, 404: PROBLEM},
    )
    def get(self, request, code):
        structure = get_object_or_404(visible_structures(request.user), site__code=code)
        ways = ways_of(request.user, structure)
        told = {
            "site": structure.site.code,
            "stage": structure.stage,
            "since": structure.since,
            "next_stage": ways.next_stage,
            "may_go_on": ways.may_go_on,
            "missing": ways.missing,
        }
        return Response(serializers.MissingSerializer(told).data)
