"""Doing a check: drafts, the judged preview, signing, countersigning, sending back, could not test."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Mapping
from dataclasses import dataclass, field, replace

from django.db import IntegrityError

from qa_tracker.core.errors import Conflict, Forbidden, Invalid
from qa_tracker.core.workflow import CHECK, CHECK_AWAITED, target
from qa_tracker.records import ledger
from qa_tracker.records.models import (
    Check,
    CheckPlan,
    NotTested,
    Person,
    Procedure,
    Submission,
)
from qa_tracker.records.queries import library, submissions
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.records.queries.scope import grants_of
from qa_tracker.services import finding, judging, outside, owed, plans, recording, satisfying
from qa_tracker.services.entries import REASONS, Entry, left_empty
from qa_tracker.services.guards import Grants, check_may, check_password, check_shown, required, role_for
from qa_tracker.services.judging import Judged
from qa_tracker.services.recording import Facts
from qa_tracker.services.sheets import Sheet, lay_out


@dataclass(frozen=True)
class Typed:
    """Everything typed for a check, before it is judged."""

    entries: Mapping[str, Entry]
    measured_at: dt.datetime | None = None
    test_object: uuid.UUID | None = None
    instrument: uuid.UUID | None = None
    port: str = ""
    cleaned_before: str = ""
    cleaned_after: str = ""
    partial_reason: str = ""
    remark: str = ""
    outside_reason: str = ""


@dataclass(frozen=True)
class Preview:
    """A sheet judged, with the hash that a signature on it is bound to."""

    sheet: Sheet
    judged: Judged
    facts: Facts
    shown_sha256: str
    errors: tuple[Exception, ...] = field(default=())


def sheet(
    *,
    check: uuid.UUID,
    test_object: uuid.UUID | None = None,
    instrument: uuid.UUID | None = None,
    measured_at: dt.datetime | None = None,
    actor: Person,
    at: dt.datetime,
) -> Sheet:
    """Lay out a check for entering, as measured now or at ``measured_at``. Reads only.

    Refused: out of sight, a role that may not enter it, a state that takes no submission, no edition adopted.
    """
    grants = grants_of(actor.pk)
    row = finding.check(actor, check, at, grants)
    edition = library.adopted_edition(row.procedure_id, row.site_id)
    if edition is None:
        raise Conflict("check.no_edition")
    check_may_enter(row, edition, actor=actor, at=at, grants=grants)
    return lay_out(
        row,
        edition,
        finding.test_object(actor, test_object, at, grants),
        finding.instrument(actor, instrument, at, grants),
        measured_at or at,
    )


def check_may_enter(
    check: Check, edition: EditionRow, *, actor: Person, at: dt.datetime, grants: Grants = None
) -> None:
    """Refuse who may not enter this check, and a check that takes no submission now."""
    by_user = "user" in edition.spec.performed_by
    site_id = check.site_id or check.device.site_id or actor.duties_site_id
    check_may(actor, "check.enter_user" if by_user else "check.enter", site_id, at, grants)
    target(CHECK, check.state, "submit")


def may_enter(check: Check, edition: EditionRow, *, actor: Person, at: dt.datetime) -> bool:
    """Whether the actor may enter this check now."""
    try:
        check_may_enter(check, edition, actor=actor, at=at)
    except (Forbidden, Conflict):
        return False
    return True


def preview(*, check: uuid.UUID, typed: Typed, whole: bool, actor: Person, at: dt.datetime) -> Preview:
    """Judge what was typed without writing anything; ``whole`` as for signing.

    Refused: as :func:`sheet`, and with one refusal a field (``SeveralInvalid``).
    """
    laid = sheet(
        check=check,
        test_object=typed.test_object,
        instrument=typed.instrument,
        measured_at=typed.measured_at,
        actor=actor,
        at=at,
    )
    entries = _with_partial_reason(laid, typed)
    judged = judging.judge_all(laid.asked, entries, whole=whole)
    facts = _facts(laid, typed, at)
    if whole:
        _check_facts(laid, facts, at)
        measured = facts.measured_at or at
        outside.check_window(laid.check, measured, facts.outside_reason, actor=actor, at=at)
    shown = judging.shown_sha256(str(laid.check.uid), laid.edition.content_sha256, facts.as_text(at), judged)
    return Preview(laid, judged, facts, shown)


def _with_partial_reason(laid: Sheet, typed: Typed) -> dict[str, Entry]:
    """Items left empty take the reason given for all of them."""
    entries = dict(typed.entries)
    if typed.partial_reason:
        for item in left_empty(laid.items, entries):
            entries[item.key] = replace(entries.get(item.key, Entry()), not_tested=typed.partial_reason)
    return entries


def _facts(laid: Sheet, typed: Typed, at: dt.datetime) -> Facts:
    is_outside = outside.is_outside(laid.check, typed.measured_at or at)
    accepted = typed.outside_reason.strip() if is_outside else ""
    return Facts(
        measured_at=typed.measured_at,
        test_object=laid.test_object,
        instrument=laid.instrument,
        console=laid.console,
        console_software=laid.console_software,
        port=typed.port,
        cleaned_before=typed.cleaned_before,
        cleaned_after=typed.cleaned_after,
        partial_reason=typed.partial_reason,
        remark=typed.remark,
        outside_reason=accepted,
    )


def _check_facts(laid: Sheet, facts: Facts, at: dt.datetime) -> None:
    spec, measured_at = laid.edition.spec, facts.measured_at or at
    if spec.decontamination_gate:
        required(facts.cleaned_before, "check.cleaned_before_missing", "cleaned_before")
    if spec.needs_test_object and laid.test_object is None:
        raise Invalid("check.test_object_missing", field="test_object")
    if spec.needs_instrument and laid.instrument is None:
        raise Invalid("check.instrument_missing", field="instrument", kind=spec.needs_instrument)
    if measured_at > at + dt.timedelta(minutes=5):
        raise Invalid("check.measured_in_future", field="measured_at")


def submit(
    *,
    check: uuid.UUID,
    form_uid: uuid.UUID,
    typed: Typed,
    shown_sha256: str,
    password: str,
    quarantine: bool = False,
    actor: Person,
    at: dt.datetime,
) -> Submission:
    """Sign what was done. Writes Submission, Reading, Verdict, NotTested, Signature, Check and the plan's next
    occurrence; a suspension verdict opens a Fault and owes notices; other awaited checks of the device that it
    covers are satisfied with it. Leaf ``check.submitted``.

    The same ``form_uid`` again returns the submission it made. Refused: as :func:`preview`; wrong password;
    something else than what was shown; a check submitted meanwhile; the form of another check.
    """
    known = _made_by(form_uid, check, actor)
    if known is not None:
        return known
    try:
        return _submit(check, form_uid, typed, shown_sha256, password, quarantine, actor, at)
    except (Conflict, IntegrityError):
        # The same form sent twice at once: the other one was first.
        known = _made_by(form_uid, check, actor)
        if known is None:
            raise
        return known


def _made_by(form_uid: uuid.UUID, check: uuid.UUID, actor: Person) -> Submission | None:
    known = submissions.submission_by_form(form_uid)
    if known is not None and (known.performed_by_id, known.check_of.uid) != (actor.pk, check):
        raise Conflict("check.form_used", field="form_uid")
    return known


def _submit(
    check: uuid.UUID,
    form_uid: uuid.UUID,
    typed: Typed,
    shown_sha256: str,
    password: str,
    quarantine: bool,
    actor: Person,
    at: dt.datetime,
) -> Submission:
    seen = preview(check=check, typed=typed, whole=True, actor=actor, at=at)
    check_shown(shown_sha256, seen.shown_sha256)
    check_password(actor, password)
    row = seen.sheet.check
    verb = "check.enter_user" if "user" in seen.sheet.edition.spec.performed_by else "check.enter"
    role = role_for(actor, verb, row.site_id or actor.duties_site_id, at)
    measured_at, reason = seen.facts.measured_at or at, seen.facts.outside_reason
    with ledger.command("check.submitted", actor=actor, at=at, reason=reason, measured_at=measured_at) as act:
        submission = recording.record(
            act,
            row,
            seen.sheet.edition,
            seen.judged,
            seen.facts,
            form_uid=form_uid,
            performed_by=actor,
            role=role,
            shown_sha256=seen.shown_sha256,
        )
        # Done again after it was sent back, it has opened the next occurrence already.
        if row.plan is not None and row.plan.ended_at is None and submission.number == 1:
            _open_following(act, row, row.plan, recording.local_day(row, measured_at), reason)
        satisfying.satisfy(act, seen.sheet, seen.judged, seen.facts, actor=actor)
        recording.open_faults(act, row, submission, seen.judged, actor, quarantine=quarantine)
        if seen.judged.verdict == "suspension":
            owed.owe_suspension(act, row, performed_by=actor)
        row.drafts.all().delete()
    return submission


def _open_following(act: ledger.Act, row: Check, plan: CheckPlan, done_on: dt.date, reason: str) -> None:
    """Open the next occurrence; after one accepted outside its window the plan counts from that day."""
    if reason:
        outside.re_anchor(act, plan, done_on, reason)
    else:
        plans.open_next(act, plan, after_on=row.slot_on or row.due_on, done_on=done_on)


def countersign(
    *, check: uuid.UUID, shown_sha256: str, remark: str, password: str, actor: Person, at: dt.datetime
) -> None:
    """Countersign the latest submission. Writes Signature, Check; leaf ``check.countersigned``.

    Refused: role, one's own work, wrong password, another submission than the one shown, state.
    """
    row, submission = _latest(actor, check, at)
    check_may_countersign(row, submission, actor=actor, at=at)
    check_shown(shown_sha256, submission.shown_sha256)
    check_password(actor, password)
    _second_signature(row, submission, "countersign", "countersigned", remark, actor, at)


def send_back(
    *, check: uuid.UUID, shown_sha256: str, remark: str, password: str, actor: Person, at: dt.datetime
) -> None:
    """Send the latest submission back with what is to be done. Writes Signature, Check; leaf ``check.sent_back``.

    Refused: as :func:`countersign`, and without a remark.
    """
    row, submission = _latest(actor, check, at)
    check_may_countersign(row, submission, actor=actor, at=at)
    remark = required(remark, "check.send_back_remark_missing", "remark")
    check_shown(shown_sha256, submission.shown_sha256)
    check_password(actor, password)
    _second_signature(row, submission, "send_back", "sent back", remark, actor, at)


def _latest(actor: Person, check: uuid.UUID, at: dt.datetime) -> tuple[Check, Submission]:
    row = finding.check(actor, check, at)
    submission = row.submissions.order_by("-number").first()
    if submission is None:
        raise Conflict("check.wrong_state", state=row.state, verb="countersign")
    return row, submission


def check_may_countersign(check: Check, submission: Submission, *, actor: Person, at: dt.datetime) -> None:
    """Refuse who may not countersign this: role, one's own work, a state that takes none."""
    check_may(actor, "check.countersign", check.site_id or actor.duties_site_id, at)
    if submission.performed_by_id == actor.pk:
        raise Forbidden("check.own_work")
    target(CHECK, check.state, "countersign")


