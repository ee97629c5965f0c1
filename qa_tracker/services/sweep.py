"""The sweep: moves every check whose stored moment has come, and owes the notices of it.

Idempotent, and safe to run any number of times at once: each site's checks are moved in one transaction
under the ledger's lock, read anew inside it. It may be late by any time; then only the highest level reached
is sent and the levels passed are recorded with it.
"""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from django.db.models import Q

from qa_tracker.core import schedule
from qa_tracker.core.workflow import CHECK, CHECK_AWAITED, DEVICE_USABLE, target
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, Heartbeat
from qa_tracker.services import clocks, owed, plans

MOST_A_TRANSACTION = 500


@dataclass
class Moved:
    """What one sweep did at one site."""

    notices: list[str] = field(default_factory=list)
    missed: list[str] = field(default_factory=list)
    excused: list[str] = field(default_factory=list)
    opened: list[str] = field(default_factory=list)


@dataclass(frozen=True)
class Swept:
    """What a sweep did."""

    checks: int
    notices: int


def sweep(*, at: dt.datetime, as_if: dt.datetime | None = None) -> Swept:
    """Move every check that is due to move. Writes Check, Notice; leaf ``notices.owed``, one a site.

    ``as_if`` evaluates at another moment; leaves keep the real clock and say so.
    """
    moment, checks, notices = as_if or at, 0, 0
    while sites := _sites_due(moment):
        for site_id in sites:
            moved_checks, moved = _sweep_site(site_id, at, as_if)
            checks, notices = checks + moved_checks, notices + len(moved.notices)
    Heartbeat.objects.update_or_create(name="sweep", defaults={"beat_at": at, "detail": f"{checks}"})
    return Swept(checks, notices)


def _due(moment: dt.datetime) -> Q:
    return Q(clock__at__lte=moment, state__in=CHECK_AWAITED)


def _sites_due(moment: dt.datetime) -> list[int | None]:
    found = Check.objects.filter(_due(moment)).order_by().values_list("site_id", flat=True).distinct()
    return list(found)


def _sweep_site(site_id: int | None, at: dt.datetime, as_if: dt.datetime | None) -> tuple[int, Moved]:
    moment, moved = as_if or at, Moved()
    with ledger.sweeping("notices.owed", at=at, as_if=as_if) as act:
        joins = ("clock", "plan__device__site", "device__site", "site", "procedure")
        found = (
            Check.objects.filter(_due(moment), Q(**{"site_id": site_id}))
            .select_related(*joins)
            .order_by("id")
        )
        checks = list(found[:MOST_A_TRANSACTION])
        if not checks:
            return 0, moved
        for check in checks:
            _advance(act, check, moment, moved)
        act.about(checks[0].site, site=checks[0].site)
        act.tell(
            {
                "notices": sorted(moved.notices),
                "missed": moved.missed,
                "excused": moved.excused,
                "opened": moved.opened,
            }
        )
    return len(checks), moved


def _advance(act: ledger.Act, check: Check, moment: dt.datetime, moved: Moved) -> None:
    """Move one check as far as the moment allows."""
    following = _following(check)
    gone_at = following.opens_at if following and check.state != "sent_back" else None
    if gone_at is not None and gone_at <= moment and check.plan is not None:
        _give_up(act, check, moved)
        opened = plans.open_next(act, check.plan, after_on=check.due_on)
        moved.opened.append(f"{opened.uid}")
        return
    passed = [level for level in schedule.LEVELS if level_moment(check, level) <= moment]
    pending = check.clock.level
    if passed and pending in passed:
        skipped = passed[passed.index(pending) : -1]
        if check.plan is not None and check.plan.responsible_id and check.device.state in DEVICE_USABLE:
            moved.notices += owed.owe(act, check, check.plan.responsible_id, passed[-1], skipped)
    rest = schedule.LEVELS[len(passed) :]
    if rest:
        clocks.turn(check, rest[0], level_moment(check, rest[0]))
    elif gone_at is not None:
        clocks.turn(check, "missed", gone_at)
    else:
        clocks.stop(check)


def level_moment(check: Check, level: str) -> dt.datetime:
    """When a check reaches a notice level."""
    moments = {
        "upcoming": check.opens_at,
        "due": check.due_at,
        "late": check.late_at,
        "overdue": check.overdue_at,
    }
    moment = moments[level]
    if moment is None:
        raise ValueError(f"check {check.uid} has no moment for {level}")
    return moment


def _following(check: Check) -> schedule.Due | None:
    """The occurrence after this one, where its opening makes this one missed."""
    plan = check.plan
    if plan is None or plan.basis != "calendar" or plan.ended_at is not None:
        return None
    return plans.due_after(plan, check.due_on)


def _give_up(act: ledger.Act, check: Check, moved: Moved) -> None:
    """Missed: recorded and counted. A device that was out of use is excused instead, with its state."""
    if check.device.state in DEVICE_USABLE:
        act.change(check, state=target(CHECK, check.state, "miss"))
        moved.missed.append(str(check.uid))
    else:
        act.change(
            check,
            state=target(CHECK, check.state, "excuse"),
            excuse=check.device.state,
        )
        moved.excused.append(str(check.uid))
    clocks.stop(check)
