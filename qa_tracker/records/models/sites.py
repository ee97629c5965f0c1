"""Where devices are: sites, rooms, pools and the days a site does not work."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Fact, Noun


class Site(Noun):
    """A hospital. ``weekend`` holds ISO weekdays (6 = Saturday); instructions are the site's own words."""

    code = models.CharField(max_length=12, unique=True)
    name = models.CharField(max_length=120)
    time_zone = models.CharField(max_length=60)
    weekend = models.CharField(max_length=14, default="6,7")
    digest_hour = models.PositiveSmallIntegerField(default=7)
    quiet_from_hour = models.PositiveSmallIntegerField(null=True)
    quiet_until_hour = models.PositiveSmallIntegerField(null=True)
    country = models.CharField(max_length=2, blank=True, help_text="ISO 3166-1, for public holidays")
    subdivision = models.CharField(max_length=6, blank=True, help_text="ISO 3166-2, without the country")
    remedial_instruction = models.TextField(blank=True)
    suspension_instruction = models.TextField(blank=True)


class Location(Noun):
    """A room; ``position`` is the order in which rooms are walked."""

    site = models.ForeignKey(Site, on_delete=models.DO_NOTHING, related_name="locations")
    name = models.CharField(max_length=120)
    position = models.PositiveIntegerField(default=0)
    round_the_clock = models.BooleanField(default=False)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["site", "name"], name="location_once")]


class Holiday(Fact):
    """A day a site does not work, copied as a row so that the past never changes."""

    LEDGER_FORMS = {
        1: ("id", "site_id", "day_on", "name"),
        2: ("id", "site_id", "day_on", "name", "source"),
    }

    site = models.ForeignKey(Site, on_delete=models.DO_NOTHING, related_name="holidays")
    day_on = models.DateField()
    name = models.CharField(max_length=120)
    source = models.CharField(max_length=120, blank=True, help_text="empty: added by hand")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["site", "day_on"], name="holiday_once")]


class Pool(Noun):
    """Devices shared by several sites; every member site sees them."""

    name = models.CharField(max_length=120, unique=True)


class PoolMember(Fact):
    """A site's membership of a pool."""

    LEDGER_FORMS = {1: ("id", "pool_id", "site_id")}

    pool = models.ForeignKey(Pool, on_delete=models.DO_NOTHING, related_name="members")
    site = models.ForeignKey(Site, on_delete=models.DO_NOTHING, related_name="pools")

    class Meta:
        constraints = [models.UniqueConstraint(fields=["pool", "site"], name="pool_member_once")]
