"""Every kind of leaf that a command writes reads as one sentence."""

from __future__ import annotations

import ast
import datetime as dt
import json
import uuid
from pathlib import Path

import pytest

from qa_tracker.core.workflow import DOSSIER
from qa_tracker.records.queries.ledger import LeafRow
from qa_tracker.services.wording import leaf_sentence
from qa_tracker.services.wording_leaves import SENTENCES

ROOT = Path(__file__).parents[2] / "qa_tracker"
DOORS = {"command", "sweeping", "act"}
# Kinds that end with the state a verb leads to.
MADE = {
    "f'check.{state}'": ("check.countersigned", "check.sent_back"),
    "f'notices.{kind}'": ("notices.acknowledged", "notices.snoozed"),
    "f'dossier.{state}'": tuple(f"dossier.{state}" for state in DOSSIER.states),
}


def _kinds():
    for path in sorted(ROOT.rglob("*.py")):
        for node in ast.walk(ast.parse(path.read_text())):
            if not (isinstance(node, ast.Call) and isinstance(node.func, ast.Attribute) and node.args):
                continue
            if node.func.attr not in DOORS:
                continue
            kind = node.args[0]
            if isinstance(kind, ast.Constant) and "." in str(kind.value):
                yield kind.value
            elif isinstance(kind, ast.JoinedStr):
                yield from MADE.get(ast.unparse(kind), (f"{path.name}:{node.lineno}",))


def test_every_kind_that_is_written_has_a_sentence_and_no_other_has():
    assert set(_kinds()) == set(SENTENCES)


def _leaf(kind, new=None, actor="Hywel Dragić", **more):
    said = {"kind": kind, "new": new or {}, "reason": "", "origin": "live", "as_if": None} | more
    return LeafRow(
        seq=7,
        uid=uuid.UUID(int=1),
        kind=kind,
        at=dt.datetime(2025, 3, 9, 7, tzinfo=dt.UTC),
        actor_uid=uuid.UUID(int=2) if actor is not None else None,
        device_uid=uuid.UUID(int=3),
        content=json.dumps(said),
        leaf_hash=b"",
        actor=actor or "",
        device="Pellantis PX Tern 7741",
    )


