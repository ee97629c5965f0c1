"""The permission table, cell by cell, and what grants allow where and when."""

from __future__ import annotations

from datetime import date

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.roles import (
    ALL,
    PERMISSIONS,
    ROLES,
    VERBS,
    Grant,
    check_grant,
    grants_on,
    may,
    may_somewhere,
    sites_for,
)

FIRST, LAST = date(2025, 3, 1), date(2025, 3, 31)
BEFORE, AFTER = date(2025, 2, 28), date(2025, 4, 1)

# Written out a second time and by role, so that a slip in either table shows.
MAY = {
    "user": {"see", "check.enter_user", "device.quarantine", "fault.open"},
    "technician": {
        *("see", "check.enter_user", "check.enter", "device.place", "device.quarantine"),
        *("fault.open", "fault.act", "dossier.read", "ledger.read", "token.issue"),
    },
    "lead": {
        *("see", "check.enter_user", "check.enter", "check.excuse", "check.acknowledge", "check.move_due"),
        *("device.register", "device.edit"),
        *("device.place", "device.quarantine", "condition.set", "object.register", "plan.make", "ladder.set"),
        *("fault.open", "fault.act", "dossier.issue", "dossier.read", "ledger.read", "token.issue"),
    },
    "engineer": {
        *("see", "check.enter_user", "check.enter", "device.register", "device.edit", "device.place"),
        *("device.accept", "device.quarantine", "device.restore", "device.repair", "object.register"),
        *("fault.open", "fault.act", "fault.close", "dossier.issue", "dossier.read", "ledger.read"),
        "token.issue",
    },
    "physicist": {
        *("see", "check.enter_user", "check.enter", "check.countersign", "check.excuse"),
        *("check.accept_out_of_window", "check.acknowledge", "check.move_due"),
        *("device.register", "device.edit", "device.place", "device.accept"),
        *("device.quarantine", "device.restore", "device.repair", "condition.set", "object.register"),
        *(
            "procedure.adopt",
            "criteria.adopt",
            "baseline.set",
            "plan.make",
            "ladder.set",
            "fault.open",
            "fault.act",
        ),
        *("fault.close", "dossier.issue", "dossier.read", "ledger.read", "token.issue"),
    },
    "auditor": {"see", "dossier.issue", "dossier.read", "ledger.read", "token.issue"},
    "administrator": {
        *("see", "dossier.read", "ledger.read", "person.manage", "site.manage", "mail.see"),
        *("mail.send_again", "token.issue"),
    },
}
CHANGES_A_RECORD = [
    verb
    for verb in VERBS
    if verb.split(".")[0] in {"check", "device", "condition", "object", "fault", "plan"}
] + ["procedure.adopt", "criteria.adopt", "baseline.set", "dossier.issue"]


@pytest.mark.parametrize("role", ROLES)
@pytest.mark.parametrize("verb", VERBS)
def test_cell_says_what_the_role_may_do_for_each_verb(verb, role):
    assert PERMISSIONS[verb][role] is (verb in MAY[role])
    assert may([Grant(role, 1, FIRST)], verb, 1, FIRST) is (verb in MAY[role])


def test_table_has_every_verb_that_the_roles_are_given_and_no_other():
    assert set(VERBS) == set().union(*MAY.values())
    assert len(VERBS) == 33


@pytest.mark.parametrize("verb", CHANGES_A_RECORD)
def test_administrator_changes_nothing_when_the_verb_changes_a_record(verb):
    assert not PERMISSIONS[verb]["administrator"]


@pytest.mark.parametrize("verb", [verb for verb in CHANGES_A_RECORD if verb != "dossier.issue"])
def test_auditor_changes_nothing_when_the_verb_changes_a_record(verb):
    assert not PERMISSIONS[verb]["auditor"]


@pytest.mark.parametrize("verb", VERBS)
def test_lead_may_do_whatever_a_technician_may_for_each_verb(verb):
    assert PERMISSIONS[verb]["lead"] or not PERMISSIONS[verb]["technician"]


@pytest.mark.parametrize(
    ("day", "held"),
    [
        pytest.param(BEFORE, False, id="day before the first"),
        pytest.param(FIRST, True, id="first day"),
        pytest.param(LAST, True, id="last day"),
        pytest.param(AFTER, False, id="day after the last"),
    ],
)
def test_grant_holds_on_each_day_of_its_interval(day, held):
    grant = Grant("physicist", 1, FIRST, LAST)
    assert grants_on([grant], day) == ((grant,) if held else ())
    assert may([grant], "baseline.set", 1, day) is held


def test_grant_holds_for_good_when_it_has_no_end():
    assert may([Grant("user", None, FIRST)], "see", 7, date(2999, 1, 1))


@pytest.mark.parametrize(
    ("site_id", "granted_at", "allowed"),
    [
        pytest.param(1, 1, True, id="the same site"),
        pytest.param(2, 1, False, id="another site"),
        pytest.param(2, None, True, id="whole group at a site"),
        pytest.param(None, None, True, id="whole group for what belongs to the group"),
        pytest.param(None, 1, False, id="one site for what belongs to the group"),
    ],
)
def test_may_follows_the_site_when_a_grant_is_bound_to_one(site_id, granted_at, allowed):
    assert may([Grant("physicist", granted_at, FIRST)], "procedure.adopt", site_id, FIRST) is allowed


def test_sites_are_those_of_the_roles_that_allow_it_when_a_person_holds_several():
    grants = [Grant("technician", 1, FIRST), Grant("lead", 2, FIRST), Grant("user", None, FIRST)]
    assert sites_for(grants, "check.excuse", FIRST) == frozenset({2})
    assert sites_for(grants, "check.enter", FIRST) == frozenset({1, 2})
    assert sites_for(grants, "see", FIRST) is ALL
    assert sites_for(grants, "person.manage", FIRST) == frozenset()


def test_nothing_is_allowed_when_a_person_holds_no_grant():
    assert not any(may([], verb, 1, FIRST) or may_somewhere([], verb, FIRST) for verb in VERBS)


@pytest.mark.parametrize("site_id", [5, None])
def test_person_may_somewhere_when_any_grant_allows_it(site_id):
    assert may_somewhere([Grant("user", 1, FIRST), Grant("lead", site_id, FIRST)], "plan.make", FIRST)


def test_unknown_verb_is_a_mistake_in_the_program_when_asked_about():
    with pytest.raises(KeyError):
        may([], "check.entre", 1, FIRST)


@pytest.mark.parametrize(
    ("grant", "code"),
    [
        pytest.param(Grant("sonographer", 1, FIRST), "grant.unknown_role", id="no such role"),
        pytest.param(Grant("user", 1, LAST, FIRST), "grant.ends_before_start", id="ends before it starts"),
        pytest.param(Grant("auditor", None, FIRST), "grant.auditor_needs_end", id="auditor for good"),
    ],
)
def test_grant_is_refused_when_it_can_not_be_made(grant, code):
    with pytest.raises(Invalid) as refusal:
        check_grant(grant)
    assert refusal.value.code == code


@pytest.mark.parametrize(
    "grant", [Grant("auditor", None, FIRST, LAST), Grant("user", 1, FIRST, FIRST), Grant("lead", 2, FIRST)]
)
def test_grant_can_be_made_when_role_and_days_fit(grant):
    check_grant(grant)
