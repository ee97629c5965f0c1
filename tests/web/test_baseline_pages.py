"""The pages that set baselines: what each would change is shown first, and only then it is signed."""

from __future__ import annotations

import datetime as dt
import html
import re

import pytest
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.records.models import Aperture, Baseline
from qa_tracker.services import baselines, devices, objects
from qa_tracker.services.baselines import Value
from tests import builders

pytestmark = pytest.mark.django_db
SHOWN = re.compile(r'name="shown_sha256" value="(\w{64})"')


@pytest.fixture
def ward():
    return builders.ward((builders.MONTHLY, "annual-survey"))


@pytest.fixture
def physicist(ward):
    return builders.signed_in(ward.physicist)


def address(ward, name="baseline-set"):
    return reverse(name, args=[ward.probe.uid])


def named(ward, code):
    return f"{code}.{Aperture.objects.get(device=ward.probe).pk}.0"


def text_of(answer):
    return html.unescape(answer.content.decode())


def signed(browser, where, given):
    """Ask, then sign what is shown."""
    shown = browser.post(where, given)
    assert shown.status_code == 200, text_of(shown)
    digest = SHOWN.search(text_of(shown)).group(1)
    return browser.post(where, given | {"shown_sha256": digest, "password": builders.PASSWORD}), text_of(
        shown
    )


def put(ward, code, text, on=None):
    aperture = Aperture.objects.get(device=ward.probe).uid
    return baselines.set_values(
        device=ward.probe.uid, values=[Value(code, text, aperture)], test_object=on and on.uid,
        reason="acceptance", password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )[0]  # fmt: skip


def phantom(ward, serial):
    return objects.register_test_object(
        site=ward.site, name="Phantom", serial=serial, material="hydrogel", nominals={},
        actor=ward.physicist, at=now(),
    )  # fmt: skip


def event(ward):
    devices.record_software(
        scanner=ward.scanner.uid, version="4.3", options="", since_on=now().date(), actor=ward.physicist,
        at=now(),
    )  # fmt: skip


def test_baselines_from_a_check_are_shown_and_then_signed(ward, physicist):
    submission = builders.submitted(ward.check, ward.technician)
    given = {"submission": str(submission.uid), "reason": "Acceptance"}
    answer, page = signed(physicist, address(ward, "baseline-from-check"), given)
    assert "it is the first of its series" in page
    assert answer.status_code == 302
    assert Baseline.objects.count() > 0


def test_value_shows_its_step_and_the_share_used_since_acceptance_before_it_is_signed(ward, physicist):
    put(ward, "penetration", "150")
    given = {named(ward, "penetration"): "145", "reason": "New lens"}
    answer, page = signed(physicist, address(ward), given)
    assert "−5\N{NO-BREAK SPACE}mm, 83.3 % of what the remedial level allows" in page
    assert answer.status_code == 302
    assert Baseline.objects.get(ended_at=None).entered == "145"


def test_change_beyond_the_level_is_said_before_signing(ward, physicist):
    put(ward, "penetration", "150")
    page = text_of(physicist.post(address(ward), {named(ward, "penetration"): "143", "reason": "New lens"}))
    assert "will not show any more" in page
    assert Baseline.objects.count() == 1


def test_nothing_is_set_without_the_password_or_when_something_else_was_shown(ward, physicist):
    given = {named(ward, "penetration"): "150", "reason": "Acceptance"}
    wrong = given | {"shown_sha256": "0" * 64, "password": builders.PASSWORD}
    assert physicist.post(address(ward), wrong).status_code == 422
    digest = SHOWN.search(text_of(physicist.post(address(ward), given))).group(1)
    answer = physicist.post(address(ward), given | {"shown_sha256": digest, "password": "wrong"})
    assert (answer.status_code, digest in text_of(answer)) == (422, True)
    assert not Baseline.objects.exists()


def test_value_that_is_no_number_keeps_what_was_typed(ward, physicist):
    name = named(ward, "reverberation_depth")
    answer = physicist.post(address(ward), {name: "about 12", "reason": "New lens"})
    page = text_of(answer)
    assert (answer.status_code, 'value="about 12"' in page, "New lens" in page) == (422, True, True)


def test_going_back_to_the_values_keeps_them(ward, physicist):
    given = {named(ward, "penetration"): "150", "reason": "Acceptance", "change": "1"}
    page = text_of(physicist.post(address(ward), given))
    assert ('value="150"' in page, "Acceptance" in page) == (True, True)


