"""Sites and watersheds as GeoJSON (RFC 7946): WGS84, longitude first."""

from __future__ import annotations

from typing import Any

from rest_framework.renderers import JSONRenderer
from rest_framework.utils.serializer_helpers import ReturnDict


class GeoJSONRenderer(JSONRenderer):
    """Writes what a view answers as a feature, or a page of a list as a collection of features."""

    media_type = "application/geo+json"
    format = "geojson"

    def render(self, data, accepted_media_type=None, renderer_context=None):
        response = renderer_context["response"]
        if not response.exception and data is not None:
            data = collection(data) if "results" in data else feature(data)
        return super().render(data, accepted_media_type, renderer_context)


def collection(page: dict[str, Any]) -> dict[str, Any]:
    """Give a page of a list as features; where in the list it stands goes beside them."""
    features = [feature(record) for record in page["results"]]
    places = {key: page[key] for key in ("count", "next", "previous")}
    return {"type": "FeatureCollection", "features": features, **places}


def feature(record: ReturnDict | dict[str, Any]) -> dict[str, Any]:
    """Give a site as a point, a watershed as its outline."""
    properties = dict(record)
    if "outline" in properties:
        geometry = properties.pop("outline")
    else:
        place = [properties.pop("lon"), properties.pop("lat")]
        geometry = {"type": "Point", "coordinates": place}
    return {
        "type": "Feature",
        "id": properties["code"],
        "geometry": geometry,
        "properties": properties,
    }
