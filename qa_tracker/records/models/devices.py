"""Scanners and probes: one table with a kind, and facts of each kind beside it."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Noun
from qa_tracker.records.models.sites import Location, Pool, Site


class Device(Noun):
    """A scanner or a probe, unique by maker, model and serial; the serial carries the history.

    ``site`` is the site that holds it now (from its open placement), empty for a pooled device.
    """

    kind = models.CharField(max_length=8)
    maker = models.CharField(max_length=80)
    model = models.CharField(max_length=80)
    serial = models.CharField(max_length=80, db_index=True)
    inventory_number = models.CharField(max_length=40, blank=True)
    handheld = models.BooleanField(default=False)
    state = models.CharField(max_length=24)
    state_note = models.CharField(max_length=300, blank=True)
    state_since = models.DateTimeField()
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="devices")
    pool = models.ForeignKey(Pool, null=True, on_delete=models.DO_NOTHING, related_name="devices")
    scanner = models.ForeignKey("self", null=True, on_delete=models.DO_NOTHING, related_name="probes")
    location = models.ForeignKey(Location, null=True, on_delete=models.DO_NOTHING, related_name="devices")
    udi = models.CharField(max_length=120, blank=True)
    owner = models.CharField(max_length=120, blank=True)
    purchased_on = models.DateField(null=True)
    warranty_ends_on = models.DateField(null=True)
    contract = models.CharField(max_length=120, blank=True)
    replacement_year = models.PositiveSmallIntegerField(null=True)
    network_title = models.CharField(max_length=64, blank=True)
    clinical_use = models.CharField(max_length=120, blank=True)
    keeper = models.CharField(max_length=120, blank=True)
    spare = models.BooleanField(default=False)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["maker", "model", "serial"], name="device_once")]


class ScannerFacts(Noun):
    """What only a scanner has."""

    device = models.OneToOneField(Device, on_delete=models.DO_NOTHING, related_name="scanner_facts")
    protection_class = models.CharField(max_length=2, default="I")
    software_version = models.CharField(max_length=60, blank=True)
    software_options = models.TextField(blank=True)
    software_since_on = models.DateField(null=True)
    presets = models.TextField(blank=True)


class ProbeFacts(Noun):
    """What only a probe has. The array kind drives which measurands make sense."""

    device = models.OneToOneField(Device, on_delete=models.DO_NOTHING, related_name="probe_facts")
    array_kind = models.CharField(max_length=20)
    contact_class = models.CharField(max_length=20)
    applied_part = models.CharField(max_length=2)
    disinfectants = models.TextField(blank=True)
    wireless = models.BooleanField(default=False)


class Aperture(Noun):
    """One radiating face of a probe (a biplane has two)."""

    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="apertures")
    name = models.CharField(max_length=40)
    elements = models.PositiveIntegerField(null=True)
    pitch_um = models.PositiveIntegerField(null=True)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["device", "name"], name="aperture_once")]


class Condition(Noun):
    """A named preset of a probe with the settings that must be the same each time."""

    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="conditions")
    name = models.CharField(max_length=80)
    test_frequency_mhz = models.CharField(max_length=10, blank=True)
    sound_speed_m_s = models.CharField(max_length=10, blank=True)
    settings = models.TextField(help_text="RFC 8785 JSON: setting to value, as text")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["device", "name"], name="condition_once")]


class Placement(Noun):
    """An interval in which a device belongs to a scanner, site or pool; loans and swaps are placements."""

    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="placements")
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="placements")
    pool = models.ForeignKey(Pool, null=True, on_delete=models.DO_NOTHING, related_name="placements")
    scanner = models.ForeignKey(
        Device, null=True, on_delete=models.DO_NOTHING, related_name="probe_placements"
    )
    location = models.ForeignKey(Location, null=True, on_delete=models.DO_NOTHING, related_name="+")
    started_at = models.DateTimeField()
    ended_at = models.DateTimeField(null=True)
    reason = models.CharField(max_length=300, blank=True)

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["device"], condition=models.Q(ended_at=None), name="one_open_placement"
            )
        ]
