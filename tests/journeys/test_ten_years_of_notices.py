"""Ten years in six time zones: what the sweep owes equals a small model that knows days, zones and nothing else.

The model is written without the program's schedule and ladder. The sweeps step from clock to clock; checks are done
early, on the day, late, overdue or not at all; leads change; for three weeks nothing sweeps.
"""

from __future__ import annotations

import datetime as dt
import itertools
from dataclasses import dataclass
from functools import cache
from zoneinfo import ZoneInfo

import pytest
from django.db.models import Min
from django.utils.timezone import now

from qa_tracker.records import ledger
from qa_tracker.records.models import Check, CheckClock, Notice, SweepGap
from qa_tracker.records.queries.ledger import every_leaf
from qa_tracker.services import clocks, plans, sites, sweep
from qa_tracker.services.devices import Place
from tests import builders

ONE_DAY = dt.timedelta(days=1)
FIRST, LAST = dt.date(2015, 5, 31), dt.date(2025, 5, 31)
NEW_LEAD_ON = dt.date(2020, 7, 1)
OUTAGE = dt.datetime(2018, 10, 20, 5, 17, tzinfo=dt.UTC), dt.datetime(2018, 11, 11, 9, 30, tzinfo=dt.UTC)
BEFORE, GRACE = 3, 2
PROCEDURES = (builders.MONTHLY, "user-check", "quarterly-mechanical-uniformity")

# Days on which clocks change there (most years), as a rule and as a plain question about a day.
CHANGES = {
    "Europe/London": ("BYMONTH=3,10;BYDAY=-1SU", lambda d: d.month in (3, 10) and last(d, 6)),
    "America/New_York": ("BYMONTH=3,11;BYDAY=2SU", lambda d: d.month in (3, 11) and nth(d, 6, 2)),
    "Australia/Lord_Howe": ("BYMONTH=4,10;BYDAY=1SU", lambda d: d.month in (4, 10) and nth(d, 6, 1)),
    "Asia/Kolkata": ("BYMONTH=1,7;BYDAY=1MO", lambda d: d.month in (1, 7) and nth(d, 0, 1)),
    "America/Sao_Paulo": ("BYMONTH=2,10;BYDAY=3SU", lambda d: d.month in (2, 10) and nth(d, 6, 3)),
    "Pacific/Auckland": ("BYMONTH=4,9;BYDAY=1SU,-1SU", lambda d: d.month in (4, 9) and (nth(d, 6, 1) or last(d, 6))),
}  # fmt: skip


def nth(day, weekday, number):
    return day.weekday() == weekday and (day.day - 1) // 7 + 1 == number


def last(day, weekday):
    return day.weekday() == weekday and (day + 7 * ONE_DAY).month != day.month


def month_end(day):
    return (day + ONE_DAY).day == 1


def quarter_end(day):
    return month_end(day) and day.month % 3 == 2


def leap_day(day):
    return day.month == 2 and month_end(day)


# When each occurrence is done, in hours after its due day begins; None: never.
DEEDS = (-50, 10, None, 30, -20, 100, 5, None)


# The model


@cache
def midnight(day, zone):
    """The first minute of a local day, found by halving."""
    here = ZoneInfo(zone)
    low = dt.datetime(day.year, day.month, day.day, tzinfo=dt.UTC) - dt.timedelta(hours=30)
    early, late = 0, 60 * 60
    while early < late:
        middle = (early + late) // 2
        if (low + dt.timedelta(minutes=middle)).astimezone(here).date() < day:
            early = middle + 1
        else:
            late = middle
    return low + dt.timedelta(minutes=early)


def level_moments(due_on, zone):
    days = {"upcoming": -BEFORE, "due": 0, "late": 1, "overdue": GRACE + 1, "t1": GRACE + 8, "t2": GRACE + 15}
    return {level: midnight(due_on + count * ONE_DAY, zone) for level, count in days.items()}


def told(level, local_day):
    lead = "lead-after" if local_day >= NEW_LEAD_ON else "lead-before"
    return {
        **{each: ["responsible"] for each in ("upcoming", "due", "late")},
        "overdue": ["responsible", lead],
        "t1": [lead, "physicist"],
        "t2": ["physicist"],
    }[level]


def deed_at(number, due_on, zone):
    hours = DEEDS[number % len(DEEDS)]
    if hours is None:
        return None
    done = midnight(due_on, zone) + dt.timedelta(hours=hours)
    return None if OUTAGE[0] - ONE_DAY <= done <= OUTAGE[1] else done


def seen_at(moment):
    """When a moment is swept: at once, or at the end of the outage."""
    return OUTAGE[1] if OUTAGE[0] <= moment < OUTAGE[1] else moment


def expected_of(zone, days, end):
    """(due day, level, person, moment, skipped) of every notice of one plan, and the due days that were missed."""
    found, missed = set(), set()
    for number, (due_on, next_on) in enumerate(itertools.pairwise(days)):
        gone_at = seen_at(midnight(next_on - BEFORE * ONE_DAY, zone))
        done_at = deed_at(number, due_on, zone)
        if done_at is None and gone_at < end:
            missed.add(due_on)
        until = min(gone_at, done_at or gone_at, end)
        by_sweep: dict = {}
        for level, moment in level_moments(due_on, zone).items():
            if seen_at(moment) < until:
                by_sweep.setdefault(seen_at(moment), []).append(level)
        for moment, levels in by_sweep.items():
            day, named = moment.astimezone(ZoneInfo(zone)).date(), {}
            for level in levels:
                for person in told(level, day):
                    named.setdefault(person, []).append(level)
            for person, (*skipped, level) in named.items():
                found.add((due_on, level, person, moment, ",".join(skipped)))
    return found, missed


