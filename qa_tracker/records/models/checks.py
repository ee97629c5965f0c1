"""Plans, checks (the duty), and submissions (what was done: immutable, with readings and verdicts)."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import ExactField, Fact, Noun
from qa_tracker.records.models.baselines import Baseline
from qa_tracker.records.models.devices import Aperture, Condition, Device
from qa_tracker.records.models.duties import PlanRule, Team
from qa_tracker.records.models.library import Criterion, Edition, Measurand, Procedure
from qa_tracker.records.models.objects import Instrument, TestObject
from qa_tracker.records.models.people import Person
from qa_tracker.records.models.sites import Site


class CheckPlan(Noun):
    """Device x procedure x recurrence x window x who."""

    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="plans")
    procedure = models.ForeignKey(Procedure, on_delete=models.DO_NOTHING, related_name="+")
    rule = models.CharField(max_length=200)
    basis = models.CharField(max_length=12)
    anchor_on = models.DateField()
    before_days = models.PositiveSmallIntegerField()
    grace_days = models.PositiveSmallIntegerField()
    roll = models.CharField(max_length=10, default="none")
    responsible = models.ForeignKey(Person, null=True, on_delete=models.DO_NOTHING, related_name="plans")
    team = models.ForeignKey(Team, null=True, on_delete=models.DO_NOTHING, related_name="plans")
    made_by_rule = models.ForeignKey(
        PlanRule,
        null=True,
        on_delete=models.DO_NOTHING,
        related_name="plans",
        help_text="empty: made by hand",
    )
    ended_at = models.DateTimeField(null=True)


class Check(Noun):
    """One occurrence of a plan, or an unplanned check. Its site is the device's site at its time."""

    plan = models.ForeignKey(CheckPlan, null=True, on_delete=models.DO_NOTHING, related_name="checks")
    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="checks")
    procedure = models.ForeignKey(Procedure, on_delete=models.DO_NOTHING, related_name="+")
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="+")
    state = models.CharField(max_length=14)
    due_on = models.DateField(null=True)
    slot_on = models.DateField(null=True, help_text="the rule's own day, where the due day was moved by hand")
    opens_at = models.DateTimeField(null=True)
    due_at = models.DateTimeField(null=True)
    late_at = models.DateTimeField(null=True)
    overdue_at = models.DateTimeField(null=True)
    verdict = models.CharField(max_length=16, blank=True)
    verdict_level = models.CharField(max_length=12, blank=True)
    submitted_at = models.DateTimeField(null=True)
    excuse = models.CharField(max_length=300, blank=True)
    satisfied_by = models.ForeignKey(
        "self",
        null=True,
        on_delete=models.DO_NOTHING,
        related_name="satisfies",
        help_text="the check that covered it",
    )

    class Meta:
        constraints = [models.UniqueConstraint(fields=["plan", "due_on"], name="check_once")]
        indexes = [
            models.Index(fields=["state", "due_on"], name="check_by_due"),
            models.Index(fields=["device", "-id"], name="check_by_device"),
            models.Index(fields=["submitted_at", "id"], name="check_by_done"),
        ]


class CheckClock(models.Model):
    """When the sweep looks at an awaited check next, and the notice level it reaches then.

    Recomputed from the check, its plan and its site, so no leaf covers it; no row once nothing is awaited.
    """

    check_of = models.OneToOneField(
        Check, primary_key=True, on_delete=models.CASCADE, related_name="clock", db_column="check_id"
    )
    at = models.DateTimeField(db_index=True)
    level = models.CharField(max_length=12)


