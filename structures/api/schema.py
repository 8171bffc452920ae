"""The schema of the API, and the page that shows it."""

from __future__ import annotations

from csp.constants import UNSAFE_INLINE
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

from structures.intake.pack_schema import pack_schema


class Schema(SpectacularAPIView):
    """JSON unless YAML is asked for."""

    renderer_classes = (
        OpenApiJsonRenderer,
        OpenApiJsonRenderer2,
        OpenApiYamlRenderer,
        OpenApiYamlRenderer2,
    )


# The page's own program writes styles into the page: only here, and styles only.
@method_decorator(csp_update({"style-src": ["'self'", UNSAFE_INLINE]}), name="dispatch")
class Docs(SpectacularSwaggerSplitView):
    url_name = "schema"


class PackSchema(APIView):
    """The JSON Schema of a survey pack."""

    authentication_classes = ()
    permission_classes = ()

    @extend_schema(summary="JSON Schema of a survey pack", responses={200: dict}, auth=[])
    def get(self, request):
        return Response(pack_schema())
