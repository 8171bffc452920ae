"""Courses of streams from the lines of a GeoJSON file: each finds its stream, or says why not."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final, NamedTuple

from shapely.geometry import shape

from structures import access
from structures.access import Act, may
from structures.errors import Finding, Refused
from structures.ground.course import read_course
from structures.models import Stream

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from structures.models import District, User, Watershed

NAME_MOST: Final = 120  # characters of a stream's name
SAY_WHICH: Final = "Give the code of its watershed as watershed."


class Course(NamedTuple):
    """A line of the file; `watershed` is blank where the file leaves it out."""

    watershed: str
    stream: str
    geometry: dict[str, Any]
    where: str


class Basin(NamedTuple):
    """A watershed that may take a course, new or known: its streams, and those with a course."""

    watershed: Watershed
    streams: frozenset[str]
    drawn: frozenset[str] = frozenset()


def course_of(feature: dict[str, Any], properties: dict[str, Any], where: str) -> Course:
    """Read a feature that is a line.

    Raises
    ------
    Refused
        If it names no stream or its line cannot be used.
    """
    stream, watershed = (
        value.strip() if isinstance(value, str) else ""
        for value in (properties.get("stream"), properties.get("watershed"))
    )
    if not stream or len(stream) > NAME_MOST:
        raise Refused(
            "This line names no stream.",
            where=f"{where}, stream",
            remedy=f"Give the stream's name as stream, {NAME_MOST} characters at most.",
        )
    return Course(watershed, stream, read_course(feature.get("geometry"), where), where)


def known_basins(district: District, by: User) -> dict[str, Basin]:
    """Watersheds of the district that the user may change."""
    found = access.watersheds(by).filter(district=district).prefetch_related("streams")
    return {
        one.code: Basin(
            one,
            frozenset(stream.name for stream in one.streams.all()),
            frozenset(stream.name for stream in one.streams.all() if stream.course),
        )
        for one in found
        if may(by, Act.ENTER_WATERSHED, one)
    }


def place_courses(
    courses: Iterable[Course], basins: Mapping[str, Basin]
) -> tuple[list[Course], list[Finding]]:
    """Give each course the code of its watershed; what cannot be placed is found, not kept."""
    placed: list[Course] = []
    findings: list[Finding] = []
    taken: set[tuple[str, str]] = set()
    for course in courses:
        code = course.watershed or _only(course, basins, findings)
        if not code:
            continue
        basin = basins.get(code)
        if basin is None:
            what = f"There is no watershed {code} where you may enter streams."
            findings.append(Finding(course.where, "watershed", what, _choose(basins)))
            continue
        if (code, course.stream) in taken:
            what = f"The course of {course.stream} in {code} stands twice."
            remedy = "Keep one, or send both lines as one MultiLineString."
            findings.append(Finding(course.where, "stream", what, remedy))
            continue
        taken.add((code, course.stream))
        findings += _doubts(course, basin)
        placed.append(course._replace(watershed=code))
    return placed, findings


def keep_courses(courses: Iterable[Course], watersheds: Mapping[str, Watershed]) -> list[Stream]:
    """Keep each course at its stream; a stream not named yet is named."""
    return [
        Stream.objects.update_or_create(
            watershed=watersheds[course.watershed],
            name=course.stream,
            defaults={"course": course.geometry},
        )[0]
        for course in courses
    ]


def _only(course: Course, basins: Mapping[str, Basin], findings: list[Finding]) -> str:
    codes = [code for code, basin in basins.items() if course.stream in basin.streams]
    if len(codes) == 1:
        return codes[0]
    what = (
        f"{course.stream} is a stream of {' and of '.join(codes)}."
        if codes
        else f"No watershed here names a stream {course.stream}."
    )
    findings.append(Finding(course.where, "watershed", what, SAY_WHICH))
    return ""


def _choose(basins: Mapping[str, Basin]) -> str:
    return f"Choose one of: {', '.join(basins)}." if basins else "Enter the watershed first."


def _doubts(course: Course, basin: Basin) -> Iterable[Finding]:
    code, outline = basin.watershed.code, basin.watershed.outline
    if course.stream in basin.drawn:
        what = f"{course.stream} in {code} had a course already; this one takes its place."
        yield Finding(course.where, "stream", what, "", "note")
    if outline is not None and not shape(outline).intersects(shape(course.geometry)):
        what = f"The course of {course.stream} lies outside the outline of {code}."
        yield Finding(course.where, "geometry", what, "Is it another watershed's?", "warn")
