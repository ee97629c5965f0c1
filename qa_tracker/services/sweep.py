"""The sweep: moves every check whose stored moment has come, and owes the notices of it.

Idempotent, and safe to run any number of times at once: each site's checks are moved in one transaction
under the ledger's lock, read anew inside it. It may be late by any time; then only the highest level reached
is sent to each person, and the levels passed are recorded with it.
"""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from django.db.models import F

from qa_tracker.core import ladder, schedule
from qa_tracker.core.errors import Invalid
from qa_tracker.core.ladder import MISSED, Ladder
from qa_tracker.core.workflow import CHECK, CHECK_AWAITED, DEVICE_USABLE, may_move, target
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, CheckClock, CheckPlan, Heartbeat, Site, SweepGap
from qa_tracker.records.queries.notices import last_sweep
from qa_tracker.records.writers import new_row
from qa_tracker.services import clocks, ladders, owed, plans, watched
from qa_tracker.services.watched import NO_HOLDS, Holds, People, Watched

MOST_A_TRANSACTION = 5000
"""Checks moved in one transaction: memory and the time for which the ledger is locked stay bounded."""
GAP_AFTER = dt.timedelta(minutes=3)
"""Without a beat for so long, nothing was sweeping: as long as the header waits before it turns red."""
GONE = "disposed"


@dataclass
class Moved:
    """What one sweep did at one site."""

    notices: list[str] = field(default_factory=list)
    missed: list[str] = field(default_factory=list)
    excused: list[str] = field(default_factory=list)
    opened: list[str] = field(default_factory=list)
    ended: list[str] = field(default_factory=list)
    skipped: int = 0
    checks: int = 0


@dataclass(frozen=True)
class Swept:
    """What a sweep did: checks moved, notices owed, levels passed over."""

    checks: int = 0
    notices: int = 0
    skipped: int = 0

    def and_also(self, moved: Moved) -> Swept:
        """The same with what was done at another site."""
        notices, skipped = self.notices + len(moved.notices), self.skipped + moved.skipped
        return Swept(self.checks + moved.checks, notices, skipped)


@dataclass
class Ground:
    """What is the same for all sites of one sweep."""

    at: dt.datetime
    as_if: dt.datetime | None
    ladders: ladders.Ladders
    people: People

    @property
    def moment(self) -> dt.datetime:
        """The moment that is evaluated."""
        return self.as_if or self.at


@dataclass
class Turn:
    """One site's turn: what it stands on, and what it gathers."""

    ground: Ground
    site: Site | None
    days: schedule.SiteDays
    ladder: Ladder
    moved: Moved = field(default_factory=Moved)
    told: dict[int, dict[int, int]] = field(default_factory=dict)
    holds: dict[int, Holds] = field(default_factory=dict)
    dues: dict[tuple[object, ...], schedule.Due | None] = field(default_factory=dict)
    taken: set[tuple[int, dt.date]] = field(default_factory=set)
    clocks: list[CheckClock] = field(default_factory=list)
    stopped: list[int] = field(default_factory=list)

    @property
    def site_id(self) -> int | None:
        """The site's key; None for devices at no site."""
        return self.site.pk if self.site else None

    @property
    def moment(self) -> dt.datetime:
        """The moment that is evaluated."""
        return self.ground.moment


def sweep(*, at: dt.datetime, as_if: dt.datetime | None = None) -> Swept:
    """Move every check that is due to move. Writes Check, Notice; leaf ``notices.owed``, one a site.

    ``as_if`` evaluates at another moment; leaves keep the real clock and say so.
    """
    gap = _gap(at)
    swept = Swept()
    due = watched.due_by_site(as_if or at)
    if due:
        ground = Ground(at, as_if, ladders.in_force(), People())
        sites = Site.objects.in_bulk([site_id for site_id in due if site_id is not None])
        for site_id, check_ids in due.items():
            site = sites[site_id] if site_id is not None else None
            for first in range(0, len(check_ids), MOST_A_TRANSACTION):
                moved = _sweep_site(ground, site, check_ids[first : first + MOST_A_TRANSACTION])
                swept = swept.and_also(moved)
    Heartbeat.objects.update_or_create(name="sweep", defaults={"beat_at": at, "detail": f"{swept.checks}"})
    if gap is not None:
        SweepGap.objects.filter(pk=gap.pk).update(
            notices=F("notices") + swept.notices, skipped=F("skipped") + swept.skipped
        )
    return swept


