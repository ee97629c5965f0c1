"""The state tables: their shape, every allowed move, every refused one, and how they print."""

from __future__ import annotations

import pytest

from qa_tracker.core.errors import Conflict
from qa_tracker.core.workflow import (
    CHECK,
    CHECK_AWAITED,
    CHECK_DONE,
    DEVICE,
    DEVICE_USABLE,
    DOSSIER,
    FAULT,
    WORKFLOWS,
    markdown_table,
    may_move,
    mermaid_diagram,
    target,
    verbs_from,
)

# By state, each verb with where it leads: the same rules the other way round, so that a slip in either shows.
EXPECTED = {
    "check": {
        "scheduled": "start>started submit>submitted satisfy>submitted miss>missed excuse>excused void>void",
        "started": "submit>submitted satisfy>submitted miss>missed excuse>excused void>void",
        "submitted": "amend>submitted countersign>countersigned send_back>sent_back void>void",
        "countersigned": "amend>submitted withdraw>submitted void>void",
        "sent_back": "submit>submitted excuse>excused void>void",
        "missed": "",
        "excused": "void>void",
        "void": "",
    },
    "device": {
        "ordered": "receive>awaiting_acceptance quarantine>quarantined dispose>disposed",
        "awaiting_acceptance": (
            "accept>in_use accept_restricted>restricted borrow_in>on_loan_in quarantine>quarantined "
            "send_to_repair>at_repair store>stored lose>lost dispose>disposed"
        ),
        "in_use": (
            "restrict>restricted quarantine>quarantined send_to_repair>at_repair lend_out>on_loan_out "
            "store>stored lose>lost dispose>disposed"
        ),
        "restricted": (
            "restrict>restricted quarantine>quarantined restore>in_use send_to_repair>at_repair store>stored "
            "lose>lost dispose>disposed"
        ),
        "quarantined": (
            "restore>in_use restore_restricted>restricted restore_loan>on_loan_in send_to_repair>at_repair "
            "lose>lost dispose>disposed"
        ),
        "at_repair": "return_from_repair>quarantined quarantine>quarantined lose>lost dispose>disposed",
        "on_loan_in": (
            "quarantine>quarantined send_to_repair>at_repair hand_back>disposed lose>lost dispose>disposed"
        ),
        "on_loan_out": (
            "return_from_loan>awaiting_acceptance quarantine>quarantined lose>lost dispose>disposed"
        ),
        "stored": (
            "receive>awaiting_acceptance quarantine>quarantined send_to_repair>at_repair lend_out>on_loan_out "
            "lose>lost dispose>disposed"
        ),
        "lost": "find>quarantined quarantine>quarantined dispose>disposed",
        "disposed": "receive>awaiting_acceptance",
    },
    "fault": {
        "open": "act>open await_proof>awaiting_proof move>open dismiss>closed",
        "awaiting_proof": "act>awaiting_proof disprove>open move>open close>closed",
        "closed": "reopen>open",
    },
    "dossier": {
        "frozen": "render>rendering",
        "rendering": "release>frozen issue>issued fail>failed",
        "issued": "",
        "failed": "render>rendering",
    },
}
CELLS = [
    (workflow, state, verb)
    for workflow in WORKFLOWS.values()
    for state in workflow.states
    for verb in workflow.verbs
]
each_workflow = pytest.mark.parametrize("workflow", WORKFLOWS.values(), ids=WORKFLOWS)


@pytest.mark.parametrize(("workflow", "state", "verb"), CELLS, ids=lambda each: getattr(each, "noun", each))
def test_verb_leads_where_the_table_says_or_is_refused_for_each_state(workflow, state, verb):
    expected = dict(pair.split(">") for pair in EXPECTED[workflow.noun][state].split())
    assert may_move(workflow, state, verb) is (verb in expected)
    if verb in expected:
        assert target(workflow, state, verb) == expected[verb]
        return
    with pytest.raises(Conflict) as refusal:
        target(workflow, state, verb)
    assert refusal.value.code == f"{workflow.noun}.wrong_state"
    assert set(refusal.value.parameters["allowed"]) == set(expected)


@each_workflow
def test_table_names_only_its_own_states_and_all_of_them(workflow):
    assert set(EXPECTED[workflow.noun]) == set(workflow.states)
    named = {state for rule in workflow.rules for state in (*rule.sources, rule.target)}
    assert named | set(workflow.initial) == set(workflow.states)


@each_workflow
def test_no_verb_has_two_targets_for_one_state(workflow):
    for state in workflow.states:
        verbs = verbs_from(workflow, state)
        assert len(verbs) == len(set(verbs))


@each_workflow
def test_every_state_can_be_reached_from_a_new_row(workflow):
    reached, waiting = set(), list(workflow.initial)
    while waiting:
        state = waiting.pop()
        if state not in reached:
            reached.add(state)
            waiting += [target(workflow, state, verb) for verb in verbs_from(workflow, state)]
    assert reached == set(workflow.states)


@pytest.mark.parametrize(
    ("workflow", "final"),
    [(CHECK, ("missed", "void")), (DEVICE, ()), (FAULT, ()), (DOSSIER, ("issued",))],
    ids=lambda each: getattr(each, "noun", None),
)
def test_nothing_leads_out_of_a_final_state(workflow, final):
    assert workflow.final == final


def test_use_is_entered_only_by_acceptance_or_restoring_when_a_device_was_out_of_use():
    into_use = {rule.verb for rule in DEVICE.rules if rule.target in DEVICE_USABLE}
    assert into_use == {
        *("accept", "accept_restricted", "borrow_in"),
        *("restore", "restore_restricted", "restore_loan"),
        "restrict",
    }
    assert all(set(rule.sources) <= DEVICE_USABLE for rule in DEVICE.rules if rule.verb == "restrict")


def test_quarantine_is_allowed_in_every_state_but_disposed_and_quarantined():
    allowed = {state for state in DEVICE.states if may_move(DEVICE, state, "quarantine")}
    assert set(DEVICE.states) - allowed == {"quarantined", "disposed"}


def test_check_states_are_awaited_or_done_or_neither_but_never_both():
    assert not CHECK_AWAITED & CHECK_DONE
    assert set(CHECK.states) - CHECK_AWAITED - CHECK_DONE == {"missed", "excused", "void"}


def test_unknown_verb_is_refused_with_what_could_be_done_instead():
    with pytest.raises(Conflict) as refusal:
        target(FAULT, "closed", "close")
    assert refusal.value.parameters == {"state": "closed", "verb": "close", "allowed": ("reopen",)}


def test_markdown_table_has_a_line_for_each_rule():
    assert markdown_table(DOSSIER) == (
        "| verb | from | to |\n|---|---|---|\n"
        "| render | frozen, failed | rendering |\n"
        "| release | rendering | frozen |\n"
        "| issue | rendering | issued |\n"
        "| fail | rendering | failed |\n"
    )


def test_mermaid_diagram_has_an_arrow_for_each_pair_of_states():
    assert mermaid_diagram(DOSSIER) == (
        "stateDiagram-v2\n    [*] --> frozen\n    frozen --> rendering: render\n"
        "    failed --> rendering: render\n    rendering --> frozen: release\n"
        "    rendering --> issued: issue\n    rendering --> failed: fail\n    issued --> [*]\n"
    )


def test_mermaid_diagram_shares_an_arrow_when_two_verbs_join_the_same_states():
    assert "    quarantined --> disposed: dispose\n" in mermaid_diagram(DEVICE)
    assert "    on_loan_in --> disposed: hand_back, dispose\n" in mermaid_diagram(DEVICE)
