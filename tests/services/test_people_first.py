"""The first account of an empty database: one leaf or nothing, and never a second time."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Forbidden, Invalid
from qa_tracker.records import ledger
from qa_tracker.records.models import Credential, Person, RoleGrant, Version
from qa_tracker.records.models.ledger import Leaf
from qa_tracker.services import people
from tests import builders

pytestmark = pytest.mark.django_db

GIVEN = {"username": "moss", "name": "Benedikta Moss", "email": "moss@tarnwater.invalid"}


def rows():
    return [model.objects.count() for model in (Person, RoleGrant, Credential, Version, Leaf)]


def test_first_account_is_an_administrator_of_the_group_under_one_leaf():
    first = builders.first_administrator()
    leaf = Leaf.objects.get()
    assert (leaf.seq, leaf.kind, leaf.actor_uid, leaf.subject_uid) == (0, "person.first", None, first.uid)
    assert list(RoleGrant.objects.values_list("role", "site")) == [("administrator", None)]


def test_first_account_is_not_made_when_its_leaf_can_not_be_written(monkeypatch):
    def fail(acts):
        raise RuntimeError("no leaf")

    monkeypatch.setattr(ledger, "append", fail)
    with pytest.raises(RuntimeError, match="no leaf"):
        builders.first_administrator()
    assert rows() == [0, 0, 0, 0, 0]


def test_second_first_account_is_refused_when_somebody_exists():
    builders.first_administrator()
    before = rows()
    with pytest.raises(Forbidden) as refused:
        people.create_first_administrator(**GIVEN, password=builders.PASSWORD, at=now())
    assert refused.value.code == "person.not_first"
    assert rows() == before


@pytest.mark.parametrize("password", ["eleven char", "password1234"])
def test_first_account_is_not_made_when_its_password_is_weak(password):
    with pytest.raises(Invalid) as refused:
        people.create_first_administrator(**GIVEN, password=password, at=now())
    assert refused.value.code == "person.password_weak"
    assert rows() == [0, 0, 0, 0, 0]
