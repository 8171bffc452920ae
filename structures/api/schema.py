"""The schema of the API, and the page that shows it."""

from __future__ import annotations

from typing import Any, Final

from csp.constants import SELF, UNSAFE_INLINE
from csp.decorators import csp_update
from django.utils.decorators import method_decorator
from drf_spectacular.renderers import (
    OpenApiJsonRenderer,
    OpenApiJsonRenderer2,
    OpenApiYamlRenderer,
    OpenApiYamlRenderer2,
)
from drf_spectacular.utils import extend_schema
from drf_spectacular.views import SpectacularAPIView, SpectacularSwaggerSplitView
from rest_framework.response import Response
from rest_framework.views import APIView

from structures.api.geojson import GeoJSONRenderer
from structures.api.problems import TYPE
from structures.intake.pack_schema import pack_schema

Document = dict[str, Any]
JSON: Final = "application/json"
PROBLEM: Final = {"$ref": "#/components/schemas/Problem"}
METHODS: Final = ("get", "post", "patch")
FIRST_REFUSAL: Final = 400
GEOMETRY: Final = {
    "type": ["object", "null"],
    "required": ["type", "coordinates"],
    "properties": {
        "type": {"enum": ["Point", "Polygon", "MultiPolygon"]},
        "coordinates": {"type": "array", "items": {}},
    },
}
FEATURE: Final = {
    "type": "object",
    "required": ["type", "id", "geometry", "properties"],
    "properties": {
        "type": {"const": "Feature"},
        "id": {"type": "string"},
        "geometry": GEOMETRY,
        "properties": {"type": "object"},
    },
}
COLLECTION: Final = {
    "type": "object",
    "required": ["type", "features"],
    "properties": {
        "type": {"const": "FeatureCollection"},
        "features": {"type": "array", "items": {"$ref": "#/components/schemas/Feature"}},
        "count": {"type": "integer"},
        "next": {"type": ["string", "null"]},
        "previous": {"type": ["string", "null"]},
    },
}


def tell_media_types(result: Document, generator, request, public) -> Document:
    """Say of each answer in what it is written: problems and GeoJSON have types of their own."""
    schemas = result["components"]["schemas"]
    schemas |= {"Feature": FEATURE, "FeatureCollection": COLLECTION}
    for path in result["paths"].values():
        for method in METHODS:
            if method in path:
                _tell_answers(path[method]["responses"])
    return result


def _tell_answers(answers: Document) -> None:
    for status, answer in answers.items():
        content = answer.get("content", {})
        if int(status) >= FIRST_REFUSAL:
            answer["content"] = {TYPE: {"schema": PROBLEM, **content.get(JSON, {})}}
        elif GeoJSONRenderer.media_type in content:
            listed = "Paginated" in content[JSON]["schema"]["$ref"]
            name = "FeatureCollection" if listed else "Feature"
            shape = {"$ref": f"#/components/schemas/{name}"}
            content[GeoJSONRenderer.media_type] = {"schema": shape}
    words = "what is wrong, and what to do"
    answers["default"] = {"description": words, "content": {TYPE: {"schema": PROBLEM}}}


class Schema(SpectacularAPIView):
    """JSON unless YAML is asked for."""

    renderer_classes = (
        OpenApiJsonRenderer,
        OpenApiJsonRenderer2,
        OpenApiYamlRenderer,
        OpenApiYamlRenderer2,
    )


# The page's own program writes styles into the page: only here, and styles only.
@method_decorator(csp_update({"style-src": [SELF, UNSAFE_INLINE]}), name="dispatch")
class Docs(SpectacularSwaggerSplitView):
    url_name = "schema"


class PackSchema(APIView):
    """The JSON Schema of a survey pack."""

    authentication_classes = ()
    permission_classes = ()

    @extend_schema(
        operation_id="survey_pack_schema",
        summary="JSON Schema of a survey pack",
        responses={200: dict},
        auth=[],
    )
    def get(self, request):
        return Response(pack_schema())
