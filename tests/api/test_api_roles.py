"""Every operation of the document, for each role at its own hospital and at another."""

from __future__ import annotations

import pytest
from django.db import transaction

from qa_tracker.api.routes import api
from tests.api.operations import CALLS, RANDOM
from tests.api.world import ROLES


def addresses():
    """Method, path and declared answers of each operation of the document."""
    found = {}
    for path, methods in api.get_openapi_schema(path_prefix="")["paths"].items():
        for method, told in methods.items():
            found[told["operationId"]] = (method, path, set(map(int, told["responses"])))
    return found


ADDRESSES = addresses()


def call(world, caller, name, uid=None):
    """Call an operation and take back whatever it did."""
    wanted, (method, path, declared) = CALLS[name], ADDRESSES[name]
    uid = uid or (wanted.of(world) if wanted.of else None)
    with transaction.atomic():
        body = wanted.body(world) if wanted.body else None
        asked = f"?{wanted.query(world)}" if wanted.query else ""
        answer = caller.raw(method, path.format(uid=uid) + asked, body)
        transaction.set_rollback(True)
    assert answer.status_code in declared, (name, answer.status_code, answer.content.decode())
    return answer


def test_table_has_every_operation_of_the_document():
    assert set(CALLS) == set(ADDRESSES)


@pytest.mark.parametrize("role", ROLES)
def test_role_may_do_what_the_table_says_at_its_own_hospital(world, role):
    expected = {name: wanted.done if role in wanted.roles else 403 for name, wanted in CALLS.items()}
    assert {name: call(world, world.near[role], name).status_code for name in CALLS} == expected


@pytest.mark.parametrize("role", ROLES)
def test_thing_of_another_hospital_is_answered_as_one_that_is_not_there(world, role):
    for name in [name for name, wanted in CALLS.items() if wanted.of]:
        real, none = (call(world, world.far[role], name, uid) for uid in (None, RANDOM))
        assert (real.status_code, real.content) == (none.status_code, none.content), name
        assert real.status_code in (403, 404), name


@pytest.mark.parametrize("role", ROLES)
def test_lists_hold_nothing_of_another_hospital(world, role):
    ward = world.ward
    near = (ward.site, ward.probe, ward.scanner, ward.check, world.fault, world.dossier, world.phantom)
    for name in [name for name, wanted in CALLS.items() if not wanted.of and not wanted.body]:
        answer = call(world, world.far[role], name)
        assert answer.status_code == (200 if role in CALLS[name].roles else 403), name
        told = answer.content.decode()
        assert [str(each.uid) for each in near if str(each.uid) in told] == [], name


@pytest.mark.parametrize("role", ROLES)
def test_body_that_names_a_thing_of_another_hospital_does_nothing(world, role):
    for name in [name for name, wanted in CALLS.items() if wanted.body and not wanted.of]:
        assert call(world, world.far[role], name).status_code == 404, name
