"""What is measured with: test objects and instruments."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Noun
from qa_tracker.records.models.sites import Site


class TestObject(Noun):
    """A phantom, a water bath, or air. ``nominals`` gives true values by measurand code, as text."""

    __test__ = False  # the name is the trade's; a test runner must not collect it

    site = models.ForeignKey(Site, on_delete=models.DO_NOTHING, related_name="test_objects")
    name = models.CharField(max_length=120)
    maker = models.CharField(max_length=80, blank=True)
    model = models.CharField(max_length=80, blank=True)
    serial = models.CharField(max_length=80)
    material = models.CharField(max_length=60)
    sound_speed_m_s = models.CharField(max_length=10, blank=True)
    layout_compensated = models.BooleanField(default=False)
    depth_mm = models.CharField(max_length=10, blank=True)
    nominals = models.TextField(default="{}")
    certificate_ends_on = models.DateField(null=True)
    in_use = models.BooleanField(default=True)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["maker", "model", "serial"], name="test_object_once")]


class Instrument(Noun):
    """A leakage tester, scale, thermometer or photometer with its calibration date."""

    site = models.ForeignKey(Site, on_delete=models.DO_NOTHING, related_name="instruments")
    kind = models.CharField(max_length=40)
    maker = models.CharField(max_length=80)
    model = models.CharField(max_length=80)
    serial = models.CharField(max_length=80)
    calibration_due_on = models.DateField(null=True)
    in_use = models.BooleanField(default=True)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["maker", "model", "serial"], name="instrument_once")]
