"""The demo's routine: who does which planned check when, what is missed, and what is left open at the end."""

from __future__ import annotations

import datetime as dt
import random
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

from qa_tracker.core.schedule import add_months
from qa_tracker.core.workflow import CHECK_AWAITED, DEVICE_USABLE
from qa_tracker.records.models import Check, CheckPlan
from qa_tracker.services import history, history_devices, plans
from qa_tracker.services.demo_follow_up import CODE as FOLLOW_UP
from qa_tracker.services.demo_world import World
from qa_tracker.services.entries import Entry
from qa_tracker.services.history import Done, Kept
from qa_tracker.services.plans import Recurrence

DAY = dt.timedelta(days=1)
MONTHLY, QUARTERLY, ANNUAL = "monthly-in-air", "quarterly-mechanical-uniformity", "annual-survey"
ELECTRICAL, DISPLAY, TOE_LOG = "electrical-safety", "display-check", "toe-leakage-log"
TECHNICIANS = {"AG": ("castellane", "dragic"), "KB": ("achterberg",), "SO": ("penhallow",)}
RULES = {1: "FREQ=MONTHLY", 3: "FREQ=MONTHLY;INTERVAL=3", 12: "FREQ=YEARLY"}
LEFT_TO_COUNTERSIGN = 16 * DAY

Before = Callable[[Check], None]
After = Callable[[Done, dt.datetime], None]


@dataclass(frozen=True)
class Rhythm:
    """How often a procedure is done, by whom, and the months after the beginning when it first is."""

    procedure: str
    months: int
    first_month: int
    before_days: int
    grace_days: int
    roll: str


YEARLY = (Rhythm(ANNUAL, 12, 10, 30, 30, "forward"), Rhythm(ELECTRICAL, 12, 11, 30, 30, "forward"))
# A probe's monthly check holds all that its quarterly one would, but for the phantom, which the survey reads.
PROBE_RHYTHMS = (Rhythm(MONTHLY, 1, 1, 7, 7, "none"), *YEARLY)
SCANNER_RHYTHMS = (
    Rhythm(DISPLAY, 3, 2, 7, 7, "none"),
    Rhythm(QUARTERLY, 3, 2, 10, 10, "forward"),
    *YEARLY,
)
FOLLOW_UP_RHYTHM = Rhythm(FOLLOW_UP, 1, 1, 7, 7, "none")


