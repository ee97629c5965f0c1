"""Baselines: the value a device's later readings are compared with, and the set-ups it was taken from."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import ExactField, Fact, Noun
from qa_tracker.records.models.devices import Aperture, Condition, Device
from qa_tracker.records.models.library import Measurand
from qa_tracker.records.models.objects import TestObject
from qa_tracker.records.models.people import Person


class Baseline(Noun):
    """One value for device, aperture, condition and measurand, with the key it was measured under.

    Baselines of one series on two test objects may be in force side by side; ``overlap_of`` names the one on the
    other object whose reading of the same days (``overlap_entered``) ties the two together.
    """

    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="baselines")
    aperture = models.ForeignKey(Aperture, null=True, on_delete=models.DO_NOTHING, related_name="+")
    condition = models.ForeignKey(Condition, null=True, on_delete=models.DO_NOTHING, related_name="+")
    measurand = models.ForeignKey(Measurand, on_delete=models.DO_NOTHING, related_name="+")
    epoch = models.PositiveIntegerField()
    qualifier = models.CharField(max_length=8, default="=")
    entered = models.CharField(max_length=40)
    scaled = ExactField()
    places = models.PositiveSmallIntegerField()
    unit = models.CharField(max_length=12, blank=True)
    console_model = models.CharField(max_length=80, blank=True)
    console_software = models.CharField(max_length=60, blank=True)
    test_object = models.ForeignKey(TestObject, null=True, on_delete=models.DO_NOTHING, related_name="+")
    method = models.CharField(max_length=40, blank=True)
    from_readings = models.TextField(blank=True, help_text="uids of the submissions it was taken from")
    reason = models.TextField()
    set_by = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    valid_from = models.DateTimeField()
    ended_at = models.DateTimeField(null=True)
    under_review = models.BooleanField(default=False)
    expires_on = models.DateField(null=True, help_text="the first local day on which it no longer serves")
    overlap_of = models.ForeignKey("self", null=True, on_delete=models.DO_NOTHING, related_name="overlaps")
    overlap_entered = models.CharField(max_length=40, blank=True)

    class Meta:
        constraints = [
            models.UniqueConstraint(
                models.F("device"),
                models.F("measurand"),
                models.functions.Coalesce("aperture", 0),
                models.functions.Coalesce("condition", 0),
                models.F("epoch"),
                name="baseline_once",
            )
        ]
        indexes = [models.Index(fields=["device", "measurand"], name="baseline_by_device")]


class BaselineSetup(Fact):
    """One of the independent set-ups a baseline is the mean of, in the order they were made."""

    LEDGER_FORMS = {
        1: ("id", "baseline_id", "position", "entered", "scaled", "places", "measured_on", "submission_id")
    }

    baseline = models.ForeignKey(Baseline, on_delete=models.DO_NOTHING, related_name="setups")
    position = models.PositiveSmallIntegerField()
    entered = models.CharField(max_length=40)
    scaled = ExactField()
    places = models.PositiveSmallIntegerField()
    measured_on = models.DateField()
    submission = models.ForeignKey(
        "leadline.Submission", null=True, on_delete=models.DO_NOTHING, related_name="+"
    )

    class Meta:
        constraints = [models.UniqueConstraint(fields=["baseline", "position"], name="baseline_setup_once")]
