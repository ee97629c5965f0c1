"""The rows of a submission and of what follows from it; one code for live checks and for history."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from dataclasses import dataclass

from qa_tracker.core.canonical import canonical
from qa_tracker.core.decimals import plain
from qa_tracker.core.schedule import local_day as core_local_day
from qa_tracker.core.workflow import CHECK, target
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import (
    Check,
    Device,
    FurtherVerdict,
    Instrument,
    NotTested,
    Person,
    Reading,
    Signature,
    Submission,
    TestObject,
    Verdict,
)
from qa_tracker.records.queries.library import EditionRow, measurand_ids
from qa_tracker.records.writers import new_row
from qa_tracker.services import clocks, faults
from qa_tracker.services.items import Item
from qa_tracker.services.judging import Judged, JudgedItem
from qa_tracker.services.states import set_state
from qa_tracker.services.weighing import Weighed


@dataclass(frozen=True)
class Facts:
    """What a check was measured with, and when."""

    measured_at: dt.datetime | None = None
    test_object: TestObject | None = None
    instrument: Instrument | None = None
    console: Device | None = None
    console_software: str = ""
    port: str = ""
    cleaned_before: str = ""
    cleaned_after: str = ""
    partial_reason: str = ""
    remark: str = ""
    outside_reason: str = ""

    def as_text(self, at: dt.datetime) -> dict[str, str | None]:
        """The facts as a signer is shown them; a moment left open is that of signing, and is not part of it.

        Why it is accepted outside its window is there only where it is: what was shown before stays the same.
        """
        accepted = {"outside_reason": self.outside_reason} if self.outside_reason else {}
        return accepted | {
            "measured_at": self.measured_at.isoformat() if self.measured_at else None,
            "test_object": str(self.test_object.uid) if self.test_object else None,
            "instrument": str(self.instrument.uid) if self.instrument else None,
            "console": str(self.console.uid) if self.console else None,
            "console_software": self.console_software,
            "port": self.port,
            "cleaned_before": self.cleaned_before,
            "cleaned_after": self.cleaned_after,
            "partial_reason": self.partial_reason,
            "remark": self.remark,
        }


def read_json(text: str) -> dict[str, str]:
    """Stored canonical JSON of names and texts, read."""
    read: dict[str, str] = json.loads(text)
    return read


def local_day(check: Check, moment: dt.datetime) -> dt.date:
    """The day at the check's site."""
    return core_local_day(moment, check.site.time_zone if check.site else "UTC")


def record(
    act: ledger.Act,
    check: Check,
    edition: EditionRow,
    judged: Judged,
    facts: Facts,
    *,
    form_uid: uuid.UUID,
    performed_by: Person,
    role: str,
    shown_sha256: str,
    number: int | None = None,
    codes: dict[str, int] | None = None,
) -> Submission:
    """Insert a submission with readings, verdicts and signature, and move the check."""
    if number is None:
        number = check.submissions.count() + 1
    submission = act.insert(
        Submission(
            uid=uuid7(),
            check_of=check,
            number=number,
            form_uid=form_uid,
            edition_id=edition.id,
            performed_by=performed_by,
            measured_at=facts.measured_at or act.at,
            recorded_at=act.at,
            test_object=facts.test_object,
            instrument=facts.instrument,
            console=facts.console,
            console_software=facts.console_software,
            port=facts.port,
            partial_reason=facts.partial_reason,
            remark=facts.remark,
            cleaned_before=facts.cleaned_before,
            cleaned_after=facts.cleaned_after,
            shown_sha256=shown_sha256,
            verdict=judged.verdict,
            verdict_level=judged.level,
            reason=facts.outside_reason,
        )
    )
    ids = codes or measurand_ids()
    for one in judged.items:
        _record_item(act, check, submission, one, ids[one.item.spec.code])
    _sign(act, submission, performed_by, role, "performed", "")
    act.change(
        check,
        state=target(CHECK, check.state, "submit"),
        verdict=judged.verdict,
        verdict_level=judged.level,
        submitted_at=act.at,
    )
    if act.origin == "live":
        clocks.stop(check)
    act.about(check, device=check.device, site=check.site)
    act.tell(_told(edition, judged, facts, act.at, submission))
    return submission


def _record_item(
    act: ledger.Act, check: Check, submission: Submission, one: JudgedItem, measurand_id: int
) -> None:
    item, entry = one.item, one.entry
    key = {
        "measurand_id": measurand_id,
        "aperture_id": item.aperture.id if item.aperture else None,
        "condition_id": item.condition.id if item.condition else None,
    }
    reading = None
    if one.is_read:
        reading = act.insert(
            new_row(
                Reading,
                submission_id=submission.pk,
                device_id=check.device_id,
                repeat=item.repeat,
                qualifier=entry.qualifier,
                entered=one.exact.entered if one.exact else entry.text,
                scaled=one.exact.scaled if one.exact else None,
                places=one.exact.places if one.exact else None,
                unit=item.spec.unit,
                origin=entry.origin,
                condition_note=entry.condition_note,
                measured_at=submission.measured_at,
                **key,
            )
        )
    elif entry.not_tested:
        act.insert(
            NotTested(
                check_of=check,
                submission=submission,
                reason=entry.not_tested,
                remark=entry.remark,
                by=submission.performed_by,
                at=act.at,
                **key,
            )
        )
    if one.weighed is None:
        return
    verdict = act.insert(
        new_row(
            Verdict,
            submission_id=submission.pk,
            reading_id=reading.pk if reading else None,
            repeat=item.repeat,
            instruction=one.instruction,
            **said_columns(one.weighed, item),
            **key,
        )
    )
    for position, each in enumerate(one.further, start=1):
        act.insert(
            new_row(FurtherVerdict, verdict_of_id=verdict.pk, position=position, **said_columns(each, item))
        )


