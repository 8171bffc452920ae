"""Collections of sites and surveys: each scoped by the postings of whoever asks."""

from __future__ import annotations

from http import HTTPStatus

from drf_spectacular.utils import OpenApiParameter, OpenApiResponse, extend_schema
from rest_framework import exceptions, mixins
from rest_framework.decorators import action
from rest_framework.generics import get_object_or_404
from rest_framework.renderers import JSONRenderer
from rest_framework.response import Response
from rest_framework.reverse import reverse
from rest_framework.viewsets import GenericViewSet

from structures.access import Act
from structures.actions.devices import Answered
from structures.actions.sites import edit_site, enter_site
from structures.actions.surveys import accept_survey, preview_survey
from structures.actions.watersheds import bulk_enter_watersheds
from structures.api import examples, filters, serializers
from structures.api.geojson import GeoJSONRenderer
from structures.api.problems import ChangedSince
from structures.api.views import (
    OUTLINE_FILES,
    SURVEY_FILES,
    Guarded,
    handed_in,
    insist,
    named_district,
)
from structures.api.writes import (
    DISTRICT,
    IF_MATCH,
    KEY,
    PREVIEW,
    etag,
    is_preview,
    once,
    seen_revision,
)
from structures.errors import Refused
from structures.queries.districts import visible_districts, visible_watersheds
from structures.queries.received import received_files
from structures.queries.run_results import result_of
from structures.queries.runs import runs_of_kind, visible_runs
from structures.queries.sites import search_sites, visible_sites
from structures.queries.structures import visible_structures
from structures.queries.surveys import visible_soundings, visible_surveys
from structures.runs.book import ask_cancel

PROBLEM = OpenApiResponse(serializers.ProblemSerializer, "what is wrong, and what to do")


class Collection(Guarded, mixins.ListModelMixin, mixins.RetrieveModelMixin, GenericViewSet):
    """A list in pages and its single records; a record that is not visible is not there."""

    whole_serializer_class = None

    def get_queryset(self):
        if getattr(self, "swagger_fake_view", False):
            return self.of_nobody()
        return self.visible(self.request.user)

    def visible(self, user):
        return self.query(user)

    def of_nobody(self):
        """Give rows for the schema, which only looks at what kind they are."""
        return self.query(self.request.user)

    def get_serializer_class(self):
        if self.action == "retrieve" and self.whole_serializer_class is not None:
            return self.whole_serializer_class
        return self.serializer_class


class Watersheds(Collection):
    serializer_class = serializers.WatershedSerializer
    renderer_classes = (JSONRenderer, GeoJSONRenderer)
    filterset_class = filters.WatershedFilter
    ordering_fields = ("code", "name", "area_km2")
    ordering = ("code",)
    lookup_field = "code"
    lookup_value_regex = "[^/]+"
    query = staticmethod(visible_watersheds)
    parser_classes = OUTLINE_FILES

    @extend_schema(
        summary="Enter watersheds",
        description=(
            "A GeoJSON FeatureCollection of polygons with `code` and `name`, perhaps `stream` and "
            "`rain_gauge`, as the body or as the one file of a form; all of it, or nothing."
        ),
        parameters=[KEY, DISTRICT],
        request=examples.OUTLINE_BODIES,
        responses={
            201: serializers.WatershedSerializer(many=True),
            403: PROBLEM,
            409: PROBLEM,
            422: PROBLEM,
        },
        examples=[examples.OUTLINES],
        filters=False,
    )
    def create(self, request):
        district = named_district(request, Act.ENTER_WATERSHED)
        file = handed_in(request)

        def write():
            kept = bulk_enter_watersheds(
                district_id=district.pk, name=file.name, data=file.data, by=request.user
            )
            touched = [*kept.watersheds, *(one.watershed for one in kept.streams)]
            codes = [one.code for one in touched]
            told = visible_watersheds(request.user).filter(code__in=codes)
            rows = serializers.WatershedSerializer(told, many=True).data
            body = {"count": len(rows), "next": None, "previous": None, "results": rows}
            return Answered(HTTPStatus.CREATED, body)

        return once(request, write)


