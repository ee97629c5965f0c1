"""Shapes of checks: the duty, what is typed for it, and its signatures."""

from __future__ import annotations

import datetime as dt
import uuid

from ninja import Schema
from pydantic import model_validator

from qa_tracker.api.judged_shapes import ItemOut, NotTestedOut, SubmissionOut
from qa_tracker.api.schemas import Given, Mark, Moment, Secret, Sha256, Short, Words


class CheckOut(Schema):
    """A check as a duty; `slot_on` is the plan's own day where the due day was moved by hand."""

    uid: uuid.UUID
    device_uid: uuid.UUID
    device_label: str
    device_kind: str
    device_state: str
    procedure_code: str
    procedure: str
    site_code: str
    location: str
    scanner_label: str
    responsible: str
    state: str
    due_on: dt.date | None
    slot_on: dt.date | None
    opens_at: Moment | None
    due_at: Moment | None
    late_at: Moment | None
    overdue_at: Moment | None
    verdict: str
    verdict_level: str
    submitted_at: Moment | None
    excuse: str
    satisfied_by: uuid.UUID | None


class DueOut(CheckOut):
    """A check that is due, with how it stands today in words."""

    due_words: str


class WholeCheckOut(CheckOut):
    """A check with all that was done for it; `satisfies` names the other checks that it satisfied."""

    satisfies: list[uuid.UUID]
    submissions: list[SubmissionOut]
    attempts: list[NotTestedOut]


class CheckPage(Schema):
    """One page of checks."""

    items: list[CheckOut]
    next: int | None


class AskedOut(Schema):
    """What a check asks, by which edition."""

    procedure_code: str
    procedure: str
    edition: int
    edition_sha256: str
    decontamination_gate: bool
    needs_test_object: bool
    needs_instrument: str | None
    steps: list[str]
    console: str
    console_software: str
    items: list[ItemOut]


class EntryIn(Given):
    """What is given for one item: text with its unit ("1" where there is none), or why it was not tested."""

    text: Short = ""
    unit: Mark = ""
    qualifier: Mark = "="
    not_tested: Mark = ""
    remark: Short = ""
    condition_note: Short = ""
    confirmed: bool = False

    @model_validator(mode="after")
    def has_a_unit(self) -> EntryIn:
        """No number without its unit."""
        if self.text and not self.unit:
            raise ValueError('give the unit with the text; "1" where the item has none')
        return self


class TypedIn(Given):
    """Everything given for a check; `entries` by item key.

    `outside_reason` says why a physicist accepts what was measured before the window.
    """

    entries: dict[str, EntryIn]
    measured_at: Moment | None = None
    test_object: uuid.UUID | None = None
    instrument: uuid.UUID | None = None
    port: Mark = ""
    cleaned_before: Short = ""
    cleaned_after: Short = ""
    partial_reason: Mark = ""
    remark: Words = ""
    outside_reason: Short = ""


class JudgeIn(TypedIn):
    """What to judge; `whole` as for signing, otherwise items left empty are left out."""

    whole: bool = True


class SubmitIn(TypedIn):
    """What to sign: the same as was judged, the hash of what was shown, and the password again.

    The same `form_uid` again answers the submission it made.
    """

    form_uid: uuid.UUID
    shown_sha256: Sha256
    password: Secret
    quarantine: bool = False


class SecondSignatureIn(Given):
    """A signature on the latest submission."""

    shown_sha256: Sha256
    remark: Words = ""
    password: Secret


class NotTestedIn(Given):
    """Why a check could not be done."""

    reason: Mark
    remark: Short = ""


class UnplannedIn(Given):
    """The procedure of a check that no plan asked for."""

    procedure: Mark
