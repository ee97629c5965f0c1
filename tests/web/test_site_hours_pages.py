"""The hours of a site's mail, and rooms that work round the clock, set by the administrator."""

from __future__ import annotations

import pytest
from django.urls import reverse

from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def admin():
    return builders.first_administrator()


@pytest.fixture
def site(admin):
    return builders.site(admin)


def shown(admin, site):
    return builders.signed_in(admin).get(reverse("site", args=[site.uid])).content.decode()


def set_hours(admin, site, **typed):
    return builders.signed_in(admin).post(reverse("site-hours", args=[site.uid]), typed)


def test_quiet_hours_are_set_and_shown(admin, site):
    answer = set_hours(admin, site, digest_hour="8", quiet_from_hour="20", quiet_until_hour="6")
    assert answer.status_code == 302
    page = shown(admin, site)
    assert "from 8:00 on working days" in page
    assert "from 20:00 to 6:00, mail waits" in page


@pytest.mark.parametrize(
    ("typed", "says"),
    [
        ({"digest_hour": "8", "quiet_from_hour": "20"}, "Fill in both, or neither"),
        ({"digest_hour": "8", "quiet_from_hour": "6", "quiet_until_hour": "6"}, "all day"),
        ({"digest_hour": "8", "quiet_from_hour": "24", "quiet_until_hour": "6"}, "23"),
        ({"digest_hour": "7"}, "nothing was changed"),
    ],
    ids=str,
)
def test_hours_that_are_none_are_refused_with_what_to_do(admin, site, typed, says):
    answer = set_hours(admin, site, **typed)
    assert answer.status_code == 422
    assert says in answer.content.decode()


def test_room_is_recorded_as_working_round_the_clock_and_back(admin, site):
    room = builders.room(admin, site)
    address, browser = reverse("room-hours", args=[site.uid, room.uid]), builders.signed_in(admin)
    for wanted, works in [("yes", True), ("no", False)]:
        browser.post(address, {"round_the_clock": wanted})
        room.refresh_from_db()
        assert room.round_the_clock is works
    assert (
        "nothing was changed"
        in browser.post(address, {"round_the_clock": "no"}, follow=True).content.decode()
    )


def test_hours_are_no_matter_of_other_roles_or_other_sites(admin, site):
    physicist = builders.person(admin, "oduya", "physicist", site)
    far = builders.person(admin, "far", "administrator", builders.site(admin, "KB", "Kestrel Bay"))
    assert set_hours(physicist, site, digest_hour="9").status_code == 403
    assert set_hours(far, site, digest_hour="9").status_code == 404
