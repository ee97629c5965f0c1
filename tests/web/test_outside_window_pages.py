"""A check before its window: the page asks a physicist why it is accepted, and nobody else."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

import builders

pytestmark = pytest.mark.django_db

FIELD = 'name="outside_reason"'


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def early(ward):
    """The monthly check of another probe, due in twenty days."""
    probe = builders.probe(ward.physicist, builders.Place(site=ward.site), serial="C5-3301")
    due_on = now().date() + dt.timedelta(days=20)
    return builders.plan(probe, builders.MONTHLY, ward.technician, ward.physicist, due_on)


def typed(check, person, **more: str) -> dict[str, str]:
    answered = {key: entry.text for key, entry in builders.answers(check, person).items()}
    return answered | {f"c-{key}": "on" for key in answered} | {
        "cleaned_how": "wipe", "cleaned_by": "Ifeoma", "revision": "0", "then": "sign", **more
    }  # fmt: skip


def test_the_reason_is_asked_only_of_who_may_accept_and_only_before_the_window(ward, early):
    physicist, technician = builders.signed_in(ward.physicist), builders.signed_in(ward.technician)
    assert FIELD in physicist.get(f"/checks/{early.uid}/enter/").content.decode()
    assert FIELD not in technician.get(f"/checks/{early.uid}/enter/").content.decode()
    assert FIELD not in physicist.get(f"/checks/{ward.check.uid}/enter/").content.decode()


def test_the_reason_is_asked_when_a_late_entry_was_measured_before_the_window(ward):
    client, address = builders.signed_in(ward.physicist), f"/checks/{ward.check.uid}"
    moment = f"{now() - dt.timedelta(days=10):%Y-%m-%dT%H:%M}"
    form = typed(ward.check, ward.physicist, measured_at=moment)
    answer = client.post(f"{address}/draft/", form)
    assert answer.status_code == 422
    assert FIELD in answer.content.decode()
    assert 'id="refusal_outside_reason"' in answer.content.decode()


def test_a_technician_is_refused_as_before(ward, early):
    client = builders.signed_in(ward.technician)
    answer = client.post(f"/checks/{early.uid}/draft/", typed(early, ward.technician))
    assert answer.status_code == 422
    assert "This check opens on" in answer.content.decode()


def test_the_reason_is_shown_before_signing_and_on_the_check(ward, early):
    client, address = builders.signed_in(ward.physicist), f"/checks/{early.uid}"
    form = typed(early, ward.physicist, outside_reason="The room closes")
    shown = client.post(f"{address}/draft/", form, follow=True)
    assert "The room closes" in shown.content.decode()
    hidden = {"form_uid": shown.context["kept"].form_uid, "shown_sha256": shown.context["shown_sha256"]}
    answer = client.post(f"{address}/sign/", hidden | {"password": builders.PASSWORD})
    assert answer.status_code == 302
    page = client.get(f"{address}/").content.decode()
    assert "Accepted outside the window" in page
    assert "The room closes" in page
    assert "counted anew from the day of measuring: next due" in page
