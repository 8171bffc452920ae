"""Pages of a wall that is done: as built, pipes, hand-over sheet, verdict; words and files."""

from __future__ import annotations

import ast
import gettext
import re
from pathlib import Path

import pytest
from django.urls import reverse

from structures.models import FoundLevel, Role, Strip, Structure, Well
from structures.queries.as_built import as_built_of
from structures.queries.drawn_wall import drawn_wall
from tests.factories import a_user
from tests.trench import DAY, a_trench

pytestmark = pytest.mark.django_db
CATALOGUE = Path("config/locale/hi/LC_MESSAGES")
SHEET = Path("templates/structures/_handover_sheet.html")
DEEPER_M = 0.4


@pytest.fixture
def trench():
    """Every strip covered; all but the last levelled as drawn, the third deeper and unseen."""
    found = a_trench(without=("soundings", "refraction"), stage="covered")
    drawn = drawn_wall(found.structure)
    for strip in found.strips[:-1]:
        inside = [x for x in drawn.offset_m.tolist() if strip.from_m < x < strip.to_m]
        down = DEEPER_M if strip.number == 3 else 0.0
        for x in (strip.from_m, *inside, strip.to_m):
            FoundLevel.objects.create(
                strip=strip,
                offset_m=x,
                level_m=drawn.line_at(x) - down,
                measured_on=DAY,
                by=found.field,
            )
    Strip.objects.filter(structure=found.structure).update(opened_on=DAY, covered_on=DAY)
    Strip.objects.filter(structure=found.structure, number=3).update(
        covered_unseen=True, unseen_what="H3 rock cleaned and seen"
    )
    return found


@pytest.fixture
def office(client, trench):
    client.force_login(trench.engineer)
    return client


def at(name, trench, **more):
    return reverse(f"structures:{name}", kwargs={"code": trench.structure.site.code, **more})


def text(answer):
    return " ".join(re.sub(r"<[^>]+>", " ", answer.content.decode()).split())


def test_the_strip_that_lay_deeper_differs_and_the_last_one_is_not_measured(trench):
    """Oracle: the levels that were put in, strip by strip."""
    sheet = as_built_of(trench.structure)
    rows = {row.strip.number: row for row in sheet.rows}
    assert rows[3].difference_m == pytest.approx(-DEEPER_M, abs=0.0005)  # kept to 1 mm
    last = max(rows)
    assert [one.strip for one in sheet.missed] == [last]
    assert rows[last].difference_m is None
    clay = next(one for one in sheet.quantities if one.item == "clay")
    assert clay.built > clay.drawn_there
    assert clay.drawn > clay.drawn_there


def test_as_built_says_what_nobody_saw_or_measured(office, trench):
    said = text(office.get(at("as-built", trench)))
    last = trench.strips[-1].number
    assert "1 strip was covered unseen, for ever" in said
    assert f"Not measured: strip {last}" in said
    assert f"not measured: strip {last}." in said  # on the drawing
    assert "covered unseen: strip 3 (H3 rock cleaned and seen)." in said


def test_the_drawing_shows_as_drawn_thin_and_as_built_firm(office, trench):
    answer = office.get(at("as-built-file", trench, form="svg"))
    assert answer["Content-Type"] == "image/svg+xml"
    drawing = answer.content.decode()
    assert drawing.count('class="wall-thin"') >= 2
    measured = len(trench.strips) - 1
    assert drawing.count('<polyline class="p5"') == measured


def test_the_sheet_as_built_comes_on_paper(office, trench):
    answer = office.get(at("as-built-file", trench, form="pdf"))
    assert answer.content.startswith(b"%PDF")
    assert office.get(at("as-built-file", trench, form="txt")).status_code == 404


def test_without_levels_the_wall_as_built_is_not_known(client):
    trench = a_trench(without=("soundings", "refraction"), stage="covered")
    client.force_login(trench.engineer)
    assert "the wall as built is not known" in text(client.get(at("as-built", trench)))
    assert client.get(at("as-built-file", trench, form="pdf")).status_code == 404


