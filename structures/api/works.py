"""What phones send from the trench, and the strips of a wall as they stand."""

from __future__ import annotations

from http import HTTPStatus

from django.utils.translation import gettext as _
from django_filters import rest_framework as filters
from drf_spectacular.utils import OpenApiExample, OpenApiResponse, extend_schema
from rest_framework import serializers
from rest_framework.generics import get_object_or_404
from rest_framework.parsers import MultiPartParser

from structures.access import Act
from structures.actions.devices import Answered
from structures.actions.parcels import LEVEL, take_parcel
from structures.actions.photos import Position, keep_photo
from structures.actions.refusals import as_documents
from structures.api.serializers import FindingSerializer, ProblemSerializer
from structures.api.views import OfficeView, insist
from structures.api.viewsets import Collection
from structures.api.writes import KEY, once
from structures.intake.field_records import KINDS
from structures.queries.sites import visible_sites
from structures.queries.works import visible_strips

PROBLEM = OpenApiResponse(ProblemSerializer, "what is wrong, and what to do")
RESULTS = ("kept", "already here", "held", "refused")
RECORD = {
    "type": "object",
    "required": ["id", "type"],
    "properties": {
        "id": {"type": "string", "format": "uuid", "description": "made on the phone"},
        "type": {"enum": [*KINDS, LEVEL]},
        "site": {"type": "string"},
        "strip": {"type": ["integer", "null"], "minimum": 1},
        "device_time": {"type": "string", "format": "date-time"},
        "photos": {"type": "array", "items": {"type": "string", "format": "uuid"}},
    },
    "additionalProperties": {"type": ["string", "number", "boolean", "null"]},
}
PARCEL = {
    "type": "object",
    "required": ["records"],
    "properties": {
        "parcel": {"type": "string"},
        "device": {"type": "string"},
        "by": {"type": "string", "description": "login of whoever wrote the records down"},
        "sent": {"type": "string", "format": "date-time"},
        "records": {"type": "array", "maxItems": 500, "items": RECORD},
    },
}
ONE_LOOK = OpenApiExample(
    "A look into the trench",
    {
        "parcel": "4b71218f-ed49-4759-8b51-8ea9eaf5f704",
        "device": "phone-b",
        "by": "field-4",
        "sent": "2027-04-05T18:41:00+05:30",
        "records": [
            {
                "id": "dce27fa0-8891-41a6-be12-600763fb47a5",
                "type": "look",
                "site": "KE-04",
                "strip": 3,
                "device_time": "2027-04-05T07:41:00+05:30",
                "day": "2027-04-05",
                "looked_at": "07:40",
                "result": "no stop found",
                "depth_m": 3.2,
                "slope_as_cut": 1.5,
                "spoil_back_m": 2.0,
                "ladder_within_m": 6,
                "crack": "no",
                "sides": "dry, no change",
                "water": "none",
                "rain_since_last": "no",
            }
        ],
    },
    request_only=True,
)


class AnswerSerializer(serializers.Serializer):
    """What became of one record; a phone keeps it until it is kept, already here or held."""

    id = serializers.UUIDField(allow_null=True)
    result = serializers.ChoiceField(RESULTS)
    findings = FindingSerializer(many=True)


class ParcelAnswerSerializer(serializers.Serializer):
    parcel = serializers.CharField(allow_blank=True)
    records = AnswerSerializer(many=True)


class PhotoSentSerializer(serializers.Serializer):
    """A photo of a phone; `id` was made there, so that sending it twice adds nothing."""

    id = serializers.UUIDField()
    site = serializers.CharField(max_length=40)
    photo = serializers.FileField()
    what = serializers.CharField(max_length=200, required=False, allow_blank=True)
    taken_at = serializers.DateTimeField(required=False)
    lat = serializers.FloatField(required=False, min_value=-90, max_value=90)
    lon = serializers.FloatField(required=False, min_value=-180, max_value=180)
    accuracy_m = serializers.FloatField(required=False, min_value=0)

    def validate(self, attrs):
        if ("lat" in attrs) != ("lon" in attrs):
            raise serializers.ValidationError({"lat": [_("A position is lat and lon.")]})
        return attrs


