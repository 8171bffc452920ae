"""Sites and watersheds as GeoJSON (RFC 7946): WGS84, longitude first."""

from __future__ import annotations

from typing import Any

from rest_framework.renderers import JSONRenderer


class GeoJSONRenderer(JSONRenderer):
    """Writes what a view answers as a feature, or a page of a list as a collection of features."""

    media_type = "application/geo+json"
    format = "geojson"

    def render(self, data, accepted_media_type=None, renderer_context=None):
        if not renderer_context["response"].exception:
            data = shape(data)
        return super().render(data, accepted_media_type, renderer_context)


def shape(data: dict[str, Any]) -> dict[str, Any]:
    """Give a record as a feature, a page of a list as features beside its place in the list."""
    if "results" not in data:
        return feature(data)
    features = [feature(record) for record in data["results"]]
    places = {key: data[key] for key in ("count", "next", "previous")}
    return {"type": "FeatureCollection", "features": features, **places}


def feature(record: dict[str, Any]) -> dict[str, Any]:
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