def test_the_structure_page_says_not_known_and_that_no_pipe_is_entered(office, trench):
    said = text(office.get(at("structure", trench)))
    assert "Does it hold? not known" in said
    assert "Observation pipes none entered" in said


def test_pipes_typed_with_a_decimal_comma_become_wells(office, trench):
    given = {
        "set_on": "2026-04-09",
        "upstream.code": "OD-01-PU",
        "upstream.distance_m": "4,5",
        "upstream.depth_m": "6,2",
        "upstream.ground_level_m": "423,4",
        "upstream.mark_height_m": "0,35",
        "downstream.code": "OD-01-PD",
    }
    answer = office.post(at("pipes", trench), given)
    assert answer.status_code == 302
    pipe = Well.objects.get()
    assert (pipe.code, pipe.upstream_of_wall_m) == ("OD-01-PU", 4.5)
    assert "OD-01-PU" in text(office.get(at("pipes", trench)))


def test_a_pipe_that_cannot_be_is_told_at_its_field(office, trench):
    answer = office.post(
        at("pipes", trench), {"set_on": "2026-04-09", "upstream.distance_m": "four"}
    )
    assert answer.status_code == 422
    assert not Well.objects.exists()
    assert "This is missing." in text(answer)


def test_a_verdict_goes_from_proposal_to_review_on_its_page(client, trench):
    client.force_login(trench.engineer)
    page = at("verdict", trench)
    assert "no comparison computed yet" in text(client.get(page))
    assert client.post(page, {"act": "propose", "word": "holds"}).status_code == 422
    assert client.post(page, {"act": "propose", "word": "not known"}).status_code == 302
    assert "another person must review it" in text(client.get(page))
    programme = a_user(Role.PROGRAMME, trench.structure.site.watershed.district)
    client.force_login(programme)
    answer = client.post(page, {"act": "review", "review-agrees": "yes"})
    assert answer.status_code == 302
    assert f"reviewed by {programme.username}" in text(client.get(page))


def test_nothing_is_judged_before_a_wall_stands(office, trench):
    Structure.objects.filter(pk=trench.structure.pk).update(stage="rising")
    said = text(office.get(at("verdict", trench)))
    assert "no wall stands yet" in said
    assert "Propose it" not in said


@pytest.mark.parametrize("language", ["en", "hi"])
def test_the_village_is_told_that_the_water_is_raw(office, trench, language):
    said = text(office.get(at("handover", trench), {"language": language}))
    assert {"en": "is raw water", "hi": "बिना साफ़ किया हुआ"}[language] in said
    assert ("हस्ताक्षर" in said) == (language == "hi")
    checked = "किसी हिन्दी-भाषी ने नहीं"
    assert (checked in said) == (language == "hi")


def test_every_word_of_the_sheet_is_in_the_catalogue():
    """Oracle: the words in the template itself."""
    with (CATALOGUE / "django.mo").open("rb") as file:
        known = gettext.GNUTranslations(file)._catalog
    source = SHEET.read_text(encoding="utf-8")
    words = re.findall(r'{% translate "([^"]+)" %}', source)
    blocks = re.findall(r"{% blocktranslate[^%]*%}(.+?){% endblocktranslate %}", source, re.DOTALL)
    words += [re.sub(r"{{ (\w+) }}", r"%(\1)s", " ".join(one.split())) for one in blocks]
    assert len(words) > 30
    assert [one for one in words if one not in known] == []


def test_the_compiled_catalogue_is_that_of_the_text():
    text = (CATALOGUE / "django.po").read_text(encoding="utf-8")
    pairs = re.findall(r'^msgid (".*")\nmsgstr (".*")$', text, re.MULTILINE)
    said = {ast.literal_eval(a): ast.literal_eval(b) for a, b in pairs if a != '""'}
    with (CATALOGUE / "django.mo").open("rb") as file:
        known = gettext.GNUTranslations(file)._catalog
    assert {key: value for key, value in known.items() if key} == said
