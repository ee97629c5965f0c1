"""The register and a device's page: who sees what, now and on a past day."""

from __future__ import annotations

import datetime as dt
import re
import uuid

import pytest
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.services.devices import Place
from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


def test_register_when_asked_shows_scanners_with_probes_beneath(ward):
    page = builders.signed_in(ward.technician).get("/register/").content.decode()
    assert page.index("OG-70 70-1188") < page.index('class="beneath"') < page.index("C5-2207")


def test_register_when_a_device_has_no_plan_names_it(ward):
    page = builders.signed_in(ward.physicist).get("/register/").content.decode()
    assert "1 device has no plan" in page


@pytest.mark.parametrize(
    ("query", "shown", "hidden"),
    [
        pytest.param("kind=probe", "C5-2207", "70-1188</a>", id="kind"),
        pytest.param("text=70-11", "70-1188", "C5-2207", id="text"),
        pytest.param("state=quarantined", "No device fits", "C5-2207</a>", id="state"),
        pytest.param("site=XX", "No device fits", "C5-2207</a>", id="unknown site"),
    ],
)
def test_register_when_filtered_shows_what_fits(ward, query, shown, hidden):
    page = builders.signed_in(ward.technician).get(f"/register/?{query}").content.decode()
    page = page[page.index('class="filters"') :]
    assert shown in page
    assert hidden not in page


def test_device_when_of_another_site_is_as_one_that_is_not_there(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "hywel", "technician", other)
    client = builders.signed_in(stranger)
    found, random = (client.get(reverse("device", args=[uid])) for uid in (ward.probe.uid, uuid.uuid4()))
    assert (found.status_code, random.status_code) == (404, 404)
    assert without_token(found) == without_token(random)


def without_token(answer):
    return re.sub(r'name="csrfmiddlewaretoken" value="\w+"', "", answer.content.decode())


def test_device_when_opened_shows_its_plan_and_next_check(ward):
    page = builders.signed_in(ward.technician).get(reverse("device", args=[ward.probe.uid])).content.decode()
    assert "Every month, by the calendar" in page
    assert "Due today" in page


def test_device_when_asked_for_a_day_before_it_was_registered_is_not_there(ward):
    day = (now() - dt.timedelta(days=3)).date().isoformat()
    answer = builders.signed_in(ward.physicist).get(
        reverse("device", args=[ward.probe.uid]) + f"?as_of={day}"
    )
    assert answer.status_code == 404


def test_device_when_asked_for_no_day_says_so_and_shows_now(ward):
    address = reverse("device", args=[ward.probe.uid]) + "?as_of=yesterday"
    answer = builders.signed_in(ward.physicist).get(address)
    assert answer.status_code == 200
    assert "“yesterday” is no day" in answer.content.decode()


def test_device_after_a_check_draws_its_readings(ward):
    builders.submitted(ward.check, ward.technician)
    page = builders.signed_in(ward.physicist).get(reverse("device", args=[ward.probe.uid])).content.decode()
    assert "Readings over time" in page
    assert page.count('class="figure"') >= 3


def test_probe_when_moved_away_shows_its_former_site_what_was_until_then(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    client = builders.signed_in(ward.physicist)
    client.post(
        reverse("device-move", args=[ward.probe.uid]), {"place": f"site {other.uid}", "reason": "loan"}
    )
    page = builders.signed_in(ward.technician).get(reverse("device", args=[ward.probe.uid]))
    assert page.status_code == 200
    assert "left your site" in page.content.decode()
    assert "Quarantine</a>" not in page.content.decode()


def test_register_of_many_devices_goes_on_by_key(ward, monkeypatch):
    monkeypatch.setattr("qa_tracker.web.views.register.PAGE", 1)
    builders.scanner(ward.physicist, Place(site=ward.site), serial="70-2000")
    client = builders.signed_in(ward.physicist)
    page = client.get("/register/").content.decode()
    after = page.split("after=")[1].split('"')[0]
    assert "70-2000" in client.get(f"/register/?after={after}").content.decode()
