"""The fields of a plan."""

from __future__ import annotations

import datetime as dt

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from qa_tracker.core import schedule
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.records.queries.people import PersonRow
from qa_tracker.services.plans import Recurrence
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import Typed

PERIODS = (
    ("DAILY", gettext_lazy("days")),
    ("WEEKLY", gettext_lazy("weeks")),
    ("MONTHLY", gettext_lazy("months")),
    ("YEARLY", gettext_lazy("years")),
)
BASES = (
    ("calendar", gettext_lazy("by the calendar: the days stay where they are, whenever the check was done")),
    ("last_actual", gettext_lazy("counted from the day the last check was done")),
)
ROLLS = (
    ("none", gettext_lazy("keep the day")),
    ("forward", gettext_lazy("the next working day")),
    ("backward", gettext_lazy("the working day before")),
    ("nearest", gettext_lazy("the nearest working day")),
)


def plan_fields(edition: EditionRow, people: list[PersonRow], today: dt.date, me: str) -> tuple[Field, ...]:
    """What a plan is asked for, beginning with what the edition says."""
    given = edition.spec.recurrence
    rule = schedule.parse_rule(given.rule if given else "FREQ=YEARLY")
    responsible = [("", _("choose a person")), *((str(each.uid), each.name) for each in people)]
    return (
        Field("every", _("Every how many"), "whole", values=(str(rule.interval),)),
        Field(
            "period", _("Days, weeks, months or years"), "select", options=PERIODS, values=(rule.frequency,)
        ),
        Field(
            "rule",
            _("Or another rule"),
            hint=_("As RFC 5545 writes it, such as FREQ=MONTHLY;BYDAY=1MO for the first Monday."),
            required=False,
            values=() if rule.is_plain else (rule.text,),
        ),
        Field("basis", _("Counted"), "radio", options=BASES, values=("calendar",)),
        Field("anchor_on", _("First due day"), "date", values=(today.isoformat(),)),
        Field(
            "before_days",
            _("Days before on which it may already be done"),
            "whole",
            values=(str(given.before_days if given else 0),),
        ),
        Field(
            "grace_days",
            _("Days of grace after"),
            "whole",
            values=(str(given.grace_days if given else 0),),
        ),
        Field("roll", _("On a day not worked"), "select", options=ROLLS, values=("none",)),
        Field("responsible", _("Who answers for it"), "select", options=responsible, values=(me,)),
    )


def recurrence(typed: Typed) -> Recurrence:
    """The recurrence that was typed."""
    rule = typed.text("rule", 200) or schedule.Rule(typed.text("period"), typed.whole("every", 999)).text
    schedule.parse_rule(rule)
    return Recurrence(
        rule,
        typed.text("basis"),
        typed.day("anchor_on"),
        typed.whole("before_days", 366),
        typed.whole("grace_days", 366),
        typed.text("roll"),
    )
