"""Accounts, roles and passwords: who may make them, and when they end."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError, Forbidden, Invalid
from qa_tracker.records.models import Person, RoleGrant
from qa_tracker.records.models.ledger import Leaf
from qa_tracker.records.queries import devices as register
from qa_tracker.services import guards, people
from tests import builders
from tests.builders import PASSWORD

DAY = dt.timedelta(days=1)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


@pytest.fixture
def local(ward):
    """An administrator of one site."""
    return builders.person(ward.admin, "local", "administrator", ward.site)


def made(ward, **changed):
    given = {
        "username": "marchbank", "name": "Ola Marchbank", "email": "ola@tarnwater.invalid",
        "password": PASSWORD, "site": ward.site, "actor": ward.admin,
    } | changed  # fmt: skip
    return people.create(**given, at=now())


@pytest.mark.parametrize(
    ("changed", "code"),
    [
        ({"username": "  "}, "person.username_missing"),
        ({"username": "Penhallow"}, "person.username_taken"),
        ({"email": "ola at tarnwater"}, "person.email_wrong"),
        ({"name": ""}, "person.name_missing"),
        ({"password": "short"}, "person.password_weak"),
        ({"password": "password1234"}, "person.password_weak"),
    ],
)
def test_account_is_refused_and_nothing_is_kept_when_a_field_is_wrong(ward, changed, code):
    before = Person.objects.count(), Leaf.objects.count()
    with pytest.raises(Invalid) as refused:
        made(ward, **changed)
    assert refused.value.code == code
    assert (Person.objects.count(), Leaf.objects.count()) == before


def test_password_is_in_no_leaf(ward):
    made(ward)
    people.set_password(person=ward.user.uid, password="a different water bath", actor=ward.user, at=now())
    told = "".join(Leaf.objects.values_list("content", flat=True))
    assert PASSWORD not in told
    assert "a different water bath" not in told
    assert Person.objects.get(pk=ward.user.pk).check_password("a different water bath")


@pytest.mark.parametrize("who", ["physicist", "technician", "user"])
def test_only_an_administrator_makes_accounts_and_roles(ward, who):
    actor = getattr(ward, who)
    with pytest.raises(Forbidden):
        made(ward, actor=actor)
    with pytest.raises(Forbidden):
        builders.give_role(actor, actor, "administrator", ward.site)


def test_administrator_of_a_site_gives_no_role_beyond_it(ward, local):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    builders.give_role(local, ward.user, "lead", ward.site)
    for site in (other, None):
        with pytest.raises(Forbidden):
            builders.give_role(local, local, "physicist", site)


@pytest.mark.parametrize("role", ["physicist", "administrator"])
def test_administrator_of_a_site_sets_no_password_of_one_whose_role_reaches_further(ward, local, role):
    holder = builders.person(ward.admin, "wide", "user", ward.site)
    give = {"person": holder.uid, "password": "a stolen water bath", "actor": local}
    people.set_password(**give, at=now())
    builders.give_role(ward.admin, holder, role, None)
    with pytest.raises(Forbidden):
        people.set_password(**give, at=now())


def test_stranger_sets_no_password(ward):
    with pytest.raises(Forbidden):
        people.set_password(
            person=ward.user.uid, password="a stolen water bath", actor=ward.technician, at=now()
        )


@pytest.mark.parametrize(
    ("role", "ends_after", "code"),
    [
        ("auditor", None, "grant.auditor_needs_end"),
        ("lead", -1, "grant.ends_before_start"),
        ("surgeon", 1, "grant.unknown_role"),
    ],
)
def test_role_is_refused_when_it_can_not_be_held_so(ward, role, ends_after, code):
    today = now().date()
    until = None if ends_after is None else today + ends_after * DAY
    with pytest.raises(DomainError) as refused:
        people.grant_role(
            person=ward.user.uid, role=role, site=ward.site, from_on=today, until_on=until,
            actor=ward.admin, at=now(),
        )  # fmt: skip
    assert refused.value.code == code


@pytest.mark.parametrize(("days", "sees"), [(-1, False), (0, True), (5, True), (6, False)])
def test_auditor_sees_from_the_first_day_to_the_last_and_no_longer(ward, days, sees):
    first = now().date() + 10 * DAY
    auditor = builders.person(
        ward.admin, "audit", "auditor", ward.site, from_on=first, until_on=first + 5 * DAY
    )
    at = now() + (10 + days) * DAY
    found = register.find_device(guards.scope(auditor, at), ward.probe.uid)
    assert (found is not None) == sees
    assert guards.may(auditor, "dossier.issue", ward.site.id, at) == sees


def test_ended_role_holds_through_its_last_day(ward):
    grant = RoleGrant.objects.get(person=ward.technician)
    last = now().date() + 3 * DAY
    people.end_role(grant=grant.uid, until_on=last, reason="leaves", actor=ward.admin, at=now())
    held = [guards.may(ward.technician, "check.enter", ward.site.id, now() + days * DAY) for days in (3, 4)]
    assert held == [True, False]


def test_role_does_not_end_before_it_began(ward):
    grant = RoleGrant.objects.get(person=ward.technician)
    with pytest.raises(Invalid) as refused:
        people.end_role(grant=grant.uid, until_on=grant.from_on - DAY, reason="x", actor=ward.admin, at=now())
    assert refused.value.code == "grant.ends_before_start"