def may_countersign(*, check: uuid.UUID, actor: Person, at: dt.datetime) -> Exception | None:
    """The refusal the actor would meet on countersigning, or None: the button's own words."""
    try:
        row, submission = _latest(actor, check, at)
        check_may_countersign(row, submission, actor=actor, at=at)
    except (Forbidden, Conflict) as refusal:
        return refusal
    return None


def _second_signature(
    check: Check,
    submission: Submission,
    verb: str,
    meaning: str,
    remark: str,
    actor: Person,
    at: dt.datetime,
) -> None:
    role = role_for(actor, "check.countersign", check.site_id or actor.duties_site_id, at)
    state = target(CHECK, check.state, verb)
    with ledger.command(f"check.{state}", actor=actor, at=at, reason=remark) as act:
        recording.second_signature(act, check, submission, actor, role, meaning, remark, state)


def could_not_test(
    *, check: uuid.UUID, reason: str, remark: str, actor: Person, at: dt.datetime
) -> NotTested:
    """Record an attempt that could not be made. Writes NotTested, Check; leaf ``check.not_tested``.

    "Not found" a second time opens a fault for a lost device. Refused: role, state, unknown reason.
    """
    row = finding.check(actor, check, at)
    site_id = row.site_id or actor.duties_site_id
    check_may(actor, "check.enter_user", site_id, at)
    if row.state not in CHECK_AWAITED:
        raise Conflict("check.wrong_state", state=row.state, verb="could not test")
    if reason not in REASONS:
        raise Invalid("reading.reason_unknown", field="reason", reason=reason)
    with ledger.command("check.not_tested", actor=actor, at=at, reason=reason) as act:
        return recording.not_tested(act, row, reason, remark, actor)


def open_unplanned(*, device: uuid.UUID, procedure: str, actor: Person, at: dt.datetime) -> Check:
    """Begin a check that no plan asked for. Writes Check; leaf ``check.opened``.

    Refused: role, a procedure not adopted there or not meant for this kind of device.
    """
    row = finding.device(actor, device, at)
    wanted = Procedure.objects.filter(code=procedure).first()
    site_id = row.site_id or actor.duties_site_id
    edition = library.adopted_edition(wanted.id, site_id) if wanted else None
    if wanted is None or edition is None:
        raise Conflict("plan.procedure_not_adopted", field="procedure", procedure=procedure)
    if row.kind not in edition.spec.applies_to.kinds:
        raise Invalid("check.procedure_not_for_kind", field="procedure", kind=row.kind)
    by_user = "user" in edition.spec.performed_by
    check_may(actor, "check.enter_user" if by_user else "check.enter", site_id, at)
    with ledger.command("check.opened", actor=actor, at=at) as act:
        check = act.insert(Check(device=row, procedure=wanted, site=row.site, state="started"))
        act.about(check, device=row, site=row.site)
        act.tell({"procedure": procedure})
    return check