class Submission(Fact):
    """What was done. Amending adds submission n + 1; ``form_uid`` makes a double click one submission."""

    LEDGER_FORMS = {
        1: (
            "id", "uid", "check_id", "number", "form_uid", "edition_id", "performed_by_id", "measured_at",
            "recorded_at", "test_object_id", "instrument_id", "console_id", "console_software", "port",
            "partial_reason", "remark", "cleaned_before", "cleaned_after", "shown_sha256", "verdict",
            "verdict_level", "reason",
        )
    }  # fmt: skip

    uid = models.UUIDField(unique=True)
    check_of = models.ForeignKey(
        Check, on_delete=models.DO_NOTHING, related_name="submissions", db_column="check_id"
    )
    number = models.PositiveIntegerField()
    form_uid = models.UUIDField(unique=True)
    edition = models.ForeignKey(Edition, on_delete=models.DO_NOTHING, related_name="+")
    performed_by = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    measured_at = models.DateTimeField()
    recorded_at = models.DateTimeField()
    test_object = models.ForeignKey(TestObject, null=True, on_delete=models.DO_NOTHING, related_name="+")
    instrument = models.ForeignKey(Instrument, null=True, on_delete=models.DO_NOTHING, related_name="+")
    console = models.ForeignKey(Device, null=True, on_delete=models.DO_NOTHING, related_name="+")
    console_software = models.CharField(max_length=60, blank=True)
    port = models.CharField(max_length=20, blank=True)
    partial_reason = models.CharField(max_length=300, blank=True)
    remark = models.TextField(blank=True)
    cleaned_before = models.TextField(blank=True)
    cleaned_after = models.TextField(blank=True)
    shown_sha256 = models.CharField(max_length=64)
    verdict = models.CharField(max_length=16, blank=True)
    verdict_level = models.CharField(max_length=12, blank=True)
    reason = models.TextField(blank=True)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["check_of", "number"], name="submission_once")]


class Reading(Fact):
    """A value as entered, by submission, measurand, aperture, condition and repeat."""

    LEDGER_FORMS = {
        1: (
            "id", "submission_id", "device_id", "measurand_id", "aperture_id", "condition_id", "repeat",
            "qualifier", "entered", "scaled", "places", "unit", "origin", "condition_note", "measured_at",
        )
    }  # fmt: skip

    submission = models.ForeignKey(Submission, on_delete=models.DO_NOTHING, related_name="readings")
    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="+", db_index=False)
    measurand = models.ForeignKey(Measurand, on_delete=models.DO_NOTHING, related_name="+", db_index=False)
    aperture = models.ForeignKey(
        Aperture, null=True, on_delete=models.DO_NOTHING, related_name="+", db_index=False
    )
    condition = models.ForeignKey(
        Condition, null=True, on_delete=models.DO_NOTHING, related_name="+", db_index=False
    )
    repeat = models.PositiveSmallIntegerField(default=1)
    qualifier = models.CharField(max_length=8, default="=")
    entered = models.CharField(max_length=300)
    scaled = ExactField(null=True)
    places = models.PositiveSmallIntegerField(null=True)
    unit = models.CharField(max_length=12, blank=True)
    origin = models.CharField(max_length=8, default="typed")
    condition_note = models.TextField(blank=True)
    measured_at = models.DateTimeField()

    class Meta:
        constraints = [
            models.UniqueConstraint(
                models.F("submission"),
                models.F("measurand"),
                models.functions.Coalesce("aperture", 0),
                models.functions.Coalesce("condition", 0),
                models.F("repeat"),
                name="reading_once",
            )
        ]
        indexes = [
            models.Index(fields=["device", "measurand", "-measured_at"], name="reading_by_series"),
        ]


