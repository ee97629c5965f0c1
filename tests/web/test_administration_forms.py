"""The forms of people, sites, pools, tokens and passwords."""

from __future__ import annotations

import pytest
from django.urls import reverse

from qa_tracker.records.models import Person, RoleGrant, Site
from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def physicist(ward):
    return builders.signed_in(ward.physicist)


def test_person_when_made_is_given_a_role_next(ward):
    client = builders.signed_in(ward.admin)
    typed = {"name": "Sunniva Achterberg", "username": "sunniva", "email": "s@tarnwater.invalid",
             "site": str(ward.site.uid), "password": builders.PASSWORD}  # fmt: skip
    answer = client.post(reverse("person-new"), typed)
    person = Person.objects.get(username="sunniva")
    assert answer.headers["Location"] == reverse("role-grant", args=[person.uid])
    given = {"role": "technician", "site": str(ward.site.uid), "from_on": "2026-01-01", "until_on": ""}
    client.post(answer.headers["Location"], given)
    assert RoleGrant.objects.get(person=person).role == "technician"


def test_person_with_a_weak_password_is_refused_and_the_password_not_shown(ward):
    typed = {"name": "S", "username": "s", "email": "s@tarnwater.invalid", "site": "", "password": "sesame7"}
    answer = builders.signed_in(ward.admin).post(reverse("person-new"), typed)
    assert answer.status_code == 422
    assert "sesame7" not in answer.content.decode()
    assert 'value="s@tarnwater.invalid"' in answer.content.decode()


def test_role_when_ended_holds_no_longer(ward):
    grant = RoleGrant.objects.get(person=ward.user)
    address = reverse("role-end", args=[ward.user.uid, grant.uid])
    builders.signed_in(ward.admin).post(address, {"until_on": "2026-01-01", "reason": "left"})
    grant.refresh_from_db()
    assert str(grant.until_on) == "2026-01-01"


def test_own_password_when_set_keeps_the_person_signed_in(ward):
    client = builders.signed_in(ward.user)
    new = "another plumb line 2"
    client.post(reverse("password"), {"password": builders.PASSWORD, "new_password": new, "again": new})
    assert client.get(reverse("password")).status_code == 200
    assert Person.objects.get(pk=ward.user.pk).check_password(new)


@pytest.mark.parametrize(
    "change",
    [{"password": "wrong"}, {"again": "something else 3"}],
    ids=["wrong password", "typed differently"],
)
def test_own_password_when_refused_stays(ward, change):
    given = {
        "password": builders.PASSWORD,
        "new_password": "another plumb line 2",
        "again": "another plumb line 2",
    }
    answer = builders.signed_in(ward.user).post(reverse("password"), given | change)
    assert answer.status_code == 422
    assert ward.user.check_password(builders.PASSWORD)


def test_token_when_issued_is_shown_once_and_can_be_ended(ward, physicist):
    page = physicist.post(reverse("tokens"), {"label": "reading room"})
    token = page.context["issued"]
    assert token in page.content.decode()
    assert token not in physicist.get(reverse("tokens")).content.decode()
    key = page.context["tokens"][0].id
    assert builders.signed_in(ward.technician).post(reverse("token-revoke", args=[key])).status_code == 404
    assert physicist.post(reverse("token-revoke", args=[key])).status_code == 302


def test_site_when_made_takes_rooms_days_off_and_instructions(ward):
    client = builders.signed_in(ward.admin)
    client.post(reverse("site-new"), {"code": "kb", "name": "Kestrel Bay", "time_zone": "Europe/London"})
    made = Site.objects.get(code="KB")
    address = reverse("site", args=[made.uid])
    client.post(address, {"form": "room", "name": "Theatre 1", "position": "3"})
    client.post(address, {"form": "holidays", "days": "2026-12-25: Christmas Day"})
    client.post(address, {"form": "instructions", "suspension_instruction": "Phone 4410"})
    page = client.get(address).content.decode()
    assert all(words in page for words in ("Theatre 1", "Christmas Day", "25 December 2026", "Phone 4410"))


@pytest.mark.parametrize("days", ["25 December: Christmas", "2026-12-25"], ids=["no day", "no name"])
def test_days_off_when_unreadable_are_kept_as_typed(ward, days):
    client = builders.signed_in(ward.admin)
    answer = client.post(reverse("site", args=[ward.site.uid]), {"form": "holidays", "days": days})
    assert (answer.status_code, f">{days}</textarea>" in answer.content.decode()) == (422, True)


def test_pool_of_one_site_is_refused(ward):
    client = builders.signed_in(ward.admin)
    answer = client.post(reverse("pool-new"), {"name": "Loans", "sites": [str(ward.site.uid)]})
    assert (answer.status_code, 'value="Loans"' in answer.content.decode()) == (422, True)
