"""A refusal at its field, above the form, or on a page of its own with the way back."""

from __future__ import annotations

from django import forms
from django.http import HttpResponse
from django.test import RequestFactory

from structures.errors import Finding, Refused
from structures.web.refusals import RefusalMiddleware, refuse


class Sheet(forms.Form):
    depth = forms.CharField(required=False)
    reason = forms.CharField(required=False)


def filled(refused):
    form = Sheet({"depth": "3"})
    assert form.is_valid()
    refuse(form, refused)
    return form.errors


def test_a_refusal_stands_at_the_field_it_names():
    errors = filled(Refused("Too deep.", where="depth", remedy="Give less."))
    assert errors == {"depth": ["Too deep. Give less."]}


def test_a_refusal_of_something_else_stands_above_with_its_place():
    errors = filled(Refused("Taken.", where="EX-A", remedy="Take another."))
    assert errors == {"__all__": ["EX-A: Taken. Take another."]}


def test_each_finding_goes_to_its_own_field():
    findings = (
        Finding("site", "reason", "This is missing.", "Write why."),
        Finding("depth", "", "Too deep.", "Give less."),
        Finding("survey.csv line 4", "level_m", "No number.", "Put it right."),
    )
    errors = filled(Refused("3 things are wrong.", findings=findings))
    assert errors == {
        "reason": ["This is missing. Write why."],
        "depth": ["Too deep. Give less."],
        "__all__": ["survey.csv line 4, level_m: No number. Put it right."],
    }


def answer(error, **headers):
    request = RequestFactory().post("/x/", headers=headers)
    return RefusalMiddleware(lambda _: HttpResponse()).process_exception(request, error)


def test_a_refusal_that_no_page_took_up_gets_one_with_the_way_back():
    page = answer(
        Refused("The run is over.", where="run 7", remedy="Ask anew."),
        referer="http://testserver/runs/7/",
    )
    text = page.content.decode()
    assert page.status_code == 422
    for said in ("The run is over.", "run 7", "Ask anew.", 'href="http://testserver/runs/7/"'):
        assert said in text


def test_the_way_back_leads_to_no_other_host():
    page = answer(Refused("No."), referer="https://elsewhere.example/")
    assert "elsewhere" not in page.content.decode()


def test_findings_are_listed_whole_and_escaped():
    findings = (Finding("a.csv", "x", "<b>", "Mend it."), Finding("b.csv", "y", "Two.", "Mend."))
    text = answer(Refused("2 things are wrong.", findings=findings)).content.decode()
    assert "&lt;b&gt;" in text
    assert "b.csv, y" in text


def test_a_single_finding_is_not_said_twice():
    finding = Finding("a.csv line 2", "lat", "95 is no latitude.", "Exchanged?")
    text = answer(Refused("95 is no latitude.", findings=(finding,))).content.decode()
    assert text.count("95 is no latitude.") == 1
    assert "Put this right" in text


def test_other_errors_are_left_to_who_knows_them():
    assert answer(ValueError("a defect")) is None