class Verdict(Fact):
    """The judgement of one reading, or of an item left unread, with all it was judged by."""

    LEDGER_FORMS = {
        1: (
            "id", "submission_id", "reading_id", "measurand_id", "aperture_id", "condition_id", "repeat",
            "verdict", "level", "criterion_id", "baseline_id", "reference", "quantity", "uncertainty", "rule",
            "code", "parameters", "departure", "allowance", "used", "instruction",
        )
    }  # fmt: skip

    submission = models.ForeignKey(Submission, on_delete=models.DO_NOTHING, related_name="verdicts")
    reading = models.OneToOneField(Reading, null=True, on_delete=models.DO_NOTHING, related_name="verdict")
    measurand = models.ForeignKey(Measurand, on_delete=models.DO_NOTHING, related_name="+", db_index=False)
    aperture = models.ForeignKey(
        Aperture, null=True, on_delete=models.DO_NOTHING, related_name="+", db_index=False
    )
    condition = models.ForeignKey(
        Condition, null=True, on_delete=models.DO_NOTHING, related_name="+", db_index=False
    )
    repeat = models.PositiveSmallIntegerField(default=1)
    verdict = models.CharField(max_length=16)
    level = models.CharField(max_length=12, blank=True)
    criterion = models.ForeignKey(
        Criterion, null=True, on_delete=models.DO_NOTHING, related_name="+", db_index=False
    )
    baseline = models.ForeignKey(
        Baseline, null=True, on_delete=models.DO_NOTHING, related_name="+", db_index=False
    )
    reference = models.CharField(max_length=40, blank=True)
    quantity = models.CharField(max_length=40, blank=True)
    uncertainty = models.CharField(max_length=40, blank=True)
    rule = models.CharField(max_length=10, default="simple")
    code = models.CharField(max_length=40)
    parameters = models.TextField()
    departure = models.CharField(max_length=40, blank=True)
    allowance = models.CharField(max_length=40, blank=True)
    used = models.CharField(max_length=20, blank=True)
    instruction = models.TextField(blank=True)


class FurtherVerdict(Fact):
    """What another limit of the same measurand said, where several are judged and the worst decides."""

    LEDGER_FORMS = {
        1: (
            "id", "verdict_of_id", "position", "verdict", "level", "criterion_id", "baseline_id", "reference",
            "quantity", "uncertainty", "rule", "code", "parameters", "departure", "allowance", "used",
        )
    }  # fmt: skip

    verdict_of = models.ForeignKey(Verdict, on_delete=models.DO_NOTHING, related_name="further")
    position = models.PositiveSmallIntegerField()
    verdict = models.CharField(max_length=16)
    level = models.CharField(max_length=12, blank=True)
    criterion = models.ForeignKey(Criterion, on_delete=models.DO_NOTHING, related_name="+", db_index=False)
    baseline = models.ForeignKey(
        Baseline, null=True, on_delete=models.DO_NOTHING, related_name="+", db_index=False
    )
    reference = models.CharField(max_length=40, blank=True)
    quantity = models.CharField(max_length=40, blank=True)
    uncertainty = models.CharField(max_length=40, blank=True)
    rule = models.CharField(max_length=10, default="simple")
    code = models.CharField(max_length=40)
    parameters = models.TextField()
    departure = models.CharField(max_length=40, blank=True)
    allowance = models.CharField(max_length=40, blank=True)
    used = models.CharField(max_length=20, blank=True)

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["verdict_of", "position"], name="further_verdict_once")
        ]


class NotTested(Fact):
    """An attempt that could not be made: for one item of a submission, or for the whole device."""

    LEDGER_FORMS = {
        1: ("id", "check_id", "submission_id", "measurand_id", "aperture_id", "condition_id", "reason",
            "remark", "by_id", "at")
    }  # fmt: skip

    check_of = models.ForeignKey(
        Check, on_delete=models.DO_NOTHING, related_name="not_tested", db_column="check_id"
    )
    submission = models.ForeignKey(
        Submission, null=True, on_delete=models.DO_NOTHING, related_name="not_tested"
    )
    measurand = models.ForeignKey(Measurand, null=True, on_delete=models.DO_NOTHING, related_name="+")
    aperture = models.ForeignKey(Aperture, null=True, on_delete=models.DO_NOTHING, related_name="+")
    condition = models.ForeignKey(Condition, null=True, on_delete=models.DO_NOTHING, related_name="+")
    reason = models.CharField(max_length=20)
    remark = models.CharField(max_length=300, blank=True)
    by = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    at = models.DateTimeField()


class Draft(models.Model):
    """What a person has typed and not yet signed; kept as typed, so outside the ledger."""

    check_of = models.ForeignKey(Check, on_delete=models.CASCADE, related_name="drafts", db_column="check_id")
    person = models.ForeignKey(Person, on_delete=models.CASCADE, related_name="drafts")
    form_uid = models.UUIDField()
    content = models.TextField()
    revision = models.PositiveIntegerField(default=1)
    saved_at = models.DateTimeField()

    class Meta:
        constraints = [models.UniqueConstraint(fields=["check_of", "person"], name="draft_once")]
