"""Moving a device between its states: quarantine by anyone, back to use only by those who answer for it."""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid
from collections.abc import Sequence

from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.workflow import CHECK_DONE, DEVICE, may_move, target
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import Check, Device, Fault, Person, Signature
from qa_tracker.records.models.base import Noun
from qa_tracker.records.queries.out_of_use import out_of_use
from qa_tracker.services import faults, first_occurrences, plans
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.guards import check_may, check_password, required, role_for


def set_state(act: ledger.Act, device: Device, verb: str, note: str) -> None:
    """Move a device by a verb of the table; for commands and for history."""
    old = {"state": device.state, "note": device.state_note}
    state = target(DEVICE, device.state, verb)
    act.change(device, state=state, state_note=note[:300], state_since=act.at)
    act.about(device, device=device, site=device.site)
    act.tell({"state": state, "note": note}, old)


def sign(
    act: ledger.Act,
    *,
    person: Person,
    role: str,
    meaning: str,
    subject: Noun,
    shown: object,
    remark: str = "",
) -> Signature:
    """Write a signature bound to what was shown; for commands and for history."""
    return act.insert(
        Signature(
            uid=uuid7(),
            person=person,
            role=role,
            meaning=meaning,
            at=act.at,
            subject_type=str(subject._meta.model_name),
            subject_uid=subject.uid,
            shown_sha256=hashlib.sha256(canonical(shown)).hexdigest(),
            remark=remark,
        )
    )


def quarantine(*, device: uuid.UUID, seen: str, place: str = "", actor: Person, at: dt.datetime) -> Fault:
    """Take a device out of use at once and open a suspension fault. Any user may, without a password.

    Writes Device, Fault; leaf ``device.quarantined``. Refused: a device already quarantined or disposed.
    """
    row = find_device(actor, device, at)
    check_may(actor, "device.quarantine", row.site_id or _first_site(actor, at), at)
    seen = required(seen, "fault.seen_missing", "seen")
    with ledger.command("device.quarantined", actor=actor, at=at, reason=seen) as act:
        fault = faults.add_fault(act, row, grade="suspension", seen=seen, place=place, by=actor)
        set_state(act, row, "quarantine", seen)
    return fault


def _first_site(actor: Person, at: dt.datetime) -> int | None:
    """A pooled device has no site; the actor's own site gives the role."""
    return actor.duties_site_id


def may_restore(device_state: str) -> bool:
    """Whether a device in this state can be restored to use at all."""
    return may_move(DEVICE, device_state, "restore")


def restore(
    *,
    device: uuid.UUID,
    proving_check: uuid.UUID | None,
    remark: str,
    password: str,
    actor: Person,
    at: dt.datetime,
) -> None:
    """Restore a device to use, signed. Writes Device, Signature, and closes the faults the proof answers.

    Leaf ``device.restored``; its plans go on with their first occurrence. Refused: role, wrong password, state, a device never accepted, an open suspension
    fault without a proving check, a proving check that is not of this device, not submitted, without a reading,
    measured before the fault was opened, or itself beyond the suspension level.
    """
    row = find_device(actor, device, at)
    check_may(actor, "device.restore", row.site_id, at)
    check_password(actor, password)
    target(DEVICE, row.state, "restore")
    remark = required(remark, "restore.remark_missing", "remark")
    if not Signature.objects.filter(subject_uid=row.uid, meaning="accepted").exists():
        raise Conflict("restore.not_accepted")
    proof = _proof(row, proving_check)
    role = role_for(actor, "device.restore", row.site_id, at)
    with ledger.command("device.restored", actor=actor, at=at, reason=remark) as act:
        out = out_of_use(row.id)
        restore_device(act, row, actor, role, remark, proof)
        first_occurrences.begin_again(act, row, out, proof)


def restore_device(
    act: ledger.Act,
    device: Device,
    person: Person,
    role: str,
    remark: str,
    proof: Check | None,
    open_faults: Sequence[Fault] | None = None,
) -> None:
    """The rows of a restoration; for commands, and for history, which knows the open faults."""
    if open_faults is None:
        open_faults = list(Fault.objects.filter(device=device).exclude(state="closed"))
    shown = {
        "device": str(device.uid),
        "state": device.state,
        "remark": remark,
        "proving_check": str(proof.uid) if proof else None,
    }
    sign(act, person=person, role=role, meaning="restored to use", subject=device, shown=shown, remark=remark)
    for fault in open_faults:
        faults.close_by_proof(act, fault, proof, remark)
    set_state(act, device, "restore", "")