def _gap(at: dt.datetime) -> SweepGap | None:
    """The time without a beat that ends with this sweep, by the real clock; sweeps at once share its row."""
    before = last_sweep()
    if before is None or at - before <= GAP_AFTER:
        return None
    return SweepGap.objects.get_or_create(began_at=before, defaults={"ended_at": at})[0]


def _sweep_site(ground: Ground, site: Site | None, check_ids: list[int]) -> Moved:
    with ledger.sweeping("notices.owed", at=ground.at, as_if=ground.as_if) as act:
        climbs = ground.ladders.of(site.pk if site else None)
        turn = Turn(ground, site, plans.site_days(site), climbs)
        _move_all(act, turn, watched.read(check_ids, turn.site_id, turn.moment))
        clocks.turn_all(turn.clocks, turn.stopped)
        moved = turn.moved
        act.about(site, site=site)
        told = {
            "notices": sorted(moved.notices),
            "missed": moved.missed,
            "excused": moved.excused,
            "opened": moved.opened,
        }
        act.tell(told | ({"plans_ended": moved.ended} if moved.ended else {}))
    return moved


def _move_all(act: ledger.Act, turn: Turn, due: list[Watched]) -> None:
    """Move the checks as far as the moment allows; what is to be changed is locked first, or left for now."""
    if not due:
        return
    check_ids = [one.check_id for one in due]
    turn.told = watched.told_of(check_ids, turn.ladder)
    turn.holds = watched.held_of(check_ids, turn.moment)
    leaving = [one for one in due if _is_leaving(turn, one)]
    rows = watched.locked_rows(Check, [one.check_id for one in leaving])
    ending = {one.plan_id for one in leaving if one.device_state == GONE and one.plan_id is not None}
    ended = watched.locked_rows(CheckPlan, ending)
    turn.taken = watched.occurrences_after(leaving)
    left = {one.check_id for one in leaving}
    for one in due:
        if one.state not in CHECK_AWAITED:
            turn.stopped.append(one.check_id)
        elif one.check_id not in left:
            _climb(act, turn, one)
        elif one.check_id in rows:
            _leave(act, turn, one, rows[one.check_id], ended)
    turn.moved.checks = len(due) - len(left - set(rows))
    for plan in ended.values():
        if plan.ended_at is None:
            act.change(plan, ended_at=act.at)
            turn.moved.ended.append(f"{plan.uid}")


def _is_leaving(turn: Turn, one: Watched) -> bool:
    """Whether a check ends undone: its device is gone, or the next occurrence has opened."""
    if one.state not in CHECK_AWAITED:
        return False
    if one.device_state == GONE:
        return True
    gone_at = _gone_at(turn, one)
    return gone_at is not None and gone_at <= turn.moment


def _gone_at(turn: Turn, one: Watched) -> dt.datetime | None:
    """When the next occurrence opens and this one is missed; never on last actual, nor once it was done."""
    following = None if one.state == "sent_back" else _following(turn, one)
    return schedule.missed_at(one.basis, following) if following else None


def _following(turn: Turn, one: Watched) -> schedule.Due | None:
    """The occurrence after a check, where its plan opens one by the calendar."""
    if one.plan_id is None or one.basis != "calendar" or one.plan_ended_at is not None:
        return None
    after_on = one.slot_on or one.due_on
    key = (one.rule, one.anchor_on, after_on, one.before_days, one.grace_days, one.roll)
    if key not in turn.dues:
        window = schedule.Window(one.before_days, one.grace_days, one.roll)
        try:
            turn.dues[key] = schedule.next_due(
                schedule.parse_rule(one.rule), one.basis, one.anchor_on, after_on, window, turn.days
            )
        except Invalid:
            # A plan that has run out of days keeps its last check; it must not keep others from being swept.
            turn.dues[key] = None
    return turn.dues[key]


