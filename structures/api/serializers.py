"""Records of sites and surveys as the API tells them, under the names of the tables."""

from __future__ import annotations

import math
from typing import Any

from drf_spectacular.utils import extend_schema_field
from rest_framework import serializers

from structures.life.stages import STAGES
from structures.queries.runs import site_of_run
from structures.queries.survey_reading import reading_of

GEOMETRY = {
    "type": ["object", "null"],
    "description": "GeoJSON polygon (RFC 7946), WGS84, longitude first",
    "properties": {
        "type": {"enum": ["Polygon", "MultiPolygon"]},
        "coordinates": {"type": "array", "items": {}},
    },
}


@extend_schema_field({"type": "number"})
class Number(serializers.FloatField):
    """A number that is one: neither text nor infinite."""

    def to_internal_value(self, data):
        if isinstance(data, bool) or not isinstance(data, int | float) or not math.isfinite(data):
            self.fail("invalid")
        return super().to_internal_value(data)


class FindingSerializer(serializers.Serializer):
    """One thing found in what was handed in; `block` keeps it out, `hold` waits for a decision."""

    where = serializers.CharField()
    field = serializers.CharField()
    what = serializers.CharField()
    remedy = serializers.CharField()
    level = serializers.ChoiceField(["block", "hold", "warn", "note"])
    rule = serializers.CharField()


class ProblemSerializer(serializers.Serializer):
    """What went wrong (RFC 9457), with every finding where something was handed in."""

    type = serializers.CharField()
    title = serializers.CharField()
    status = serializers.IntegerField()
    detail = serializers.CharField()
    instance = serializers.CharField()
    findings = FindingSerializer(many=True)


class WatershedSerializer(serializers.Serializer):
    code = serializers.CharField()
    name = serializers.CharField()
    district = serializers.CharField(source="district.code")
    area_km2 = serializers.FloatField(allow_null=True)
    outline = extend_schema_field(GEOMETRY)(serializers.JSONField)()
    streams = serializers.SerializerMethodField()
    courses = serializers.SerializerMethodField(
        help_text="stream to its course, a GeoJSON line, where one was handed in"
    )
    gauges = serializers.SerializerMethodField(help_text="rain gauges with their weights")
    site_count = serializers.IntegerField(help_text="sites that are not closed off")
    findings = FindingSerializer(many=True)

    def get_streams(self, watershed) -> list[str]:
        return [one.name for one in watershed.streams.all()]

    def get_courses(self, watershed) -> dict[str, Any]:
        return {one.name: one.course for one in watershed.streams.all() if one.course}

    def get_gauges(self, watershed) -> dict[str, float]:
        return {one.gauge: one.weight for one in watershed.gauges.all()}


class SiteSerializer(serializers.Serializer):
    code = serializers.CharField()
    name = serializers.CharField()
    district = serializers.CharField(source="watershed.district.code")
    watershed = serializers.CharField(source="watershed.code")
    stream = serializers.CharField(source="stream.name", default=None, allow_null=True)
    stage = serializers.ChoiceField(list(STAGES), source="structure.stage")
    lat = serializers.FloatField(help_text="degrees, WGS84")
    lon = serializers.FloatField(help_text="degrees, WGS84")
    accuracy_m = serializers.FloatField(allow_null=True)
    benchmark = serializers.CharField()
    benchmark_level_m = serializers.FloatField(allow_null=True)
    bed_level_m = serializers.FloatField(allow_null=True)
    bed_slope = serializers.FloatField(allow_null=True)
    catchment_km2 = serializers.FloatField(allow_null=True)
    water_level_m = serializers.FloatField(allow_null=True)
    village_upstream = serializers.CharField()
    village_downstream = serializers.CharField()
    downstream_users = serializers.CharField(help_text='blank: not answered; "none found": nobody')
    newest_survey = serializers.IntegerField(source="newest_survey_id", allow_null=True)
    newest_survey_version = serializers.IntegerField(allow_null=True)
    findings = FindingSerializer(many=True)
    revision = serializers.IntegerField(help_text="counts the edits; the ETag of the site")
    changed_by = serializers.CharField(source="changed_by.username")
    changed_at = serializers.DateTimeField()


class SiteEditSerializer(serializers.Serializer):
    """What of a site may be changed; what is left out stays."""

    name = serializers.CharField(required=False, allow_blank=True)
    lat = Number(required=False)
    lon = Number(required=False)
    accuracy_m = Number(required=False, allow_null=True)
    benchmark = serializers.CharField(required=False, allow_blank=True)
    benchmark_level_m = Number(required=False, allow_null=True)
    bed_level_m = Number(required=False, allow_null=True)
    bed_slope = Number(required=False, allow_null=True)
    catchment_km2 = Number(required=False, allow_null=True)
    water_level_m = Number(required=False, allow_null=True)
    village_upstream = serializers.CharField(required=False, allow_blank=True)
    village_downstream = serializers.CharField(required=False, allow_blank=True)
    downstream_users = serializers.CharField(required=False, allow_blank=True)
    id = serializers.UUIDField(
        required=False, help_text="the write's own name, see Idempotency-Key"
    )

    def validate(self, attrs):
        unknown = sorted(set(self.initial_data) - set(self.fields))
        if unknown:
            raise serializers.ValidationError(
                {key: ["There is no such field to set here."] for key in unknown}
            )
        attrs.pop("id", None)
        return attrs


class SiteNewSerializer(SiteEditSerializer):
    """A site as it is entered."""

    code = serializers.CharField()
    watershed = serializers.CharField(help_text="code of the watershed")
    stream = serializers.CharField(required=False)
    lat = Number()
    lon = Number()


