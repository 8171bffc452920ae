"""Examples in the schema: a body as it is sent, an answer as it is given."""

from __future__ import annotations

from typing import Final

from drf_spectacular.utils import OpenApiExample

from structures.intake.pack_schema import pack_schema

FILE: Final = {"type": "string", "format": "binary"}
FORM: Final = {"type": "object", "required": ["file"], "properties": {"file": FILE}}
SURVEY_BODIES: Final = {
    "application/json": {
        key: part for key, part in pack_schema().items() if key not in ("$schema", "$id")
    },
    "multipart/form-data": FORM,
    "application/zip": FILE,
    "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet": FILE,
}
OUTLINE_BODIES: Final = {
    "application/geo+json": {
        "type": "object",
        "required": ["type", "features"],
        "properties": {
            "type": {"const": "FeatureCollection"},
            "features": {"type": "array", "minItems": 1, "items": {"type": "object"}},
        },
    },
    "multipart/form-data": FORM,
}
OUTLINES: Final = OpenApiExample(
    "One watershed",
    {
        "type": "FeatureCollection",
        "features": [
            {
                "type": "Feature",
                "properties": {"code": "KE", "name": "Keldun", "stream": "Keldun"},
                "geometry": {
                    "type": "Polygon",
                    "coordinates": [
                        [[77.4, 15.7], [77.5, 15.7], [77.5, 15.8], [77.4, 15.8], [77.4, 15.7]]
                    ],
                },
            }
        ],
    },
    request_only=True,
    media_type="application/geo+json",
)
NEW_SITE: Final = OpenApiExample(
    "A ford",
    {
        "code": "KE-04",
        "watershed": "KE",
        "name": "Keldun ford",
        "stream": "Keldun",
        "lat": 15.7521,
        "lon": 77.4462,
        "accuracy_m": 4.0,
        "downstream_users": "two open wells, 400 m",
    },
    request_only=True,
)
SITE_EDIT: Final = OpenApiExample(
    "The bed was levelled",
    {"bed_level_m": 100.1, "benchmark": "nail in the culvert", "benchmark_level_m": 103.2},
    request_only=True,
)
SURVEY: Final = OpenApiExample(
    "A short survey",
    {
        "pack": 1,
        "site": {"code": "KE-04", "name": "Keldun ford", "stream": "Keldun"},
        "ground": [
            {"offset_m": 0.0, "level_m": 103.2, "note": "left bank"},
            {"offset_m": 24.0, "level_m": 100.4},
            {"offset_m": 58.0, "level_m": 100.3},
            {"offset_m": 80.0, "level_m": 103.0},
        ],
        "toes": {"left_m": 24.0, "right_m": 58.0},
        "rock": [{"offset_m": 30.0, "depth_m": 6.1, "method": "bore", "met_rock": True}],
    },
    request_only=True,
    media_type="application/json",
)
REFUSED_SURVEY: Final = OpenApiExample(
    "Toes missing",
    {
        "type": "about:blank",
        "title": "Unprocessable Entity",
        "status": 422,
        "detail": "survey.json, toes.left_m: It is missing. Give the foot of the left slope.",
        "instance": "/api/v1/sites/KE-04/surveys",
        "findings": [
            {
                "where": "survey.json",
                "field": "toes.left_m",
                "what": "It is missing.",
                "remedy": "Give the foot of the left slope.",
                "level": "block",
                "rule": "",
            }
        ],
    },
    response_only=True,
    status_codes=["422"],
)