@dataclass
class Routine:
    """Plans and the people who keep them."""

    world: World
    before: dict[int, Before] = field(default_factory=dict)
    after: dict[int, After] = field(default_factory=dict)
    left_open: set[tuple[int, str]] = field(default_factory=set)
    skipped: dict[tuple[int, int], str] = field(default_factory=dict)
    plans: dict[int, list[CheckPlan]] = field(default_factory=dict)
    awaited: dict[int, Check] = field(default_factory=dict)

    def plan(self, kept: Kept, rhythm: Rhythm, day: int, at: dt.datetime) -> Check:
        """Plan a procedure so that its last occurrence falls ``day`` days from now, and wait for the first."""
        oduya, _ = self.world.person("oduya")
        today = self.world.at.date()
        behind = self.world.months - rhythm.first_month
        anchor = add_months(today + dt.timedelta(days=day), -behind)
        while anchor < at.date():
            behind -= rhythm.months
            anchor = add_months(today + dt.timedelta(days=day), -behind)
        recurrence = Recurrence(
            RULES[rhythm.months], "calendar", anchor, rhythm.before_days, rhythm.grace_days, rhythm.roll
        )
        responsible, _ = self.world.person(self.who(kept, rhythm.procedure, 0))
        plan, check = history.plan(
            self.world.past, kept, rhythm.procedure, recurrence, responsible, actor=oduya, at=at
        )
        self.plans.setdefault(kept.device.pk, []).append(plan)
        self.wait(kept, check, at)
        return check

    def month_of(self, check: Check) -> int:
        """Which month after the beginning a check belongs to."""
        day = check.due_on or self.world.at.date()
        return round((day - self.world.begun_at.date()).days / 30.44)

    def who(self, kept: Kept, procedure: str, turn: int) -> str:
        """Who does this procedure at this device; technicians of a site take turns."""
        if procedure in (ANNUAL, FOLLOW_UP):
            return "rao-lindqvist"
        if procedure == ELECTRICAL:
            return "okonjo"
        at_site = TECHNICIANS[self.world.site_code(kept)]
        return at_site[turn % len(at_site)]

    def wait(self, kept: Kept, check: Check | None, from_at: dt.datetime) -> None:
        """Let an occurrence be done around its due day, and given up when the next one opens.

        What is due today or later is left for whoever looks at the demo.
        """
        if check is None or check.due_on is None or check.opens_at is None or check.plan is None:
            return
        self.awaited[check.plan.pk] = check
        if check.due_on < self.world.at.date():
            done_at = self.moment_for(kept, check, check.due_on)
            done_at = max(done_at, check.opens_at + dt.timedelta(hours=9), from_at + dt.timedelta(minutes=30))
            self.world.timeline.put(done_at, lambda at: self.do(kept, check, at))
        following = plans.due_after(check.plan, check.due_on, days=self.world.past.days_of(check.site))
        self.world.timeline.put(following.opens_at, lambda at: self.give_up(kept, check, at))

    def moment_for(self, kept: Kept, check: Check, due_on: dt.date) -> dt.datetime:
        """A working hour near the due day, before now; the same for the same seed."""
        rng = random.Random(f"{self.world.seed}/{kept.device.serial}/{check.procedure.code}/{due_on}")
        done_on = due_on + dt.timedelta(days=rng.randint(-6, 3))
        done_on = min(done_on, self.world.at.date() - DAY)
        done_on -= dt.timedelta(days=max(0, done_on.weekday() - 4))
        hour, minute = 8 + rng.randint(0, 8), rng.randint(0, 59)
        return dt.datetime.combine(done_on, dt.time(hour, minute), dt.UTC)

    def do(self, kept: Kept, check: Check, at: dt.datetime) -> None:
        """Do an occurrence, unless the device is out of use, can't be had, or the check is left for later."""
        ended = check.plan is not None and check.plan.ended_at is not None
        if check.state not in CHECK_AWAITED or ended or kept.device.state not in DEVICE_USABLE:
            return
        month, code = self.month_of(check), check.procedure.code
        if month == self.world.months and (kept.device.pk, code) in self.left_open:
            return
        reason = self.skipped.get((kept.device.pk, month))
        if reason is None or (reason != "not_found" and code != MONTHLY):
            self.perform(kept, check, at)
        elif code == MONTHLY:
            self.could_not_test(kept, check, reason, at)

    def could_not_test(self, kept: Kept, check: Check, reason: str, at: dt.datetime) -> None:
        """An attempt without a reading; a device not found twice is lost."""
        username = self.who(kept, MONTHLY, 0)
        person, _ = self.world.person(username)
        history.not_tested(self.world.past, kept, check, reason, by=person, at=at)
        if kept.attempts == 2:
            note = "Not found twice; the ward is still looking"
            lead, _ = self.world.person("oduya")
            history_devices.move_state(self.world.past, kept, "lose", note, by=lead, at=at)

    def unplanned(self, kept: Kept, procedure: str, by: str, at: dt.datetime, **facts: Any) -> Done:
        """Open a check that no plan asked for and do it within half an hour."""
        person, _ = self.world.person(by)
        check = history.open_unplanned(self.world.past, kept, procedure, actor=person, at=at)
        return self.perform(kept, check, at + dt.timedelta(minutes=25), by, **facts)

    def perform(self, kept: Kept, check: Check, at: dt.datetime, by: str = "", **facts: Any) -> Done:
        """Do a check and, some days later, countersign it."""
        world, code, key = self.world, check.procedure.code, kept.device.pk
        nature, at_site = world.nature(kept), world.site_code(kept)
        nature.fixed["test_object_weight"] = Entry(str(world.weights_g[at_site]))
        if key in self.before:
            self.before[key](check)
        username = by or self.who(kept, code, check.pk)
        person, role = world.person(username)
        with_tester = code in (ELECTRICAL, TOE_LOG)
        told = {"instrument": world.testers[at_site] if with_tester else None} | facts
        done = history.perform(
            world.past,
            kept,
            check,
            nature.answer,
            by=person,
            role=role,
            at=at,
            facts=world.facts(kept, **told),
        )
        self.countersign_later(done, username, at)
        self.wait(kept, done.following, at)
        if key in self.after:
            self.after[key](done, at)
        return done

    def countersign_later(self, done: Done, username: str, at: dt.datetime) -> None:
        """Another physicist countersigns within days; the newest still wait."""
        peer, _ = self.world.person("oduya" if username != "oduya" else "rao-lindqvist")
        if at < self.world.at - LEFT_TO_COUNTERSIGN:
            later = at + (1 + done.check.pk % 5) * DAY
            self.world.timeline.put(
                later, lambda moment: history.countersign(self.world.past, done, by=peer, at=moment)
            )

    def give_up(self, kept: Kept, check: Check, at: dt.datetime) -> None:
        """When the next occurrence opens: missed, or excused where the device was out of use."""
        if check.state not in CHECK_AWAITED or (check.plan is not None and check.plan.ended_at is not None):
            return
        usable = kept.device.state in DEVICE_USABLE
        verb, reason = ("miss", "") if usable else ("excuse", kept.device.state)
        self.wait(kept, history.give_up(self.world.past, check, verb, reason, at), at)

    def end_plans(self, kept: Kept, reason: str, at: dt.datetime) -> None:
        """End every plan of a device that goes for good."""
        oduya, _ = self.world.person("oduya")
        for plan in self.plans.pop(kept.device.pk, []):
            history_devices.end_plan(self.world.past, plan, self.awaited[plan.pk], reason, by=oduya, at=at)