def _leave(act: ledger.Act, turn: Turn, one: Watched, check: Check, ended: dict[int, CheckPlan]) -> None:
    """End a check undone, and go on with the occurrences after it to the one that is still open."""
    if one.device_state == GONE:
        if one.plan_id is None or one.plan_id in ended:
            _give_up(act, turn, one, check, "excuse")
        return
    verb = "miss" if one.device_state in DEVICE_USABLE else "excuse"
    _give_up(act, turn, one, check, verb)
    following = _following(turn, one)
    while following is not None and one.plan_id is not None:
        if (one.plan_id, following.due_on) in turn.taken:
            return
        check = _occurrence(turn, one, following)
        turn.moved.opened.append(f"{check.uid}")
        one = one._replace(
            uid=check.uid, state=check.state, level=schedule.LEVELS[0], due_on=following.due_on, slot_on=None,
            opens_at=following.opens_at, due_at=following.due_at, late_at=following.late_at,
            overdue_at=following.overdue_at,
        )  # fmt: skip
        if not _is_leaving(turn, one):
            act.insert(check)
            _climb(act, turn, one._replace(check_id=check.pk))
            return
        _give_up(act, turn, one, check, verb)
        following = _following(turn, one)


def _occurrence(turn: Turn, one: Watched, due: schedule.Due) -> Check:
    """The row of the next occurrence, not written yet: its state may have passed already."""
    return Check(
        plan_id=one.plan_id,
        device_id=one.device_id,
        procedure_id=one.procedure_id,
        site=turn.site,
        state="scheduled",
        due_on=due.due_on,
        opens_at=due.opens_at,
        due_at=due.due_at,
        late_at=due.late_at,
        overdue_at=due.overdue_at,
    )


def _give_up(act: ledger.Act, turn: Turn, one: Watched, check: Check, verb: str) -> None:
    """Missed: recorded and counted. A device that was out of use is excused instead, with its state."""
    if not may_move(CHECK, check.state, verb):
        turn.stopped.append(check.pk)
        return
    columns = {"state": target(CHECK, check.state, verb)}
    if verb == "excuse":
        columns["excuse"] = one.device_state
    (turn.moved.missed if verb == "miss" else turn.moved.excused).append(f"{check.uid}")
    if check.pk is not None:
        act.change(check, **columns)
        turn.stopped.append(check.pk)
        return
    for name, value in columns.items():
        setattr(check, name, value)
    act.insert(check)


def _climb(act: ledger.Act, turn: Turn, one: Watched) -> None:
    """Owe the levels that were reached, and set the clock to what comes next."""
    climbs = turn.ladder
    at_levels = ladder.moments(climbs, one.instants, turn.days.zone)
    levels = ladder.reached(climbs, at_levels, one.level, turn.moment)
    kept_back = None
    if levels and one.device_state in DEVICE_USABLE:
        kept_back = _owe(act, turn, one, levels)
    holds = turn.holds.get(one.check_id, NO_HOLDS)
    following = ladder.following(climbs, at_levels, turn.moment)
    level, climbs_at = following or (MISSED, None)
    looks = (climbs_at, _gone_at(turn, one), holds.until_at if kept_back else None)
    look_at = min((each for each in looks if each is not None), default=None)
    if look_at is not None:
        turn.clocks.append(
            new_row(CheckClock, check_of_id=one.check_id, at=look_at, level=kept_back or level)
        )
    else:
        turn.stopped.append(one.check_id)


def _owe(act: ledger.Act, turn: Turn, one: Watched, levels: tuple[str, ...]) -> str | None:
    """Owe what was reached; return the lowest level that a hold kept back."""
    day = schedule.local_day(turn.moment, turn.days.zone)
    named = {recipient for level in levels for recipient in turn.ladder.told[level]}
    people = {each: turn.ground.people.told(each, one, turn.site_id, day) for each in named}
    told = turn.told.get(one.check_id, {})
    held = turn.holds.get(one.check_id, NO_HOLDS).held
    found, kept_back = ladder.owed(turn.ladder, levels, people, told, held)
    for each in found:
        turn.moved.notices += owed.owe(act, one.check_id, one.uid, each)
        turn.moved.skipped += len(each.skipped)
    return kept_back