READINGS = [
    {"entered": "145.4", "qualifier": "="},
    {"entered": "", "qualifier": "not_seen"},
    {"entered": "", "qualifier": "=", "not_tested": "in_use"},
]
SUBMITTED = {
    "edition": {"procedure": "monthly-in-air", "number": 1},
    "verdict": "remedial",
    "readings": READINGS,
}
HD, TERN = "Hywel Dragić", "Pellantis PX Tern 7741"
# kind, what the leaf tells, its reason, sentence
TABLE = [
    ("check.opened", {"procedure": "user-check"}, "", f"{HD} began the unplanned check “user-check” of {TERN}."),
    (
        "check.submitted", SUBMITTED, "",
        f"{HD} signed the check “monthly-in-air”, edition 1, of {TERN} with the verdict remedial (2 readings).",
    ),
    ("check.countersigned", {"state": "countersigned"}, "", f"{HD} countersigned a check of {TERN}."),
    ("check.sent_back", {}, "Read it again.", f"{HD} sent a check of {TERN} back: Read it again."),
    ("check.not_tested", {"reason": "in_use"}, "in_use", f"{HD} could not test {TERN}: in use."),
    (
        "check.due_moved", {"due": "2025-03-05", "slot": "2025-03-01"}, "Theatre",
        f"{HD} moved a due day of {TERN} to 5 March 2025: Theatre.",
    ),
    (
        "check.excused", {"state": "excused", "due": "2025-03-05"}, "On loan",
        f"{HD} excused the check of {TERN} due on 5 March 2025: On loan.",
    ),
    (
        "device.registered",
        {"kind": "probe", "maker": "Quorrel", "model": "Wren-H", "serial": "12", "site": "AG"}, "",
        f"{HD} registered the probe Quorrel Wren-H 12.",
    ),
    ("device.placed", {"site_id": 2}, "To theatre 3", f"{HD} moved {TERN}: To theatre 3."),
    ("device.placed", {"site_id": 2}, "", f"{HD} moved {TERN}."),
    (
        "device.edited", {"owner": "Trust", "network_title": "us-2"}, "",
        f"{HD} changed the register fields of {TERN}: network title and owner.",
    ),
    (
        "device.software_recorded", {"version": "4.3", "options": "", "since": "2025-03-01"}, "",
        f"{HD} recorded software 4.3 of {TERN}, since 1 March 2025.",
    ),
    (
        "device.software_recorded", {"version": "4.3", "since": "2025-03-01", "under_review": [{}, {}]}, "",
        f"{HD} recorded software 4.3 of {TERN}, since 1 March 2025; 2 baselines are under review.",
    ),
    ("device.quarantined", {"state": "quarantined"}, "Lens cut", f"{HD} quarantined {TERN}: Lens cut."),
    ("device.restored", {"state": "in_use"}, "Cable new", f"{HD} restored {TERN} to use: Cable new."),
    ("device.accepted", {"state": "in_use"}, "", f"{HD} accepted {TERN} into use."),
    (
        "device.moved_on", {"state": "at_repair", "note": "Cable"}, "Cable",
        f"{HD} changed the state of {TERN} to at repair: Cable.",
    ),
    ("condition.set", {"name": "Abdomen", "settings": {}}, "", f"{HD} set the condition “Abdomen” of {TERN}."),
    (
        "baseline.set", {"baselines": [{"measurand": "a"}], "reason": "Accepted"}, "Accepted",
        f"{HD} set 1 baseline of {TERN}: Accepted.",
    ),
    (
        "baseline.kept", {"baselines": [{"measurand": "a"}, {"measurand": "b"}], "reason": "Same"}, "Same",
        f"{HD} kept 2 baselines of {TERN}, which stood under review: Same.",
    ),
    (
        "plan.made", {"procedure": "user-check", "first_due": "2025-03-05"}, "",
        f"{HD} planned “user-check” for {TERN}, first due on 5 March 2025.",
    ),
    ("plan.ended", {"ended": True}, "Replaced", f"{HD} ended a plan of {TERN}: Replaced."),
    (
        "fault.opened", {"grade": "remedial", "seen": "Dark line", "place": ""}, "Dark line",
        f"{HD} opened a fault of the remedial level on {TERN}: Dark line.",
    ),
    (
        "fault.acted_on", {"kind": "sent out", "text": "To the maker.", "job_number": ""}, "",
        f"{HD} recorded an action on a fault of {TERN} (sent out): To the maker.",
    ),
    (
        "fault.looked_back", {"look_back": "No review needed"}, "",
        f"{HD} stated the look-back for a fault of {TERN}: No review needed.",
    ),
    (
        "fault.dismissed", {"state": "closed", "remark": "Dry gel"}, "Dry gel",
        f"{HD} dismissed a fault of {TERN}: Dry gel.",
    ),
    (
        "procedure.published", {"procedure": "user-check", "edition": 1, "sha256": ""}, "",
        f"{HD} published the procedure “user-check”, edition 1.",
    ),
    (
        "procedure.adopted", {"procedure": "user-check", "edition": 1, "site": None}, "",
        f"{HD} adopted the procedure “user-check”, edition 1, for the whole group.",
    ),
    (
        "criteria.published", {"set": "tg1", "edition": "1998", "criteria": ["TG1-PEN"]}, "",
        f"{HD} published the criteria “tg1”, edition 1998.",
    ),
    (
        "criteria.adopted", {"set": "tg1", "edition": "1998", "site": "AG"}, "",
        f"{HD} adopted the criteria “tg1”, edition 1998, for AG.",
    ),
    (
        "uncertainty.stated",
        {"measurand": "penetration", "site": None, "kind": "expanded", "source": "Certificate 7"}, "",
        f"{HD} stated the uncertainty of penetration for the whole group (expanded): Certificate 7.",
    ),
    (
        "uncertainty.ended", {"measurand": "penetration", "site": "AG"}, "New object",
        f"{HD} ended the stated uncertainty of penetration for AG: New object.",
    ),
    (
        "criteria.ended", {"set": "tg1", "edition": "1998", "site": None}, "The limits are from memory.",
        f"{HD} ended the criteria “tg1”, edition 1998, for the whole group: The limits are from memory.",
    ),
    (
        "test_object.registered", {"name": "Hydrogel A", "serial": "77", "nominals": {}}, "",
        f"{HD} registered the test object Hydrogel A, serial number 77.",
    ),
    (
        "instrument.registered", {"kind": "leakage_tester", "maker": "Ohmic", "model": "L", "serial": "3"}, "",
        f"{HD} registered the leakage tester Ohmic L 3.",
    ),
    ("person.first", {"role": "administrator"}, "", "The first account was made, with the role of administrator."),
    ("person.created", {"username": "hywel"}, "", f"{HD} made the account “hywel”."),
    ("person.password_set", {"person": "0"}, "", f"{HD} set a password."),
    (
        "role.granted", {"role": "lead", "site": None, "from": "2025-03-01", "until": None}, "",
        f"{HD} gave the role of lead sonographer for the whole group, from 1 March 2025.",
    ),
    ("role.ended", {"until": "2025-03-01"}, "", f"{HD} ended a role on 1 March 2025."),
    ("token.issued", {"label": "export", "sha256": ""}, "", f"{HD} issued the token “export”."),
    ("token.revoked", {"sha256": ""}, "", f"{HD} ended a token."),
    ("feed.issued", {"sha256": "", "replaced": False}, "", f"{HD} issued the address of their calendar."),
    ("feed.revoked", {"sha256": ""}, "", f"{HD} ended the address of their calendar."),
    (
        "site.created", {"code": "AG", "name": "Aldermoor General", "time_zone": "Europe/London"}, "",
        f"{HD} made the site AG, Aldermoor General.",
    ),
    ("site.instructed", {"remedial": "", "suspension": ""}, "", f"{HD} set what a site tells people to do on a verdict."),
    ("location.added", {"name": "Theatre 3", "position": 4}, "", f"{HD} added the room Theatre 3."),
    (
        "holidays.added", {"days": {"2025-12-25": "Christmas", "2025-12-26": "Boxing Day"}}, "",
        f"{HD} added days off (25 December 2025 and 26 December 2025).",
    ),
    ("pool.created", {"name": "Probes", "sites": ["AG", "KB", "SO"]}, "", f"{HD} made the pool Probes of AG, KB and SO."),
    (
        "dossier.frozen", {"content_sha256": "", "ledger_size": 5}, "",
        f"{HD} set a dossier of {TERN}, its content frozen, to be drawn.",
    ),
    ("dossier.rendering", {"state": "rendering"}, "", f"{HD} began to draw a dossier of {TERN}."),
    ("dossier.issued", {"state": "issued"}, "", f"{HD} issued a sealed dossier of {TERN}."),
    (
        "dossier.failed", {"state": "failed", "failure": "seal.cannot_sign"}, "",
        f"{HD} could not draw a dossier of {TERN}: seal.cannot_sign.",
    ),
    (
        "notices.owed", {"notices": ["a", "b"], "missed": ["c"], "excused": [], "opened": ["d"]}, "",
        f"{HD} moved checks by date: 2 notices owed, 1 check missed and 1 check opened.",
    ),
    (
        "notices.acknowledged", {"until_at": "2025-03-14T00:00:00+00:00"}, "Probe is out",
        f"{HD} acknowledged the check of {TERN} until 14 March 2025 at 00:00 UTC: Probe is out.",
    ),
    (
        "notices.snoozed", {"until_at": "2025-03-14T00:00:00+00:00"}, "Probe is out",
        f"{HD} put their notices of a check of {TERN} off until 14 March 2025 at 00:00 UTC: Probe is out.",
    ),
    (
        "notices.hold_ended", {"held": "snoozed"}, "Probe is back",
        f"{HD} ended a hold of the notices of {TERN}: Probe is back.",
    ),
    (
        "leave.taken", {"from": "2025-03-14", "until": "2025-03-20"}, "Summer",
        f"{HD} recorded a leave from 14 March 2025 to 20 March 2025, with a deputy.",
    ),
    ("leave.cancelled", {}, "", f"{HD} cancelled a leave."),
    (
        "site.hours_set", {"digest_hour": 7, "quiet_from_hour": 20, "quiet_until_hour": 6}, "",
        f"{HD} set the hours of a site's mail: from 7:00, quiet from 20:00 to 6:00.",
    ),
    (
        "ladder.set", {"site": "AG", "rungs": ["due/lead"]}, "Nights are covered",
        f"{HD} set who is told at which level for AG: Nights are covered.",
    ),
    (
        "ladder.dropped", {"site": None, "rungs": ["due/lead"]}, "As everywhere",
        f"{HD} went back to the common ladder for the whole group: As everywhere.",
    ),
    (
        "location.hours_set", {"name": "Theatre 3", "round_the_clock": True}, "",
        f"{HD} recorded the hours of the room Theatre 3: round the clock.",
    ),
    (
        "mail.given_up", {"mail": "digest/1", "answer": "550", "notices": ["one"]}, "",
        f"{HD} gave a mail up and told the administrators of it (1 notice).",
    ),
    ("mail.sent_again", {"mails": ["one", "two"]}, "", f"{HD} had 2 mails sent again after they were given up."),
    (
        "mail.left_unsent", {"mail": "digest/1"}, "Has left",
        f"{HD} decided that a mail which was given up is not sent: Has left.",
    ),
    ("person.address_set", {"person": "018f"}, "", f"{HD} changed a mail address."),
]  # fmt: skip


