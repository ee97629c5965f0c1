"""The demo's routine: who does which planned check when, what is missed, and what is left open at the end."""

from __future__ import annotations

import datetime as dt
import random
from collections.abc import Callable
from dataclasses import dataclass, field

from qa_tracker.core.schedule import add_months
from qa_tracker.core.workflow import CHECK_AWAITED, DEVICE_USABLE
from qa_tracker.records.models import Check
from qa_tracker.services import history, plans
from qa_tracker.services.demo_follow_up import CODE as FOLLOW_UP
from qa_tracker.services.demo_world import MONTHS, World
from qa_tracker.services.history import Done, Kept
from qa_tracker.services.judging import Entry
from qa_tracker.services.plans import Recurrence

DAY = dt.timedelta(days=1)
MONTHLY, QUARTERLY, ANNUAL = "monthly-in-air", "quarterly-mechanical-uniformity", "annual-survey"
ELECTRICAL, DISPLAY = "electrical-safety", "display-check"
TECHNICIANS = {"AG": ("castellane", "dragic"), "KB": ("achterberg",), "SO": ("penhallow",)}
LEFT_TO_COUNTERSIGN = 16 * DAY

Before = Callable[[Check, dt.datetime], None]


@dataclass(frozen=True)
class Rhythm:
    """How often a procedure is done, by whom, and the months after the beginning when it first is."""

    procedure: str
    months: int
    first_month: int
    before_days: int
    grace_days: int
    roll: str


PROBE_RHYTHMS = (
    Rhythm(MONTHLY, 1, 1, 7, 7, "none"),
    Rhythm(QUARTERLY, 3, 3, 10, 10, "forward"),
    Rhythm(ANNUAL, 12, 10, 30, 30, "forward"),
    Rhythm(ELECTRICAL, 12, 11, 30, 30, "forward"),
)
SCANNER_RHYTHMS = (Rhythm(DISPLAY, 1, 1, 7, 7, "none"), *PROBE_RHYTHMS[1:])
FOLLOW_UP_RHYTHM = Rhythm(FOLLOW_UP, 1, 1, 7, 7, "none")