def said_columns(weighed: Weighed, item: Item) -> dict[str, object]:
    """What a limit said of a reading, as columns, with all it was judged by."""
    judgement = weighed.judgement
    numbers = {name: getattr(judgement, name) for name in ("departure", "allowance", "used")}
    return {
        "verdict": judgement.verdict,
        "level": judgement.level or "",
        "criterion_id": weighed.criterion.id,
        "baseline_id": item.baseline.id if item.baseline and weighed.basis == "baseline" else None,
        "reference": weighed.reference if weighed.basis in ("nominal", "ratio") else "",
        "quantity": item.quantity,
        "uncertainty": weighed.uncertainty,
        "rule": weighed.rule,
        "code": str(judgement.code),
        "parameters": canonical(judgement.parameters).decode(),
        **{name: "" if number is None else plain(number) for name, number in numbers.items()},
    }


def _sign(
    act: ledger.Act, submission: Submission, person: Person, role: str, meaning: str, remark: str
) -> Signature:
    return act.insert(
        Signature(
            uid=uuid7(),
            person=person,
            role=role,
            meaning=meaning,
            at=act.at,
            subject_type="submission",
            subject_uid=submission.uid,
            submission=submission,
            shown_sha256=submission.shown_sha256,
            remark=remark,
        )
    )


def _told(
    edition: EditionRow, judged: Judged, facts: Facts, at: dt.datetime, submission: Submission
) -> dict[str, object]:
    """What the leaf says: values as text exactly as entered, with unit and verdict."""
    return {
        "submission": str(submission.uid),
        "number": submission.number,
        "edition": {"procedure": edition.code, "number": edition.number, "sha256": edition.content_sha256},
        "facts": facts.as_text(at),
        "verdict": judged.verdict,
        "level": judged.level,
        "meaning": "performed",
        "shown_sha256": submission.shown_sha256,
        "readings": [
            {
                "measurand": one.item.spec.code,
                "aperture": one.item.aperture.name if one.item.aperture else None,
                "condition": one.item.condition.name if one.item.condition else None,
                "repeat": one.item.repeat,
                "qualifier": one.entry.qualifier,
                "entered": one.entry.text,
                "unit": one.item.spec.unit,
                "not_tested": one.entry.not_tested or None,
                "verdict": one.judgement.verdict if one.judgement else None,
                "criterion": one.criterion.code if one.criterion else None,
                **_further_told(one),
            }
            for one in judged.items
            if one.is_read or one.entry.not_tested or one.judgement
        ],
    }


def _further_told(one: JudgedItem) -> dict[str, object]:
    """What further limits said; left out of a leaf where only one judges, as it was before there were others."""
    if not one.further:
        return {}
    return {"further": {each.criterion.code: each.judgement.verdict for each in one.further}}


def second_signature(
    act: ledger.Act,
    check: Check,
    submission: Submission,
    person: Person,
    role: str,
    meaning: str,
    remark: str,
    state: str,
) -> None:
    """The rows of a countersignature or of sending back."""
    _sign(act, submission, person, role, meaning, remark)
    act.change(check, state=state)
    if state == "sent_back" and act.origin == "live":
        clocks.start_again(check, act.at)
    act.about(check, device=check.device, site=check.site)
    act.tell(
        {
            "submission": str(submission.uid),
            "meaning": meaning,
            "shown_sha256": submission.shown_sha256,
            "state": state,
        }
    )


def open_faults(
    act: ledger.Act,
    check: Check,
    submission: Submission,
    judged: Judged,
    by: Person,
    *,
    quarantine: bool,
) -> None:
    """A suspension verdict opens a fault; with ``quarantine`` the device also leaves use, in the same leaf."""
    if judged.verdict != "suspension" and not quarantine:
        return
    told, subject = act.new, act.subject
    seen = _finding_words(judged)
    faults.add_fault(act, check.device, grade="suspension", seen=seen, by=by, submission=submission)
    if quarantine and check.device.state != "quarantined":
        set_state(act, check.device, "quarantine", seen)
    act.about(subject, device=check.device, site=check.site)
    act.tell({**told, "fault": seen, "quarantined": quarantine})


def _finding_words(judged: Judged) -> str:
    worst = judged.worst
    if worst is None:
        return "Quarantined at the check"
    where = f", {worst.item.aperture.name}" if worst.item.aperture else ""
    unit = "" if worst.item.spec.unit == "1" else f" {worst.item.spec.unit}"
    return f"{worst.item.spec.name}{where}: {worst.entry.text or worst.entry.qualifier}{unit}"


def not_tested(
    act: ledger.Act, check: Check, reason: str, remark: str, by: Person, before: int | None = None
) -> NotTested:
    """The rows of an attempt that could not be made; "not found" twice opens a fault.

    ``before`` counts earlier attempts that didn't find the device, where the caller knows.
    """
    if before is None:
        attempts = NotTested.objects.filter(check_of__device=check.device, submission=None)
        before = attempts.filter(reason="not_found").count()
    attempt = act.insert(NotTested(check_of=check, reason=reason, remark=remark, by=by, at=act.at))
    if reason == "not_found" and before == 1:
        faults.add_fault(act, check.device, grade="remedial", seen="Not found twice: is it lost?", by=by)
    act.about(check, device=check.device, site=check.site)
    act.tell({"reason": reason, "remark": remark, "attempt": before + 1 if reason == "not_found" else None})
    return attempt