def test_another_object_asks_for_the_reading_on_the_one_before(ward, physicist):
    put(ward, "penetration", "150", phantom(ward, "A-1"))
    name = named(ward, "penetration")
    given = {name: "146", "reason": "Object replaced", "test_object": str(phantom(ward, "B-2").uid)}
    refused = physicist.post(address(ward), given)
    assert refused.status_code == 422
    assert f'name="overlap.{name}"' in text_of(refused)
    answer, page = signed(physicist, address(ward), given | {f"overlap.{name}": "149"})
    assert "−3\N{NO-BREAK SPACE}mm from the test objects left out" in page
    assert answer.status_code == 302
    shown = text_of(physicist.get(reverse("device", args=[ward.probe.uid])))
    assert "149\N{NO-BREAK SPACE}mm on Phantom A-1" in shown


def test_set_ups_typed_show_their_figures_and_what_is_missing(ward, physicist):
    where = address(ward, "baseline-set-ups") + f"?series={named(ward, 'reverberation_depth')}"
    given = {"typed": "2024-01-05 8.5\n2024-01-07 8.0\n", "reason": "Two days"}
    answer, page = signed(physicist, where, given)
    assert "Standard deviation" in page
    assert "8 more set-ups are needed" in page
    assert answer.status_code == 302
    assert Baseline.objects.get().entered == "8.25"


def test_readings_on_record_can_be_chosen_as_set_ups(ward, physicist):
    submission = builders.submitted(ward.check, ward.technician, reverberation_depth="8.5")
    where = address(ward, "baseline-set-ups") + f"?series={named(ward, 'reverberation_depth')}"
    assert str(submission.uid) in text_of(physicist.get(where))
    given = {"setups": [str(submission.uid)], "typed": "2024-01-05 8.0", "reason": "Two days"}
    answer, _page = signed(physicist, where, given)
    assert answer.status_code == 302
    assert Baseline.objects.get().setups.count() == 2


@pytest.mark.parametrize("typed", ["yesterday 8.5", "8.5", "2024-13-01 8.5"])
def test_line_without_a_day_is_refused(ward, physicist, typed):
    where = address(ward, "baseline-set-ups") + f"?series={named(ward, 'reverberation_depth')}"
    answer = physicist.post(where, {"typed": typed, "reason": "Two days"})
    assert (answer.status_code, typed in text_of(answer)) == (422, True)


def test_page_of_set_ups_begins_with_the_series(ward, physicist):
    page = text_of(physicist.get(address(ward, "baseline-set-ups")))
    assert f"?series={named(ward, 'reverberation_depth')}" in page
    assert physicist.get(address(ward, "baseline-set-ups") + "?series=charm").status_code == 404


def test_software_event_is_listed_on_probe_and_scanner_and_kept_with_a_signature(ward, physicist):
    put(ward, "penetration", "150")
    event(ward)
    for device in (ward.probe, ward.scanner):
        assert "Baselines under review" in text_of(physicist.get(reverse("device", args=[device.uid])))
    row = Baseline.objects.get()
    page = text_of(physicist.get(address(ward, "baseline-review")))
    assert (str(row.uid) in page, "150" in page) == (True, True)
    given = {"baselines": [str(row.uid)], "reason": "Same", "password": builders.PASSWORD}
    assert physicist.post(address(ward, "baseline-review"), given).status_code == 302
    assert Baseline.objects.get(ended_at=None).console_software == "4.3"
    assert "Baselines under review" not in text_of(physicist.get(reverse("device", args=[ward.probe.uid])))


def test_review_without_a_choice_is_refused_beside_its_field(ward, physicist):
    put(ward, "penetration", "150")
    event(ward)
    answer = physicist.post(
        address(ward, "baseline-review"), {"reason": "Same", "password": builders.PASSWORD}
    )
    assert (answer.status_code, "No baseline is chosen" in text_of(answer)) == (422, True)


def test_last_day_is_shown_with_the_baseline(ward, physicist):
    until = now().date() + dt.timedelta(days=400)
    given = {named(ward, "penetration"): "150", "reason": "On loan", "expires_on": until.isoformat()}
    signed(physicist, address(ward), given)
    page = text_of(physicist.get(reverse("device", args=[ward.probe.uid])))
    assert f"runs out on {until.day} {until:%B %Y}" in page
