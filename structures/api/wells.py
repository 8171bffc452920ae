"""Wells and the readings that phones and programs send."""

from __future__ import annotations

from http import HTTPStatus
from zoneinfo import ZoneInfo

from django_filters import rest_framework as filters
from drf_spectacular.utils import OpenApiExample, OpenApiResponse, extend_schema
from rest_framework import serializers
from rest_framework.response import Response

from structures.actions.devices import Answered
from structures.actions.readings import take_readings
from structures.actions.refusals import as_documents
from structures.api.serializers import FindingSerializer, Number, ProblemSerializer
from structures.api.viewsets import Collection
from structures.api.writes import KEY, once
from structures.intake.level_records import read_level_records
from structures.queries.districts import visible_districts
from structures.queries.levels import visible_levels
from structures.queries.wells import visible_wells

PROBLEM = OpenApiResponse(ProblemSerializer, "what is wrong, and what to do")
RESULTS = ("kept", "already here", "held", "refused")
RECORD = {
    "type": "object",
    "required": ["well", "read_at"],
    "properties": {
        "id": {"type": "string", "format": "uuid", "description": "made by the sender"},
        "well": {"type": "string"},
        "mark": {
            "type": "string",
            "description": "the measuring point; that of the day if left out",
        },
        "read_at": {"type": "string", "format": "date-time"},
        "state": {
            "enum": [
                *("static", "pumping", "recovering", "not known"),
                *("obstructed", "flowing", "flooded"),
            ]
        },
        "dry": {"type": ["boolean", "string"]},
        "depth_m": {"type": ["number", "string", "null"], "description": "below the mark"},
        "again_m": {"type": ["number", "null"], "description": "the second reading"},
        "hold_m": {"type": ["number", "null"], "description": "tape held at the mark"},
        "wet_m": {"type": ["number", "null"], "description": "length of tape that came up wet"},
        "tape_below_mark_m": {"type": ["number", "null"]},
        "read_by": {"type": "string"},
        "note": {"type": "string"},
        "photo": {"type": "string", "format": "uuid"},
    },
}
ONE_READING = OpenApiExample(
    "One reading",
    {
        "id": "f50f3e6d-7fff-4eef-a17f-06cb85f0b1fc",
        "well": "OD-W01",
        "mark": "M1",
        "read_at": "2027-04-05T06:30+05:30",
        "state": "static",
        "dry": False,
        "depth_m": 8.31,
        "read_by": "field-1",
    },
    request_only=True,
)


class MarkSerializer(serializers.Serializer):
    mark = serializers.CharField()
    what = serializers.CharField()
    level_m = Number(allow_null=True)
    height_above_ground_m = Number(allow_null=True)
    valid_from = serializers.DateField()
    valid_to = serializers.DateField(allow_null=True)


class WellSerializer(serializers.Serializer):
    code = serializers.CharField()
    name = serializers.CharField()
    other_names = serializers.ListField(child=serializers.CharField())
    watershed = serializers.CharField(source="watershed.code")
    site = serializers.CharField(source="site.code", default=None, allow_null=True)
    role = serializers.CharField()
    kind = serializers.CharField()
    lat = Number(allow_null=True)
    lon = Number(allow_null=True)
    diameter_m = Number(allow_null=True)
    ground_level_m = Number(allow_null=True)
    bottom_below_ground_m = Number(allow_null=True)
    bottom_sounded_on = serializers.DateField(allow_null=True)
    upstream_of_wall_m = Number(allow_null=True)
    last_read_at = serializers.DateTimeField(allow_null=True)
    waiting = serializers.IntegerField(help_text="readings that wait for a decision")
    marks = MarkSerializer(many=True, source="marks.all")


class LevelSerializer(serializers.Serializer):
    """A reading as it was sent, with what counts of it; what is not known is null, never zero."""

    id = serializers.UUIDField()
    well = serializers.CharField(source="well.code")
    mark = serializers.CharField(source="mark.mark", default=None, allow_null=True)
    read_at = serializers.DateTimeField()
    state = serializers.CharField()
    dry = serializers.BooleanField()
    depth_m = Number(allow_null=True)
    level_m = Number(allow_null=True, help_text="as it counts; of a dry well that of its bottom")
    standing = serializers.CharField(help_text="taken, repaired, held or left out")
    rules = serializers.ListField(child=serializers.CharField())
    read_by = serializers.CharField()
    note = serializers.CharField()


class LevelAnswerSerializer(serializers.Serializer):
    """What became of one record."""

    id = serializers.UUIDField(allow_null=True)
    result = serializers.ChoiceField(RESULTS)
    findings = FindingSerializer(many=True)


class WellFilter(filters.FilterSet):
    code = filters.CharFilter("code")
    role = filters.CharFilter("role")
    watershed = filters.CharFilter("watershed__code")
    site = filters.CharFilter("site__code")


class LevelFilter(filters.FilterSet):
    well = filters.CharFilter("well__code")
    site = filters.CharFilter("well__site__code")
    standing = filters.CharFilter("standing")
    state = filters.CharFilter("state")
    dry = filters.BooleanFilter("dry")
    read_after = filters.IsoDateTimeFilter("read_at", "gte")
    read_before = filters.IsoDateTimeFilter("read_at", "lt")


class Wells(Collection):
    serializer_class = WellSerializer
    filterset_class = WellFilter
    ordering_fields = ("code", "role", "upstream_of_wall_m", "last_read_at")
    ordering = ("code",)
    lookup_field = "code"
    lookup_value_regex = "[^/]+"

    def query(self, user):
        return visible_wells(user).prefetch_related("marks")


class Levels(Collection):
    serializer_class = LevelSerializer
    filterset_class = LevelFilter
    ordering_fields = ("read_at", "well__code", "level_m")
    ordering = ("-read_at", "id")
    lookup_value_regex = "[0-9a-f-]{36}"
    query = staticmethod(visible_levels)

    @extend_schema(
        summary="Send readings",
        description=(
            "One reading or a list. Each is answered by itself, in the order of the list: `kept`, "
            "`already here` when it came before, `held` when an engineer has to decide, `refused` "
            "when it cannot be kept. Sending twice is harmless."
        ),
        parameters=[KEY],
        request={"application/json": {"oneOf": [RECORD, {"type": "array", "items": RECORD}]}},
        responses={200: LevelAnswerSerializer(many=True), 409: PROBLEM, 422: PROBLEM},
        examples=[ONE_READING],
        filters=False,
    )
    def create(self, request):
        district = visible_districts(request.user).order_by("code").first()
        zone = ZoneInfo("UTC" if district is None else district.zone)
        records = read_level_records(request.data, zone)
        alone = isinstance(request.data, dict)

        def write():
            answers = [
                {"id": one.id, "result": one.result, "findings": as_documents(one.findings)}
                for one in take_readings(records=records, by=request.user)
            ]
            return Answered(HTTPStatus.OK, answers[0] if alone else answers)

        # The identifier of a reading names the reading, not the sending: sent with other values it
        # is no conflict but a doubt, so only the header names a write here.
        if alone and not request.headers.get("Idempotency-Key", "").strip():
            answered = write()
            return Response(answered.body, status=answered.status)
        return once(request, write)