@pytest.mark.parametrize(
    ("kind", "new", "reason", "sentence"), TABLE, ids=[f"{n}-{row[0]}" for n, row in enumerate(TABLE)]
)
def test_leaf_reads(kind, new, reason, sentence):
    assert leaf_sentence(_leaf(kind, new, reason=reason)) == sentence


def test_every_kind_is_in_the_table():
    assert {row[0] for row in TABLE} == set(SENTENCES)


def test_check_without_a_verdict_says_so():
    told = leaf_sentence(_leaf("check.submitted", SUBMITTED | {"verdict": "", "readings": READINGS[:1]}))
    assert told.endswith("without a verdict (1 reading).")


def test_program_acts_by_its_own_name_and_says_what_it_pretended():
    leaf = _leaf("notices.owed", {"notices": []}, actor=None, as_if="2025-03-05T00:00:00Z")
    assert leaf_sentence(leaf) == (
        "The program moved checks by date: nothing to tell (as if on 5 March 2025 at 00:00 UTC)."
    )


@pytest.mark.parametrize(("origin", "mark"), [("demo", "for the demonstration"), ("imported", "imported")])
def test_leaf_of_the_past_says_where_it_came_from(origin, mark):
    assert leaf_sentence(_leaf("device.accepted", origin=origin)).endswith(f"into use ({mark}).")


def test_leaf_without_names_at_hand_still_reads():
    leaf = _leaf("device.accepted", actor="")
    assert leaf_sentence(leaf) == f"A person on record accepted {TERN} into use."


def test_kind_from_another_time_is_named_as_it_is():
    assert leaf_sentence(_leaf("moon.seen")) == "Moon.seen (Hywel Dragić)."
