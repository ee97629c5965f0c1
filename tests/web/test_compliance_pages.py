"""The page of compliance: counts with percentages, the checks behind them, the file, and a moved due day."""

from __future__ import annotations

import csv
import datetime as dt
import io

import pytest
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.records.models import Check
from qa_tracker.web.presenters.compliance import harmless
from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


def page(person, name="compliance", **asked):
    return builders.signed_in(person).get(reverse(name), asked)


def test_page_gives_counts_with_their_percentage_and_the_moment(ward):
    builders.submitted(ward.check, ward.technician)
    shown = page(ward.physicist).content.decode()
    assert "on time</th>" in shown
    assert '1 <span class="soft">100 %</span>' in shown
    assert "Every figure as known on" in shown


def test_figure_leads_to_the_checks_behind_it(ward):
    builders.submitted(ward.check, ward.technician)
    shown = page(ward.physicist, "compliance-list", figure="on_time").content.decode()
    assert reverse("check", args=[ward.check.uid]) in shown
    assert "There is none" in page(ward.physicist, "compliance-list", figure="missed").content.decode()


@pytest.mark.parametrize(
    "asked",
    [
        {"from": "nonsense"},
        {"until": "0001-01-01"},
        {"site": "??"},
        {"device": "x"},
        {"by": "moon"},
        {"as_of": "x"},
    ],
)
def test_page_copes_with_what_was_never_meant_to_be_asked(ward, asked):
    assert page(ward.physicist, **asked).status_code == 200


def test_file_holds_the_same_figures_and_no_formula(ward):
    builders.submitted(ward.check, ward.technician)
    answer = page(ward.physicist, "compliance-csv", by="device")
    rows = list(csv.DictReader(io.StringIO(answer.content.decode())))
    assert [(row["owed"], row["on_time"], row["percent_on_time"]) for row in rows] == [("1", "1", "100")]
    assert answer.headers["Content-Disposition"].startswith("attachment")
    assert harmless("=cmd()") == "'=cmd()"


def test_another_sites_figures_are_not_shown(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "kb-lead", "lead", other)
    assert "No check that fits" in page(stranger).content.decode()


def test_due_day_is_moved_from_the_checks_page_and_told_there(ward):
    to_on = dt.datetime.now(builders.LONDON).date() + dt.timedelta(days=2)
    browser = builders.signed_in(ward.physicist)
    address = reverse("check-move", args=[ward.check.uid])
    assert "Any day from" in browser.get(address).content.decode()
    answer = browser.post(address, {"to_on": to_on.isoformat(), "reason": "Theatre list is full"})
    assert answer.status_code == 302
    shown = browser.get(reverse("check", args=[ward.check.uid])).content.decode()
    assert "by <bdi>Maren Oduya</bdi>" in shown
    assert "Theatre list is full" in shown
    assert Check.objects.get(pk=ward.check.pk).due_on == to_on


def test_moving_outside_the_window_is_refused_beside_the_day(ward):
    address = reverse("check-move", args=[ward.check.uid])
    far = (now() + dt.timedelta(days=90)).date().isoformat()
    answer = builders.signed_in(ward.physicist).post(address, {"to_on": far, "reason": "x"})
    assert answer.status_code == 422
    assert "inside its window only" in answer.content.decode()


def test_technician_is_offered_no_move(ward):
    browser = builders.signed_in(ward.technician)
    address = reverse("check-move", args=[ward.check.uid])
    assert address not in browser.get(reverse("check", args=[ward.check.uid])).content.decode()
    assert browser.get(address).status_code == 403
