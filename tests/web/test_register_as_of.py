"""The register and a device as known on a past day, and how many questions a page asks of the database."""

from __future__ import annotations

import datetime as dt

import pytest
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.services import devices, states
from qa_tracker.services.devices import Place
from tests import builders

pytestmark = pytest.mark.django_db
LATER = dt.timedelta(days=3)


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def later(ward, monkeypatch):
    """Three days on, the probe was quarantined and moved to another site a day ago; the pages' clock is there."""
    moment = now() + LATER
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    states.quarantine(
        device=ward.probe.uid, seen="Cracked lens", actor=ward.physicist, at=moment - dt.timedelta(1)
    )
    devices.move(
        device=ward.probe.uid,
        place=Place(site=other),
        reason="lent",
        actor=ward.physicist,
        at=moment - dt.timedelta(hours=20),
    )
    for page in ("register", "device"):
        monkeypatch.setattr(f"qa_tracker.web.views.{page}.now", lambda: moment)
    return builders.signed_in(ward.physicist)


def today():
    return f"?as_of={now().date().isoformat()}"


def test_device_as_of_a_past_day_is_as_it_was_known_then(ward, later):
    page = later.get(reverse("device", args=[ward.probe.uid]) + today()).content.decode()
    assert "As known at the end of" in page
    assert "In use</strong>" in page
    assert "Cracked lens" not in page
    assert "Kestrel Bay" not in page


def test_device_as_of_a_past_day_offers_nothing_to_change(ward, later):
    page = later.get(reverse("device", args=[ward.probe.uid]) + today()).content.decode()
    for name in ("device-quarantine", "device-move", "device-restore", "plan-make", "baseline-set"):
        assert reverse(name, args=[ward.probe.uid]) not in page


def test_device_now_shows_what_came_after(ward, later):
    page = later.get(reverse("device", args=[ward.probe.uid])).content.decode()
    assert "Quarantined</strong>" in page
    assert "Kestrel Bay" in page


def test_register_as_of_a_past_day_has_devices_where_they_were(ward, later):
    page = later.get(reverse("register") + today()).content.decode()
    assert "Kestrel Bay</h2>" not in page
    assert page.index("Aldermoor General</h2>") < page.index("C5-2207")
    assert "Quarantined</div>" not in page


def test_former_site_asking_for_a_later_day_still_sees_up_to_the_move(ward, later):
    page = builders.signed_in(ward.technician).get(reverse("device", args=[ward.probe.uid])).content.decode()
    assert "left your site" in page
    assert "Cracked lens" in page
    assert "Kestrel Bay" not in page


def test_register_of_more_devices_asks_the_database_no_more_often(ward, django_assert_max_num_queries):
    client = builders.signed_in(ward.physicist)
    for number in range(4):
        console = builders.scanner(ward.physicist, Place(site=ward.site), serial=f"70-{number}")
        builders.probe(ward.physicist, Place(site=ward.site, scanner=console), serial=f"C5-{number}")
    with django_assert_max_num_queries(40):
        client.get(reverse("register"))


def test_device_with_more_history_asks_the_database_no_more_often(ward, django_assert_max_num_queries):
    client = builders.signed_in(ward.physicist)
    address = reverse("device", args=[ward.probe.uid])
    with django_assert_max_num_queries(200) as before:
        client.get(address)
    builders.submitted(ward.check, ward.technician)
    for _ in range(3):
        opened = builders.checks.open_unplanned(
            device=ward.probe.uid, procedure=builders.MONTHLY, actor=ward.technician, at=now()
        )
        builders.submitted(opened, ward.technician)
    with django_assert_max_num_queries(len(before) + 12):
        client.get(address)
