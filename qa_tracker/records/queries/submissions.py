"""What was done: submissions with readings, verdicts, signatures and what could not be tested."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from dataclasses import dataclass

from qa_tracker.records.models import FurtherVerdict, NotTested, Reading, Signature, Submission, Verdict
from qa_tracker.records.queries.library import CriterionRow, criteria_by_id
from qa_tracker.records.queries.people import names


@dataclass(frozen=True)
class VerdictRow:
    """A verdict with all it was judged by; ``parameters`` feed its sentence.

    ``further`` is what other limits of the same measurand said: of them all the worst decides.
    """

    id: int
    verdict: str
    level: str
    code: str
    parameters: dict[str, str]
    criterion: CriterionRow | None
    baseline_id: int | None
    reference: str
    quantity: str
    uncertainty: str
    rule: str
    departure: str
    allowance: str
    used: str
    instruction: str
    further: tuple[VerdictRow, ...] = ()


@dataclass(frozen=True)
class ReadingRow:
    """A reading as entered, with its verdict; ``entered`` is empty for an item left unread."""

    id: int | None
    measurand: str
    aperture_id: int | None
    aperture: str
    condition_id: int | None
    condition: str
    repeat: int
    qualifier: str
    entered: str
    scaled: int | None
    places: int | None
    unit: str
    origin: str
    condition_note: str
    measured_at: dt.datetime | None
    verdict: VerdictRow | None


@dataclass(frozen=True)
class SignatureRow:
    """Who signed, when, and what for."""

    uid: uuid.UUID
    person_id: int
    name: str
    role: str
    meaning: str
    at: dt.datetime
    shown_sha256: str
    remark: str


@dataclass(frozen=True)
class NotTestedRow:
    """An attempt that could not be made."""

    measurand: str
    aperture: str
    condition: str
    reason: str
    remark: str
    name: str
    at: dt.datetime


@dataclass(frozen=True)
class SubmissionRow:
    """One submission of a check."""

    id: int
    uid: uuid.UUID
    number: int
    edition_id: int
    performed_by_id: int
    performed_by: str
    measured_at: dt.datetime
    recorded_at: dt.datetime
    test_object: str
    instrument: str
    console: str
    console_software: str
    port: str
    partial_reason: str
    remark: str
    cleaned_before: str
    cleaned_after: str
    shown_sha256: str
    verdict: str
    verdict_level: str
    reason: str
    leaf_uid: uuid.UUID
    readings: tuple[ReadingRow, ...]
    not_tested: tuple[NotTestedRow, ...]
    signatures: tuple[SignatureRow, ...]


def _verdict_row(
    said: Verdict | FurtherVerdict,
    criteria: dict[int, CriterionRow],
    further: tuple[VerdictRow, ...] = (),
) -> VerdictRow:
    return VerdictRow(
        said.id, said.verdict, said.level, said.code, json.loads(said.parameters),
        criteria.get(said.criterion_id or 0), said.baseline_id, said.reference, said.quantity,
        said.uncertainty, said.rule, said.departure, said.allowance, said.used,
        said.instruction if isinstance(said, Verdict) else "", further,
    )  # fmt: skip


def _reading_row(reading: Reading, verdict: VerdictRow | None) -> ReadingRow:
    return ReadingRow(
        reading.id, reading.measurand.code,
        reading.aperture_id, reading.aperture.name if reading.aperture else "",
        reading.condition_id, reading.condition.name if reading.condition else "",
        reading.repeat, reading.qualifier, reading.entered, reading.scaled, reading.places, reading.unit,
        reading.origin, reading.condition_note, reading.measured_at, verdict,
    )  # fmt: skip


def _unread_row(verdict: Verdict, row: VerdictRow) -> ReadingRow:
    return ReadingRow(
        None, verdict.measurand.code,
        verdict.aperture_id, verdict.aperture.name if verdict.aperture else "",
        verdict.condition_id, verdict.condition.name if verdict.condition else "",
        verdict.repeat, "=", "", None, None, "", "", "", None, row,
    )  # fmt: skip


def _readings(submission_ids: list[int]) -> dict[int, list[ReadingRow]]:
    joins = ("measurand", "aperture", "condition")
    verdicts = list(
        Verdict.objects.filter(submission_id__in=submission_ids).select_related(*joins).order_by("id")
    )
    beside = list(
        FurtherVerdict.objects.filter(verdict_of__submission_id__in=submission_ids).order_by(
            "verdict_of_id", "position"
        )
    )
    criteria = criteria_by_id({v.criterion_id for v in (*verdicts, *beside) if v.criterion_id})
    further: dict[int, list[VerdictRow]] = {}
    for each in beside:
        further.setdefault(each.verdict_of_id, []).append(_verdict_row(each, criteria))
    told = {v.id: _verdict_row(v, criteria, tuple(further.get(v.id, ()))) for v in verdicts}
    by_reading = {v.reading_id: told[v.id] for v in verdicts if v.reading_id}
    rows: dict[int, list[ReadingRow]] = {}
    for reading in (
        Reading.objects.filter(submission_id__in=submission_ids).select_related(*joins).order_by("id")
    ):
        row = _reading_row(reading, by_reading.get(reading.id))
        rows.setdefault(reading.submission_id, []).append(row)
    for verdict in verdicts:
        if verdict.reading_id is None:
            row = _unread_row(verdict, told[verdict.id])
            rows.setdefault(verdict.submission_id, []).append(row)
    return rows


def _signature_row(signature: Signature) -> SignatureRow:
    return SignatureRow(
        signature.uid, signature.person_id, signature.person.name, signature.role, signature.meaning,
        signature.at, signature.shown_sha256, signature.remark,
    )  # fmt: skip


def signatures_of(subject_uid: uuid.UUID, until: dt.datetime | None = None) -> list[SignatureRow]:
    """Signatures on one thing, oldest first."""
    found = Signature.objects.filter(subject_uid=subject_uid).select_related("person").order_by("id")
    if until is not None:
        found = found.filter(at__lte=until)
    return [_signature_row(signature) for signature in found]


def _not_tested_row(row: NotTested) -> NotTestedRow:
    return NotTestedRow(
        row.measurand.code if row.measurand else "",
        row.aperture.name if row.aperture else "",
        row.condition.name if row.condition else "",
        row.reason, row.remark, row.by.name, row.at,
    )  # fmt: skip


def attempts_of(check_id: int, until: dt.datetime | None = None) -> list[NotTestedRow]:
    """Attempts at a check that could not be made for the whole device."""
    found = NotTested.objects.filter(check_of_id=check_id, submission=None)
    if until is not None:
        found = found.filter(at__lte=until)
    return [_not_tested_row(row) for row in found.select_related("by").order_by("id")]


def _instrument_words(submission: Submission) -> str:
    used = submission.instrument
    return f"{used.maker} {used.model} {used.serial}" if used else ""


def submissions_of(check_ids: list[int], until: dt.datetime | None = None) -> dict[int, list[SubmissionRow]]:
    """Submissions of checks, oldest first, up to the moment they were recorded."""
    found = Submission.objects.filter(check_of_id__in=check_ids).order_by("check_of_id", "number")
    if until is not None:
        found = found.filter(recorded_at__lte=until)
    submissions = list(found.select_related("test_object", "instrument", "console"))
    ids = [submission.id for submission in submissions]
    readings, people = _readings(ids), names({s.performed_by_id for s in submissions})
    signatures: dict[int, list[SignatureRow]] = {}
    signed = Signature.objects.filter(submission_id__in=ids).select_related("person").order_by("id")
    for signature in signed if until is None else signed.filter(at__lte=until):
        signatures.setdefault(signature.submission_id or 0, []).append(_signature_row(signature))
    untested: dict[int, list[NotTestedRow]] = {}
    joins = ("measurand", "aperture", "condition", "by")
    for row in NotTested.objects.filter(submission_id__in=ids).select_related(*joins).order_by("id"):
        untested.setdefault(row.submission_id or 0, []).append(_not_tested_row(row))
    rows: dict[int, list[SubmissionRow]] = {}
    for each in submissions:
        rows.setdefault(each.check_of_id, []).append(
            SubmissionRow(
                each.id,
                each.uid,
                each.number,
                each.edition_id,
                each.performed_by_id,
                people.get(each.performed_by_id, ""),
                each.measured_at,
                each.recorded_at,
                f"{each.test_object.name} {each.test_object.serial}" if each.test_object else "",
                _instrument_words(each),
                f"{each.console.model} {each.console.serial}" if each.console else "",
                each.console_software,
                each.port,
                each.partial_reason,
                each.remark,
                each.cleaned_before,
                each.cleaned_after,
                each.shown_sha256,
                each.verdict,
                each.verdict_level,
                each.reason,
                each.leaf_id,
                tuple(readings.get(each.id, ())),
                tuple(untested.get(each.id, ())),
                tuple(signatures.get(each.id, ())),
            )
        )
    return rows


def submission_by_form(form_uid: uuid.UUID) -> Submission | None:
    """The submission a form made, for use inside commands: the same form twice is one submission."""
    return Submission.objects.filter(form_uid=form_uid).select_related("check_of").first()