class NoteSerializer(serializers.Serializer):
    """What came along that a survey has no place for."""

    where = serializers.CharField()
    key = serializers.CharField()
    value = serializers.JSONField()


class SurveySerializer(serializers.Serializer):
    id = serializers.IntegerField()
    site = serializers.CharField(source="site.code")
    version = serializers.IntegerField()
    digest = serializers.CharField(help_text="SHA-256 of the pack in its canonical form")
    left_toe_m = serializers.FloatField()
    right_toe_m = serializers.FloatField()
    upload = serializers.IntegerField(source="upload_id")
    file = serializers.CharField(source="upload.name")
    by = serializers.CharField(source="by.username")
    at = serializers.DateTimeField()
    findings = FindingSerializer(many=True, help_text="what is doubted")


class ReadSerializer(serializers.Serializer):
    """How many of each kind were read."""

    ground = serializers.IntegerField()
    rock = serializers.IntegerField()
    probes = serializers.IntegerField()
    soundings = serializers.IntegerField()
    refraction = serializers.IntegerField()
    rock_line = serializers.IntegerField()


def counts(document: dict) -> dict[str, int]:
    """Count the records of a pack, kind by kind."""
    return {key: len(document.get(key) or ()) for key in ReadSerializer().fields}


class SurveyWholeSerializer(SurveySerializer):
    read = serializers.SerializerMethodField()
    notes = serializers.ListField(child=serializers.DictField())
    pack = serializers.DictField(help_text="the survey pack in its canonical form")
    reading = serializers.SerializerMethodField(
        help_text="the run that reads soundings, rock line and wall, without a price"
    )

    @extend_schema_field(ReadSerializer)
    def get_read(self, survey):
        return counts(survey.pack)

    def get_reading(self, survey) -> str | None:
        run = reading_of(survey)
        return None if run is None else str(run.pk)


class SurveyPreviewSerializer(serializers.Serializer):
    """A survey as it would be kept."""

    site = serializers.CharField(source="pack.site.code")
    preview = serializers.BooleanField(default=True)
    digest = serializers.CharField()
    read = serializers.SerializerMethodField()
    findings = FindingSerializer(many=True)
    pack = serializers.DictField(source="document")

    @extend_schema_field(ReadSerializer)
    def get_read(self, read):
        return counts(read.document)


class SoundingReadingSerializer(serializers.Serializer):
    ab2_m = serializers.FloatField()
    mn2_m = serializers.FloatField()
    apparent_resistivity_ohm_m = serializers.FloatField()
    sd_percent = serializers.FloatField()


class SoundingSerializer(serializers.Serializer):
    id = serializers.IntegerField()
    site = serializers.CharField(source="survey.site.code")
    survey = serializers.IntegerField(source="survey_id")
    survey_version = serializers.IntegerField(source="survey.version")
    order = serializers.IntegerField()
    label = serializers.CharField()
    offset_m = serializers.FloatField()
    array = serializers.ChoiceField(["schlumberger", "wenner"])
    readings = SoundingReadingSerializer(many=True)


class DesignSerializer(serializers.Serializer):
    """A wall as it was drawn; `wall` holds what differs from the defaults."""

    id = serializers.IntegerField()
    version = serializers.IntegerField()
    survey = serializers.IntegerField(source="survey_id")
    rock_line = serializers.IntegerField(source="rock_line.version", default=None, allow_null=True)
    wall = serializers.DictField()
    digest = serializers.CharField()
    frozen = serializers.BooleanField()
    by = serializers.CharField(source="by.username")
    at = serializers.DateTimeField()


class StructureSerializer(serializers.Serializer):
    site = serializers.CharField(source="site.code")
    name = serializers.CharField(source="site.name")
    watershed = serializers.CharField(source="site.watershed.code")
    district = serializers.CharField(source="site.watershed.district.code")
    stage = serializers.ChoiceField(list(STAGES))
    since = serializers.DateField()
    designs = DesignSerializer(many=True)


class UploadSerializer(serializers.Serializer):
    id = serializers.IntegerField()
    kind = serializers.CharField()
    name = serializers.CharField()
    size = serializers.IntegerField(help_text="bytes")
    sha256 = serializers.CharField()
    district = serializers.CharField(source="district.code")
    watershed = serializers.CharField(source="watershed.code", default=None, allow_null=True)
    by = serializers.CharField(source="by.username")
    at = serializers.DateTimeField()
    outcome = serializers.ChoiceField(["received", "kept", "refused"])
    rows_in = serializers.IntegerField(allow_null=True)
    rows_kept = serializers.IntegerField(allow_null=True)
    rows_held = serializers.IntegerField(allow_null=True)
    rows_refused = serializers.IntegerField(allow_null=True)
    findings = FindingSerializer(many=True)


class RunSerializer(serializers.Serializer):
    id = serializers.UUIDField()
    kind = serializers.CharField()
    site = serializers.SerializerMethodField()
    state = serializers.ChoiceField(["queued", "running", "done", "failed", "cancelled"])
    progress = serializers.FloatField(help_text="share done, 0 to 1")
    message = serializers.CharField()
    method = serializers.CharField(source="version")
    asked_by = serializers.CharField(source="asked_by.username", default=None, allow_null=True)
    created_at = serializers.DateTimeField()
    started_at = serializers.DateTimeField(allow_null=True)
    finished_at = serializers.DateTimeField(allow_null=True)

    def get_site(self, run) -> str | None:
        return site_of_run(run)


class RunWholeSerializer(RunSerializer):
    result = serializers.DictField(
        allow_null=True,
        help_text=(
            "At the end: the appraisal, under the keys of `appraise --json`. Null before, and where "
            "you may not see money."
        ),
    )
