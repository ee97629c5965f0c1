"""Who gets in: a token in force, of a person with a role in force; nobody is sent to a sign-in page."""

from __future__ import annotations

import datetime as dt

import pytest
from django.test import Client
from django.utils.timezone import now

from qa_tracker.records.queries.people import list_tokens
from qa_tracker.services import people
from tests import builders
from tests.api.world import ROOT, Api

pytestmark = pytest.mark.django_db


@pytest.fixture
def admin(db):
    return builders.first_administrator()


@pytest.fixture
def technician(admin):
    return builders.person(admin, "castellane", "technician", builders.site(admin))


@pytest.mark.parametrize(
    "headers",
    [
        pytest.param({}, id="no token"),
        pytest.param({"authorization": "Bearer nonsense"}, id="unknown token"),
        pytest.param({"authorization": "Bearer "}, id="empty token"),
        pytest.param({"authorization": "Basic bW9zczp4"}, id="another scheme"),
    ],
)
def test_call_is_answered_401_as_a_problem_when_the_token_is_no_good(headers):
    answer = Client().get(f"{ROOT}/sites", headers=headers)
    assert (answer.status_code, answer["Content-Type"]) == (401, "application/problem+json")
    assert answer["WWW-Authenticate"].startswith("Bearer")
    assert answer.json()["code"] == "token.refused"


def test_session_of_the_pages_is_no_way_in_when_there_is_no_token(technician):
    assert builders.signed_in(technician).get(f"{ROOT}/sites").status_code == 401


def test_token_works_until_it_is_revoked(technician):
    caller = Api(technician)
    assert [site["code"] for site in caller.get("/sites")] == ["AG"]
    people.revoke_token(token_id=list_tokens(technician.pk)[0].id, actor=technician, at=now())
    assert caller.get("/sites", 401)["code"] == "token.refused"


def test_token_is_refused_everywhere_when_every_role_has_ended(admin):
    yesterday = now().date() - dt.timedelta(days=1)
    holder = builders.person(admin, "fairweather", "technician", builders.site(admin))
    caller = Api(holder)
    grant = holder.grants.get()
    people.end_role(grant=grant.uid, until_on=yesterday, reason="left", actor=admin, at=now())
    assert caller.get("/procedures", 403)["code"] == "role.not_allowed"


def test_command_needs_no_csrf_token_when_a_bearer_token_is_sent(technician):
    caller = Api(technician, client=Client(enforce_csrf_checks=True))
    assert caller.post("/faults", {}, 422)["code"] == "several"