class PhotoSerializer(serializers.Serializer):
    id = serializers.UUIDField()
    sha256 = serializers.CharField()
    size = serializers.IntegerField()


class StripSerializer(serializers.Serializer):
    """One strip of a wall; `covered_unseen`, once true, stays true."""

    id = serializers.IntegerField()
    site = serializers.CharField(source="structure.site.code")
    number = serializers.IntegerField()
    from_m = serializers.FloatField()
    to_m = serializers.FloatField()
    stands = serializers.CharField()
    drawn_rock_m = serializers.FloatField(allow_null=True)
    drawn_rock_low_m = serializers.FloatField(allow_null=True)
    opened_on = serializers.DateField(allow_null=True)
    covered_on = serializers.DateField(allow_null=True)
    covered_unseen = serializers.BooleanField()
    unseen_what = serializers.CharField()
    halted = serializers.BooleanField()


class StripFilter(filters.FilterSet):
    site = filters.CharFilter("structure__site__code")
    number = filters.NumberFilter("number")
    covered_unseen = filters.BooleanFilter("covered_unseen")
    halted = filters.BooleanFilter("halted")
    open = filters.BooleanFilter(method="standing_open")

    def standing_open(self, found, name, wanted):
        standing = {"opened_on__isnull": False, "covered_on__isnull": True}
        return found.filter(**standing) if wanted else found.exclude(**standing)


class Strips(Collection):
    serializer_class = StripSerializer
    filterset_class = StripFilter
    ordering_fields = ("structure__site__code", "number", "opened_on", "covered_on")
    ordering = ("structure__site__code", "number")
    lookup_value_regex = "[0-9]+"
    query = staticmethod(visible_strips)


class Parcels(OfficeView):
    @extend_schema(
        summary="Send what a phone wrote down",
        description=(
            "Each record is taken by itself and answered by itself, in the order of the parcel; "
            "sent again it is `already here`, with other values it is `held` and both are kept. "
            "Photos go first, to `photos`. The fields of a kind are those of its form; an unknown "
            "one is refused."
        ),
        parameters=[KEY],
        request={"application/json": PARCEL},
        responses={200: ParcelAnswerSerializer, 409: PROBLEM, 422: PROBLEM},
        examples=[ONE_LOOK],
    )
    def post(self, request):
        def write():
            name, answers = take_parcel(document=request.data, by=request.user)
            told = [
                {"id": one.id, "result": one.result, "findings": as_documents(one.findings)}
                for one in answers
            ]
            return Answered(HTTPStatus.OK, {"parcel": name, "records": told})

        return once(request, write)


class Photos(OfficeView):
    parser_classes = (MultiPartParser,)

    @extend_schema(
        summary="Send a photo",
        description="JPEG, PNG, WebP or PDF; a place inside the file is dropped.",
        parameters=[KEY],
        request={"multipart/form-data": PhotoSentSerializer},
        responses={201: PhotoSerializer, 403: PROBLEM, 404: PROBLEM, 409: PROBLEM, 422: PROBLEM},
    )
    def post(self, request):
        sent = PhotoSentSerializer(data=request.data)
        sent.is_valid(raise_exception=True)
        said = sent.validated_data
        site = get_object_or_404(visible_sites(request.user), code=said["site"])
        insist(request.user, Act.FILL_IN_PAPER, site)
        place = None
        if "lat" in said:
            place = Position(said["lat"], said["lon"], said.get("accuracy_m"))

        def write():
            said["photo"].seek(0)
            kept = keep_photo(
                site_id=site.pk,
                photo_id=said["id"],
                data=said["photo"].read(),
                by=request.user,
                what=said.get("what", ""),
                taken_at=said.get("taken_at"),
                position=place,
            )
            return Answered(HTTPStatus.CREATED, PhotoSerializer(kept).data)

        return once(request, write)