@dataclass
class Routine:
    """Plans and the people who keep them."""

    world: World
    before: dict[tuple[int, str], Before] = field(default_factory=dict)
    left_open: set[tuple[int, str]] = field(default_factory=set)
    skipped: dict[tuple[int, dt.date], str] = field(default_factory=dict)
    done: list[Done] = field(default_factory=list)

    def plan(self, kept: Kept, rhythm: Rhythm, day: int, at: dt.datetime) -> Check:
        """Plan a procedure so that its last occurrence falls ``day`` days from now, and wait for the first."""
        oduya, _ = self.world.person("oduya")
        today = self.world.at.date()
        behind = MONTHS - rhythm.first_month
        anchor = add_months(today + dt.timedelta(days=day), -behind)
        every = f"FREQ=MONTHLY;INTERVAL={rhythm.months}" if rhythm.months in (3,) else "FREQ=MONTHLY"
        rule = "FREQ=YEARLY" if rhythm.months == 12 else every
        recurrence = Recurrence(rule, "calendar", anchor, rhythm.before_days, rhythm.grace_days, rhythm.roll)
        responsible, _ = self.world.person(self.who(kept, rhythm.procedure, 0))
        _, check = history.plan(
            self.world.past, kept, rhythm.procedure, recurrence, responsible, actor=oduya, at=at
        )
        self.wait(kept, check, at)
        return check

    def who(self, kept: Kept, procedure: str, turn: int) -> str:
        """Who does this procedure at this device; technicians of a site take turns."""
        if procedure in (ANNUAL, FOLLOW_UP):
            return "rao-lindqvist"
        if procedure == ELECTRICAL:
            return "okonjo"
        at_site = TECHNICIANS[self.world.site_code(kept)]
        return at_site[turn % len(at_site)]

    def wait(self, kept: Kept, check: Check | None, from_at: dt.datetime) -> None:
        """Let an occurrence be done around its due day, and given up when the next one opens."""
        if check is None or check.due_on is None or check.opens_at is None or check.plan is None:
            return
        rng = random.Random(f"{self.world.seed}/{kept.device.serial}/{check.procedure.code}/{check.due_on}")
        room = min(check.plan.before_days, check.plan.grace_days, 6)
        done_on = check.due_on + dt.timedelta(days=rng.randint(-room, room // 2))
        done_on -= dt.timedelta(days=max(0, done_on.weekday() - 4))
        hour, minute = 8 + rng.randint(0, 8), rng.randint(0, 59)
        done_at = dt.datetime.combine(done_on, dt.time(hour, minute), dt.UTC)
        done_at = max(done_at, check.opens_at + dt.timedelta(hours=9), from_at + dt.timedelta(minutes=30))
        self.world.timeline.put(done_at, lambda at: self.do(kept, check, at))
        following = plans.due_after(check.plan, check.due_on, days=self.world.past.days_of(check.site))
        self.world.timeline.put(following.opens_at, lambda at: self.give_up(kept, check, at))

    def do(self, kept: Kept, check: Check, at: dt.datetime) -> None:
        """Do an occurrence, unless the device is out of use, a story keeps it open, or it cannot be had."""
        key = (kept.device.pk, check.procedure.code)
        ended = check.plan is not None and check.plan.ended_at is not None
        if check.state not in CHECK_AWAITED or ended or kept.device.state not in DEVICE_USABLE:
            return
        if (
            key in self.left_open
            and at > self.world.at - 40 * DAY
            and (check.due_at or at) > self.world.at - 20 * DAY
        ):
            return
        reason = self.skipped.get((kept.device.pk, at.date().replace(day=1)))
        if reason and check.procedure.code == MONTHLY:
            person, _ = self.world.person(self.who(kept, MONTHLY, 0))
            history.not_tested(self.world.past, kept, check, reason, by=person, at=at)
            return
        self.perform(kept, check, at)

    def perform(self, kept: Kept, check: Check, at: dt.datetime, by: str = "", **facts: str) -> Done:
        """Do a check and, some days later, countersign it."""
        world = self.world
        code = check.procedure.code
        if (kept.device.pk, code) in self.before:
            self.before[kept.device.pk, code](check, at)
        username = by or self.who(kept, code, check.pk)
        person, role = world.person(username)
        weight = Entry(str(world.weights_g[world.site_code(kept)]))
        world.nature(kept).fixed["test_object_weight"] = weight
        tester = world.testers[world.site_code(kept)] if code == ELECTRICAL else None
        done = history.perform(
            world.past, kept, check, world.nature(kept).answer, by=person, role=role, at=at,
            facts=world.facts(kept, instrument=tester, **facts),
        )  # fmt: skip
        self.done.append(done)
        self.countersign_later(done, username, at)
        self.wait(kept, done.following, at)
        return done

    def countersign_later(self, done: Done, username: str, at: dt.datetime) -> None:
        """Another physicist countersigns within days; the newest still wait."""
        peer, _ = self.world.person("oduya" if username != "oduya" else "rao-lindqvist")
        later = at + (1 + done.check.pk % 5) * DAY
        if at < self.world.at - LEFT_TO_COUNTERSIGN:
            self.world.timeline.put(
                later, lambda moment: history.countersign(self.world.past, done, by=peer, at=moment)
            )

    def give_up(self, kept: Kept, check: Check, at: dt.datetime) -> None:
        """When the next occurrence opens: missed, or excused where the device was out of use."""
        if check.state not in CHECK_AWAITED or (check.plan is not None and check.plan.ended_at is not None):
            return
        usable = kept.device.state in DEVICE_USABLE
        following = history.give_up(
            self.world.past, check, "miss" if usable else "excuse", "" if usable else kept.device.state, at
        )
        self.wait(kept, following, at)