class Sites(Collection):
    serializer_class = serializers.SiteSerializer
    renderer_classes = (JSONRenderer, GeoJSONRenderer)
    filterset_class = filters.SiteFilter
    ordering_fields = ("code", "name", "bed_level_m", "catchment_km2", "changed_at")
    ordering = ("code",)
    lookup_field = "code"
    lookup_value_regex = "[^/]+"
    query = staticmethod(visible_sites)

    def visible(self, user):
        found = search_sites(user, self.request.query_params.get("q", ""))
        return found.select_related("changed_by", "watershed__district", "stream", "structure")

    @extend_schema(
        parameters=[OpenApiParameter("q", str, description="code, name, village or stream")]
    )
    def list(self, request, *args, **kwargs):
        return super().list(request, *args, **kwargs)

    def retrieve(self, request, *args, **kwargs):
        site = self.get_object()
        told = self.get_serializer(site).data
        return Response(told, headers={"ETag": etag(site.revision)})

    @extend_schema(
        summary="Enter a site",
        parameters=[KEY],
        request=serializers.SiteNewSerializer,
        responses={201: serializers.SiteSerializer, 403: PROBLEM, 409: PROBLEM, 422: PROBLEM},
        examples=[examples.NEW_SITE],
    )
    def create(self, request):
        said = serializers.SiteNewSerializer(data=request.data)
        said.is_valid(raise_exception=True)
        values = said.validated_data
        districts = visible_districts(request.user)
        watershed = visible_watersheds(request.user).filter(code=values["watershed"]).first()
        district = districts.first() if watershed is None else watershed.district
        if district is None:
            raise exceptions.PermissionDenied("You serve in no district.")
        insist(request.user, Act.ENTER_SITE, watershed or district)

        def write():
            entered = enter_site(district_id=district.pk, values=values, by=request.user)
            return self._told(entered.code, HTTPStatus.CREATED)

        return once(request, write)

    @extend_schema(
        summary="Change fields of a site",
        parameters=[KEY, IF_MATCH],
        request=serializers.SiteEditSerializer,
        responses={
            200: serializers.SiteSerializer,
            412: PROBLEM,
            422: PROBLEM,
            428: PROBLEM,
        },
        examples=[examples.SITE_EDIT],
    )
    def partial_update(self, request, code):
        site = self.get_object()
        insist(request.user, Act.EDIT_SITE, site)
        said = serializers.SiteEditSerializer(data=request.data)
        said.is_valid(raise_exception=True)

        def write():
            seen = seen_revision(request, site.revision)
            try:
                edit_site(
                    site_id=site.pk,
                    seen_revision=seen,
                    changes=said.validated_data,
                    by=request.user,
                )
            except Refused as refused:
                if self.get_object().revision != seen:
                    raise ChangedSince from refused
                raise
            return self._told(code, HTTPStatus.OK)

        return once(request, write)

    def _told(self, code, status):
        site = visible_sites(self.request.user).get(code=code)
        told = serializers.SiteSerializer(site).data
        place = reverse("sites-detail", [code], request=self.request)
        return Answered(status, told, {"Location": place, "ETag": etag(site.revision)})


class Surveys(Collection):
    serializer_class = serializers.SurveySerializer
    whole_serializer_class = serializers.SurveyWholeSerializer
    filterset_class = filters.SurveyFilter
    ordering_fields = ("at", "site__code", "version")
    ordering = ("-at", "-id")
    lookup_value_regex = "[0-9]+"
    query = staticmethod(visible_surveys)


