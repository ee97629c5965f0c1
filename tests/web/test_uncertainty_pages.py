"""Stating an uncertainty in the browser: who may, what is kept when it is refused, and how it ends."""

from __future__ import annotations

import pytest

from qa_tracker.records.models import StatedUncertainty
from tests import builders

pytestmark = pytest.mark.django_db
LIST, NEW = "/criteria/uncertainties/", "/criteria/uncertainties/new/"
GIVEN = {
    "measurand": "reverberation_depth", "place": "", "kind": "expanded", "entered": "0.6", "coverage_factor": "2",
    "repeats": "", "rule": "zones", "source": "Certificate 7",
}  # fmt: skip


@pytest.fixture
def ward():
    return builders.ward()


def test_physicist_states_an_uncertainty_and_finds_it_in_the_list(ward):
    browser = builders.signed_in(ward.physicist)
    assert "Nothing is stated yet" in browser.get(LIST).content.decode()
    assert browser.post(NEW, GIVEN).status_code == 302
    page = browser.get(LIST).content.decode().replace("\N{NO-BREAK SPACE}", " ")
    for words in ("0.6 mm", "k = 2", "Zones", "Certificate 7", "the whole group"):
        assert words in page


def test_page_says_that_the_uncertainty_is_that_of_what_is_judged(ward):
    page = builders.signed_in(ward.physicist).get(NEW).content.decode()
    assert "where a limit stands on a baseline or on another reading, count theirs in" in page


def test_refused_statement_keeps_what_was_typed(ward):
    browser = builders.signed_in(ward.physicist)
    answer = browser.post(NEW, GIVEN | {"entered": "about half", "source": ""})
    page = answer.content.decode()
    assert answer.status_code == 422
    assert 'value="about half"' in page
    assert "is not a number" in page
    assert "It is not said where the uncertainty comes from" in page


def test_physicist_ends_a_statement_with_a_reason(ward):
    browser = builders.signed_in(ward.physicist)
    browser.post(NEW, GIVEN)
    row = StatedUncertainty.objects.get()
    assert browser.post(f"{LIST}{row.uid}/end/", {"reason": "New object"}).status_code == 302
    assert "ended on" in browser.get(LIST).content.decode()
    assert browser.post(f"{LIST}{row.uid}/end/", {"reason": "Again"}).status_code == 404


def test_technician_reads_and_may_not_state(ward):
    browser = builders.signed_in(ward.technician)
    page = browser.get(LIST)
    assert (page.status_code, "State an uncertainty" in page.content.decode()) == (200, False)
    assert browser.post(NEW, GIVEN).status_code == 403


def test_statement_of_another_site_is_not_there(ward):
    builders.signed_in(ward.physicist).post(NEW, GIVEN | {"place": str(ward.site.uid)})
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    browser = builders.signed_in(builders.person(ward.admin, "rao", "physicist", other))
    row = StatedUncertainty.objects.get()
    assert "Certificate 7" not in browser.get(LIST).content.decode()
    assert browser.get(f"{LIST}{row.uid}/end/").status_code == 404
