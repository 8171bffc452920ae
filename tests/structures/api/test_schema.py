"""The published schema: valid, its examples too, and true of what is answered."""

from __future__ import annotations

import json

import pytest
from drf_spectacular.validation import validate_schema
from jsonschema import Draft202012Validator
from rest_framework.test import APIClient

from structures.actions.surveys import accept_survey
from structures.intake.survey_pack import read_pack_bytes
from structures.models import Role, Strip
from structures.runs.queue import execute
from tests import factories as make
from tests.structures.web.office_money import seed_money
from tests.structures.wells import a_well, readings_of

pytestmark = pytest.mark.django_db
CONTENT = "application/json"
SOUNDING = {
    "offset_m": 30.0,
    "array": "schlumberger",
    "readings": [
        {"ab2_m": ab2, "mn2_m": 0.5, "apparent_resistivity_ohm_m": value}
        for ab2, value in ((1.5, 190.0), (3, 151.0), (5, 99.0), (8, 70.0), (10, 74.0))
    ],
}


@pytest.fixture(scope="module")
def schema():
    answer = APIClient().get("/api/v1/schema")
    assert answer.status_code == 200
    return json.loads(answer.content)


def operations(schema):
    for path, item in schema["paths"].items():
        for method in ("get", "post", "patch"):
            if method in item:
                yield path, method, item[method]


def judge(schema, part):
    """A validator of one part of the document; references are looked up in the whole."""
    return Draft202012Validator({**part, "components": schema["components"]})


def test_the_schema_is_open_api_3_1(schema):
    """Oracle: the published JSON Schema of OpenAPI 3.1, as the schema library ships it."""
    assert schema["openapi"].startswith("3.1")
    validate_schema(schema)


def test_the_schema_comes_as_yaml_where_asked_for():
    answer = APIClient().get("/api/v1/schema", headers={"Accept": "application/yaml"})
    assert answer.content.startswith(b"openapi: 3.1")


def test_every_collection_is_there_and_says_how_it_fails(schema):
    collections = {
        *("watersheds", "sites", "surveys", "soundings", "structures", "uploads", "runs"),
        *("rate-schedules", "estimates", "strips"),
    }
    for name in collections:
        assert {f"/api/v1/{name}", f"/api/v1/{name}/{key(name)}"} <= set(schema["paths"])
    for path, method, operation in operations(schema):
        refused = operation["responses"]["default"]["content"]
        assert list(refused) == ["application/problem+json"], (path, method)


def key(name):
    return "{code}" if name in ("watersheds", "sites", "structures") else "{id}"


def test_every_write_takes_a_key(schema):
    writes = [
        (path, {one["name"] for one in operation.get("parameters", ())})
        for path, method, operation in operations(schema)
        if method != "get" and "sign" not in path and "cancel" not in path
    ]
    assert writes
    assert all("Idempotency-Key" in names for _, names in writes)


def examples(schema):
    for path, method, operation in operations(schema):
        bodies = [operation.get("requestBody", {}), *operation["responses"].values()]
        for body in bodies:
            for media in body.get("content", {}).values():
                for name, example in media.get("examples", {}).items():
                    yield f"{method} {path} {name}", media["schema"], example["value"]


def test_every_example_fits_its_schema(schema):
    found = list(examples(schema))
    assert len(found) >= 7
    for name, part, value in found:
        errors = [error.message for error in judge(schema, part).iter_errors(value)]
        assert errors == [], name


def test_the_example_survey_is_one_that_is_read(schema):
    body = schema["paths"]["/api/v1/sites/{code}/surveys"]["post"]["requestBody"]
    for example in body["content"][CONTENT]["examples"].values():
        data = json.dumps(example["value"]).encode()
        assert read_pack_bytes("survey.json", data).site.code == "KE-04"


def test_answers_fit_their_schema(schema, site, engineer, office):
    pack = make.pack_bytes(soundings=[SOUNDING])
    accept_survey(site_id=site.pk, name="survey.json", data=pack, by=engineer)
    make.a_schedule(site.watershed.district, engineer)
    Strip.objects.create(structure=site.structure, number=1, from_m=8.88, to_m=14.88)
    others = {role: make.a_user() for role in (Role.DISTRICT, Role.PROGRAMME)}
    seed_money("Alder", "61.00", {Role.ENGINEER: engineer, **others}, site)
    readings_of(a_well(site.watershed, engineer, site=site), engineer, count=2)
    asked = office.post(f"/api/v1/sites/{site.code}/estimates", {}, format="json")
    execute(asked.json()["id"])
    for path, method, operation in operations(schema):
        if method != "get" or path.startswith("/api/v1/survey-pack"):
            continue
        place = filled(path, office, site)
        for media, shape in operation["responses"]["200"]["content"].items():
            answer = office.get(place, headers={"Accept": media})
            assert answer.status_code == 200, place
            errors = judge(schema, shape["schema"]).iter_errors(answer.json())
            assert [error.message for error in errors] == [], (place, media)


def filled(path, office, site):
    """An address with what there is: the first record of its collection."""
    collection, _, name = path.partition("/{")
    if name and not name.endswith("}"):
        return path.replace("{code}", site.code)
    if not name:
        return path
    first = office.get(collection).json()["results"][0]
    return f"{collection}/{first['site' if 'structures' in path else name[:-1]]}"


def test_the_schema_of_a_pack_is_that_of_the_reader(office):
    told = APIClient().get("/api/v1/survey-pack.schema.json").json()
    assert told == APIClient().get("/survey-pack.schema.json").json()
    errors = Draft202012Validator(told).iter_errors(json.loads(make.pack_bytes()))
    assert [error.message for error in errors] == []


def test_the_docs_page_needs_no_other_host_and_loosens_styles_only():
    answer = APIClient().get("/api/v1/docs", headers={"Accept": "text/html"})
    page = answer.content.decode()
    assert answer.status_code == 200
    assert "//cdn" not in page
    assert "https://" not in page
    policy = answer["Content-Security-Policy"]
    assert "style-src 'self' 'unsafe-inline'" in policy
    assert "script-src" not in policy
    plain = APIClient().get("/")["Content-Security-Policy"]
    assert "unsafe" not in plain