class SiteSurveys(Surveys):
    """Surveys of one site; a survey is handed in here."""

    parser_classes = SURVEY_FILES
    ordering = ("-version",)

    def visible(self, user):
        site = get_object_or_404(visible_sites(user), code=self.kwargs["code"])
        return visible_surveys(user).filter(site=site)

    @extend_schema(
        summary="Hand in a survey",
        description=(
            "The body is a survey pack (JSON, a zip of CSV files or a workbook), or a form with "
            "one file. Kept as the next version of the site's survey; a worker then reads "
            "soundings, rock line and wall. With `preview=true` nothing is kept."
        ),
        parameters=[KEY, PREVIEW],
        request=examples.SURVEY_BODIES,
        responses={
            200: serializers.SurveyPreviewSerializer,
            201: serializers.SurveyWholeSerializer,
            403: PROBLEM,
            404: PROBLEM,
            409: PROBLEM,
            413: PROBLEM,
            422: PROBLEM,
        },
        examples=[examples.SURVEY, examples.REFUSED_SURVEY],
    )
    def create(self, request, code):
        site = get_object_or_404(visible_sites(request.user), code=code)
        insist(request.user, Act.ACCEPT_SURVEY, site)
        file = handed_in(request)
        handed = {"site_id": site.pk, "name": file.name, "data": file.data, "by": request.user}
        if is_preview(request):
            read = preview_survey(**handed)
            return Response(serializers.SurveyPreviewSerializer(read).data)

        def write():
            kept = accept_survey(**handed)
            told = serializers.SurveyWholeSerializer(kept).data
            place = reverse("surveys-detail", [kept.pk], request=request)
            return Answered(HTTPStatus.CREATED, told, {"Location": place})

        return once(request, write)


class Soundings(Collection):
    serializer_class = serializers.SoundingSerializer
    filterset_class = filters.SoundingFilter
    ordering_fields = ("offset_m", "survey__site__code", "label", "id")
    ordering = ("survey__site__code", "-survey__version", "order")
    lookup_value_regex = "[0-9]+"
    query = staticmethod(visible_soundings)


class Structures(Collection):
    serializer_class = serializers.StructureSerializer
    filterset_class = filters.StructureFilter
    ordering_fields = ("site__code", "stage", "since")
    ordering = ("site__code",)
    lookup_field = "site__code"
    lookup_url_kwarg = "code"
    lookup_value_regex = "[^/]+"
    query = staticmethod(visible_structures)


class Uploads(Collection):
    serializer_class = serializers.UploadSerializer
    filterset_class = filters.UploadFilter
    ordering_fields = ("at", "name", "size", "kind")
    ordering = ("-at", "-id")
    lookup_value_regex = "[0-9]+"
    query = staticmethod(received_files)


class Runs(Collection):
    serializer_class = serializers.RunSerializer
    whole_serializer_class = serializers.RunWholeSerializer
    filterset_class = filters.RunFilter
    ordering_fields = ("created_at", "finished_at", "state", "kind")
    ordering = ("-created_at", "id")
    lookup_value_regex = "[0-9a-f-]{36}"
    query = staticmethod(visible_runs)

    def of_nobody(self):
        return runs_of_kind("")

    def retrieve(self, request, *args, **kwargs):
        run = self.get_object()
        found = result_of(run, request.user)
        told = serializers.RunSerializer(run).data
        # Beside the appraisal a run keeps drawings and files, which the pages hand out.
        told["result"] = None if found is None else found.get("appraisal", found)
        return Response(told)

    @extend_schema(
        summary="Ask a run to stop",
        request=None,
        responses={202: serializers.RunSerializer, 403: PROBLEM},
    )
    @action(detail=True, methods=["post"])
    def cancel(self, request, pk):
        run = self.get_object()
        if run.asked_by_id != request.user.pk:
            raise exceptions.PermissionDenied("Only who asked for a run may stop it.")
        ask_cancel(run.pk)
        told = serializers.RunSerializer(self.get_object()).data
        return Response(told, status=HTTPStatus.ACCEPTED)