# The same by the program


@dataclass(frozen=True)
class Planned:
    zone: str
    plan: object
    days: list


def hospital(ward, number, zone):
    """A site with its people: names by what the model calls them."""
    at = now()
    site = sites.create(code=f"Z{number}", name=zone, time_zone=zone, actor=ward.admin, at=at)
    since = {"from_on": FIRST - 365 * ONE_DAY}
    person = {
        "responsible": builders.person(ward.admin, f"tech{number}", "technician", site, **since),
        "physicist": builders.person(ward.admin, f"phys{number}", "physicist", site, **since),
        "lead-after": builders.person(ward.admin, f"late{number}", "lead", site, from_on=NEW_LEAD_ON),
        "lead-before": builders.person(
            ward.admin, f"early{number}", "lead", site, **since, until_on=NEW_LEAD_ON - ONE_DAY
        ),
    }
    return site, person


def planned(ward, device, procedure, person, rule, wanted):
    days = [day for day in (FIRST + n * ONE_DAY for n in range((LAST - FIRST).days + 800)) if wanted(day)]
    recurrence = plans.Recurrence(rule, "calendar", days[0], before_days=BEFORE, grace_days=GRACE)
    given = {"procedure": procedure, "recurrence": recurrence, "responsible": person}
    return plans.make(device=device.uid, **given, actor=ward.physicist, at=now()), days


@pytest.fixture
def world(db, settings, tmp_path):
    settings.DATA_DIR = tmp_path
    ward = builders.ward(PROCEDURES)
    CheckClock.objects.all().delete()
    names, made = {}, []
    for number, (zone, (rule, wanted)) in enumerate(CHANGES.items()):
        site, person = hospital(ward, number, zone)
        names |= {each.pk: name for name, each in person.items()}
        device = builders.probe(ward.physicist, Place(site=site), serial=zone)
        ends = ("FREQ=MONTHLY", month_end) if number % 2 else ("FREQ=MONTHLY;INTERVAL=3", quarter_end)
        rules = ((f"FREQ=YEARLY;{rule}", wanted), ends, ("FREQ=YEARLY", leap_day))
        for procedure, (text, question) in zip(PROCEDURES, rules, strict=True):
            plan, days = planned(ward, device, procedure, person["responsible"], text, question)
            made.append(Planned(zone, plan, days))
    return made, names


def do(check):
    """What signing a check does to it, to its clock and to its plan."""
    with ledger.command("check.submitted", actor=None, at=now()) as act:
        act.change(check, state="submitted", submitted_at=now())
        clocks.stop(check)
        plans.open_next(act, check.plan, after_on=check.due_on)


def live(made, end):
    """Sweep from clock to clock, and do the checks at their moments; return how many sweeps there were."""
    deeds = sorted(
        (done, index, due_on)
        for index, each in enumerate(made)
        for number, due_on in enumerate(each.days[:-1])
        if (done := deed_at(number, due_on, each.zone)) is not None and done < end
    )
    swept = 0
    while True:
        clock = CheckClock.objects.aggregate(first=Min("at"))["first"]
        moment = seen_at(clock)
        if deeds and deeds[0][0] <= moment:
            _, index, due_on = deeds.pop(0)
            plan = made[index].plan
            do(Check.objects.select_related("plan__device__site").get(plan=plan, due_on=due_on))
        elif moment >= end:
            return swept
        else:
            sweep.sweep(at=now(), as_if=moment)
            swept += 1


def owed(names):
    """By plan, the in-app notices of every leaf with the moment it was written as if, and what was skipped."""
    of_check = {str(uid): rest for uid, *rest in Check.objects.values_list("uid", "plan_id", "due_on")}
    skipped = {
        (str(uid), level, person): text
        for uid, level, person, text in Notice.objects.filter(channel="in_app").values_list(
            "check_of__uid", "level", "person_id", "skipped"
        )
    }
    found: dict = {}
    for leaf in every_leaf():
        if leaf.kind != "notices.owed":
            continue
        moment = dt.datetime.fromisoformat(leaf.said["as_if"])
        for key in leaf.said["new"]["notices"]:
            uid, level, person, channel = key.split("/")
            if channel == "in_app":
                plan_id, due_on = of_check[uid]
                said = skipped.pop((uid, level, int(person)))
                found.setdefault(plan_id, []).append((due_on, level, names[int(person)], moment, said))
    assert not skipped
    return found


def test_notices_of_ten_years_are_those_of_the_model(world):
    made, names = world
    end = dt.datetime.combine(LAST, dt.time(), dt.UTC)
    swept = live(made, end)
    found, count = owed(names), 0
    for each in made:
        expected, missed = expected_of(each.zone, each.days, end)
        count += len(expected)
        assert sorted(found.get(each.plan.pk, [])) == sorted(expected), each
        lost = Check.objects.filter(plan=each.plan, state="missed").values_list("due_on", flat=True)
        assert set(lost) == missed
    assert (swept > 1000, count > 2000) == (True, True)
    assert not SweepGap.objects.exists(), "the real clock had no gap"
