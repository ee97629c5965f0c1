"""Who may make a bearer token."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Forbidden
from qa_tracker.records.queries.people import list_tokens, person_by_token
from qa_tracker.services import people
from tests import builders


@pytest.mark.django_db
@pytest.mark.parametrize("role", ["technician", "lead", "engineer", "physicist", "auditor", "administrator"])
def test_token_acts_for_its_person_when_the_role_allows_one(role):
    admin = builders.first_administrator()
    holder = builders.person(admin, "holder", role, builders.site(admin))
    token = people.issue_token(label="export", actor=holder, at=now())
    assert person_by_token(token) == holder


@pytest.mark.django_db
def test_token_is_refused_when_the_role_is_user():
    admin = builders.first_administrator()
    holder = builders.person(admin, "holder", "user", builders.site(admin))
    with pytest.raises(Forbidden) as refused:
        people.issue_token(label="export", actor=holder, at=now())
    assert (refused.value.code, refused.value.parameters) == ("role.not_allowed", {"verb": "token.issue"})
    assert list_tokens(holder.pk) == []
