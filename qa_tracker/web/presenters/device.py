"""What the page of a device tells, put in words."""

from __future__ import annotations

import datetime as dt
import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _

from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.devices import ConditionRow, DeviceRow
from qa_tracker.records.queries.plans import PlanRow
from qa_tracker.services import wording
from qa_tracker.web.presenters.charts import amount_words

Specs = Mapping[str, MeasurandSpec]


@dataclass(frozen=True)
class Fact:
    """A label and what it says."""

    label: str
    says: str


def facts_of(device: DeviceRow) -> tuple[Fact, ...]:
    """Identity and register fields that are known."""
    found = [
        (_("Maker"), device.maker),
        (_("Model"), device.model),
        (_("Serial number"), device.serial),
        (_("Inventory number"), device.inventory_number),
        (_("Handheld"), _("scanner and probe in one") if device.handheld else ""),
        (_("Array"), wording.array_word(device.array_kind) if device.array_kind else ""),
        (_("Touches"), wording.contact_word(device.contact_class) if device.contact_class else ""),
        (_("Applied-part type"), device.applied_part),
        (_("Protection class"), device.protection_class),
    ]
    kept = [(wording.register_word(name), _register_words(value)) for name, value in device.register.items()]
    return tuple(Fact(str(label), says) for label, says in (*found, *kept) if says)


def _register_words(value: str) -> str:
    return _("yes") if value == "True" else value


@dataclass(frozen=True)
class ShownCondition:
    """A condition with its settings in words."""

    name: str
    frequency: str
    speed: str
    settings: tuple[Fact, ...]


def conditions_in_words(conditions: Sequence[ConditionRow]) -> tuple[ShownCondition, ...]:
    """Conditions with every setting on its own."""
    return tuple(
        ShownCondition(
            each.name,
            amount_words(each.test_frequency_mhz, "MHz") if each.test_frequency_mhz else "",
            amount_words(each.sound_speed_m_s, "m/s") if each.sound_speed_m_s else "",
            tuple(Fact(name, str(value)) for name, value in json.loads(each.settings).items()),
        )
        for each in conditions
    )


@dataclass(frozen=True)
class ShownPlan:
    """A plan in words, with its awaited check."""

    plan: PlanRow
    recurrence: str
    check: CheckRow | None
    due: str
    window: str


def plans_in_words(
    plans: Sequence[PlanRow], checks: Sequence[CheckRow], at: dt.datetime, zone: str
) -> tuple[ShownPlan, ...]:
    """Plans in force with when each is due next."""
    awaited = {each.plan_id: each for each in checks if each.state in CHECK_AWAITED}
    return tuple(
        ShownPlan(
            plan,
            wording.recurrence_words(plan.rule, plan.basis),
            awaited.get(plan.id),
            wording.due_words(awaited[plan.id], at, zone) if plan.id in awaited else "",
            window_words(plan.before_days, plan.grace_days),
        )
        for plan in plans
        if plan.ended_at is None
    )


def window_words(before: int, grace: int) -> str:
    """The window around a due day."""
    return _("from %(before)d days before to %(grace)d days after") % {"before": before, "grace": grace}


def name_of(code: str, specs: Specs) -> str:
    """The name of a measurand; its code where no adopted procedure knows it."""
    return specs[code].name if code in specs else code
