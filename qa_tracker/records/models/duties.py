"""Who does checks besides one person: teams with a rota, leave with its deputy; and the rules that make plans."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Noun
from qa_tracker.records.models.devices import Device
from qa_tracker.records.models.library import Procedure
from qa_tracker.records.models.people import Person
from qa_tracker.records.models.sites import Site


class Team(Noun):
    """People who share duties. With a rota one member has the turn, in order of position; without, all have it."""

    name = models.CharField(max_length=80, unique=True)
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="teams")
    rota_weeks = models.PositiveSmallIntegerField(default=0, help_text="weeks of one turn; 0: no rota")
    rota_from_on = models.DateField(null=True, help_text="day on which the first member's first turn begins")
    ended_at = models.DateTimeField(null=True)


class TeamMember(Noun):
    """A person's membership of a team, from a day until a day."""

    team = models.ForeignKey(Team, on_delete=models.DO_NOTHING, related_name="members")
    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="teams")
    position = models.PositiveSmallIntegerField(default=0)
    from_on = models.DateField()
    until_on = models.DateField(null=True, help_text="last day")


class Leave(Noun):
    """Days on which someone is away, both included, and who stands in for them."""

    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="leaves")
    deputy = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="deputises")
    from_on = models.DateField()
    until_on = models.DateField()
    note = models.CharField(max_length=300, blank=True)
    cancelled_at = models.DateTimeField(null=True)


class PlanRule(Noun):
    """Which devices get which procedure, how often and by whom; empty facts of the device mean any."""

    name = models.CharField(max_length=120)
    device_kind = models.CharField(max_length=8)
    array_kinds = models.CharField(max_length=200, blank=True, help_text="separated by commas")
    contact_class = models.CharField(max_length=20, blank=True)
    clinical_use = models.CharField(max_length=120, blank=True)
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="+")
    procedure = models.ForeignKey(Procedure, on_delete=models.DO_NOTHING, related_name="+")
    rule = models.CharField(max_length=200)
    basis = models.CharField(max_length=12)
    anchor_on = models.DateField(null=True, help_text="empty: the day the device came into use")
    before_days = models.PositiveSmallIntegerField()
    grace_days = models.PositiveSmallIntegerField()
    roll = models.CharField(max_length=10, default="none")
    responsible = models.ForeignKey(Person, null=True, on_delete=models.DO_NOTHING, related_name="+")
    team = models.ForeignKey(Team, null=True, on_delete=models.DO_NOTHING, related_name="+")
    ended_at = models.DateTimeField(null=True)


class PlanException(Noun):
    """A device that a rule leaves out, by hand and with the reason."""

    plan_rule = models.ForeignKey(PlanRule, on_delete=models.DO_NOTHING, related_name="exceptions")
    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="plan_exceptions")
    reason = models.CharField(max_length=300)
    ended_at = models.DateTimeField(null=True)

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["plan_rule", "device"], condition=models.Q(ended_at=None), name="one_plan_exception"
            )
        ]