def _proof(device: Device, uid: uuid.UUID | None) -> Check | None:
    if uid is None:
        if Fault.objects.filter(device=device, grade="suspension").exclude(state="closed").exists():
            raise Invalid("restore.proof_missing", field="proving_check")
        return None
    check = Check.objects.filter(uid=uid, device=device).first()
    if check is None or check.state not in CHECK_DONE:
        raise Invalid("restore.proof_unknown", field="proving_check")
    if check.verdict == "suspension":
        raise Conflict("restore.proof_suspends", field="proving_check")
    _check_proves(device, check)
    return check


def _check_proves(device: Device, check: Check) -> None:
    """Refuse a check in which nothing was read, or that was measured or signed before the fault was opened."""
    made = check.submissions.order_by("-number").first()
    if made is None or not made.readings.exists():
        raise Conflict("restore.proof_unread", field="proving_check")
    newest = Fault.objects.filter(device=device, grade="suspension").exclude(state="closed")
    opened = newest.order_by("-opened_at").first()
    if opened is not None and min(made.measured_at, made.recorded_at) <= opened.opened_at:
        raise Conflict("restore.proof_too_old", field="proving_check")


def accept(*, device: uuid.UUID, remark: str, password: str, actor: Person, at: dt.datetime) -> None:
    """Accept a device into use, signed. Writes Device, Signature; leaf ``device.accepted``.

    Refused: role, wrong password, a device that does not await acceptance.
    """
    row = find_device(actor, device, at)
    check_may(actor, "device.accept", row.site_id, at)
    check_password(actor, password)
    target(DEVICE, row.state, "accept")
    role = role_for(actor, "device.accept", row.site_id, at)
    with ledger.command("device.accepted", actor=actor, at=at, reason=remark) as act:
        out, proof = out_of_use(row.id), _done_since(row)
        accept_device(act, row, actor, role, remark)
        first_occurrences.begin_again(act, row, out, proof)


def _done_since(device: Device) -> Check | None:
    """The newest check done while the device awaited acceptance: it proves what it reads."""
    done = Check.objects.filter(device=device, state__in=CHECK_DONE, submitted_at__gte=device.state_since)
    return done.exclude(verdict="suspension").order_by("-submitted_at", "-id").first()


def accept_device(act: ledger.Act, device: Device, person: Person, role: str, remark: str) -> None:
    """The rows of an acceptance; for commands and for history."""
    shown = {"device": str(device.uid), "state": device.state, "remark": remark}
    sign(act, person=person, role=role, meaning="accepted", subject=device, shown=shown, remark=remark)
    set_state(act, device, "accept", "")


VERBS = {
    "restrict": "device.edit",
    "send_to_repair": "device.repair",
    "return_from_repair": "device.repair",
    "receive": "device.edit",
    "store": "device.edit",
    "lose": "device.edit",
    "find": "device.edit",
    "lend_out": "device.place",
    "return_from_loan": "device.place",
    "dispose": "device.edit",
}


def move_on(*, device: uuid.UUID, verb: str, note: str, actor: Person, at: dt.datetime) -> None:
    """Move a device by one of the other verbs of the table; leaf ``device.moved_on``.

    Disposing of a device closes its faults and ends its plans with the same reason. Refused: role, a verb the state does not
    allow, sending out without saying why.
    """
    row = find_device(actor, device, at)
    if verb not in VERBS:
        raise Invalid("device.unknown_word", field="verb", value=verb, known=", ".join(VERBS))
    check_may(actor, VERBS[verb], row.site_id, at)
    note = required(note, "device.note_missing", "note")
    with ledger.command("device.moved_on", actor=actor, at=at, reason=note) as act:
        if verb == "dispose":
            found = Fault.objects.filter(device=row).exclude(state="closed").select_related("device")
            faults.close_by_disposal(act, found, note)
            plans.end_with_device(act, row, note)
        set_state(act, row, verb, note)
