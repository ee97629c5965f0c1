"""What a sweep finds at one site: the awaited checks whose clock has come, and who is told of them."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Collection, Iterator, Mapping
from dataclasses import dataclass, field
from typing import NamedTuple, TypeVar

from django.db import connection, models

from qa_tracker.core.ladder import NOTHING_HELD, RESPONSIBLE, Held, Instants, Ladder
from qa_tracker.core.roles import Grant
from qa_tracker.records.models import Check, CheckClock, Notice
from qa_tracker.records.queries.holds import HoldRow, holds_of
from qa_tracker.records.queries.people import role_holders
from qa_tracker.services import on_duty
from qa_tracker.services.clocks import MOST_KEYS

M = TypeVar("M", bound=models.Model)


class Watched(NamedTuple):
    """An awaited check with what its sweep needs of its plan and device; read as columns, since they are many."""

    check_id: int
    site_id: int | None
    uid: uuid.UUID
    state: str
    level: str
    due_on: dt.date
    slot_on: dt.date | None
    opens_at: dt.datetime
    due_at: dt.datetime
    late_at: dt.datetime
    overdue_at: dt.datetime
    device_id: int
    device_state: str
    procedure_id: int
    plan_id: int | None
    plan_ended_at: dt.datetime | None
    basis: str
    rule: str
    anchor_on: dt.date
    before_days: int
    grace_days: int
    roll: str
    responsible_id: int | None
    team_id: int | None

    @property
    def instants(self) -> Instants:
        """When each of its standing levels is reached."""
        return Instants(self.opens_at, self.due_at, self.late_at, self.overdue_at)


_COLUMNS = (
    "check_of_id", "check_of__site_id", "check_of__uid", "check_of__state", "level", "check_of__due_on", "check_of__slot_on",
    "check_of__opens_at", "check_of__due_at", "check_of__late_at", "check_of__overdue_at",
    "check_of__device_id", "check_of__device__state", "check_of__procedure_id", "check_of__plan_id",
    "check_of__plan__ended_at", "check_of__plan__basis", "check_of__plan__rule", "check_of__plan__anchor_on",
    "check_of__plan__before_days", "check_of__plan__grace_days", "check_of__plan__roll",
    "check_of__plan__responsible_id", "check_of__plan__team_id",
)  # fmt: skip


def due_by_site(moment: dt.datetime) -> dict[int | None, list[int]]:
    """Keys of the checks whose clock has come, by site; None stands for devices at no site.

    Found by the clocks alone, whose number does not grow with the years; everything else is read by these keys.
    """
    found: dict[int | None, list[int]] = {}
    rows = CheckClock.objects.filter(at__lte=moment).order_by("check_of_id")
    for check_id, site_id in rows.values_list("check_of_id", "check_of__site_id"):
        found.setdefault(site_id, []).append(check_id)
    return dict(sorted(found.items(), key=lambda each: each[0] or 0))


def read(check_ids: Collection[int], site_id: int | None, moment: dt.datetime) -> list[Watched]:
    """Read those checks of a site whose clock has come still; what somebody is changing now waits for its turn.

    A command locks rows before the ledger's head, a sweep the head before rows: waiting for each other's would be
    waiting for ever, so a sweep never waits for a row.
    """
    watched: list[Watched] = []
    for chunk in _chunks(check_ids):
        found = CheckClock.objects.filter(check_of_id__in=chunk, at__lte=moment)
        free = set(chunk)
        if connection.features.has_select_for_update_skip_locked:
            locked = found.select_for_update(skip_locked=True, no_key=True)
            free = set(locked.values_list("check_of_id", flat=True))
        rows = [Watched(*row) for row in found.order_by("check_of_id").values_list(*_COLUMNS)]
        watched += [each for each in rows if each.check_id in free and each.site_id == site_id]
    return watched


def locked_rows(model: type[M], keys: Collection[int]) -> dict[int, M]:
    """Rows to be changed, by key, without those that somebody is changing now."""
    found: dict[int, M] = {}
    for chunk in _chunks(keys):
        rows = model._default_manager.filter(pk__in=chunk)
        if connection.features.has_select_for_update_skip_locked:
            rows = rows.select_for_update(skip_locked=True, no_key=True)
        found |= {row.pk: row for row in rows}
    return found


def occurrences_after(watched: Collection[Watched]) -> set[tuple[int, dt.date]]:
    """Plan and due day of every check that stands after those given, so that none is opened twice."""
    found: set[tuple[int, dt.date]] = set()
    after_on = min((each.due_on for each in watched), default=None)
    plan_ids = {each.plan_id for each in watched if each.plan_id is not None}
    for chunk in _chunks(plan_ids):
        later = Check.objects.filter(plan_id__in=chunk, due_on__gt=after_on)
        found.update(
            (plan_id, due_on) for plan_id, due_on in later.values_list("plan_id", "due_on") if due_on
        )
    return found


def told_of(check_ids: Collection[int], ladder: Ladder) -> dict[int, dict[int, int]]:
    """Highest rank of which each person was told, by check."""
    told: dict[int, dict[int, int]] = {}
    for chunk in _chunks(check_ids):
        found = Notice.objects.filter(check_of_id__in=chunk, level__in=ladder.levels)
        for check_id, person_id, level in found.values_list("check_of_id", "person_id", "level"):
            ranks = told.setdefault(check_id or 0, {})
            ranks[person_id] = max(ranks.get(person_id, -1), ladder.rank(level))
    return told


@dataclass(frozen=True)
class Holds:
    """What is held of a check, and until when the first of it is."""

    held: Held = NOTHING_HELD
    until_at: dt.datetime | None = None


NO_HOLDS = Holds()


def held_of(check_ids: Collection[int], moment: dt.datetime) -> dict[int, Holds]:
    """What is held at a moment, by check."""
    found: dict[int, Holds] = {}
    for chunk in _chunks(check_ids):
        found |= {check_id: _holds(rows) for check_id, rows in holds_of(chunk, moment).items()}
    return found


def _holds(rows: list[HoldRow]) -> Holds:
    snoozed = frozenset(row.person_id for row in rows if row.kind == "snoozed")
    acknowledged = any(row.kind == "acknowledged" for row in rows)
    return Holds(Held(acknowledged, snoozed), min(row.until_at for row in rows))


@dataclass
class People:
    """Who is told, on any local day: duties and grants are read once, however many checks there are."""

    grants: Mapping[str, list[tuple[int, Grant]]] = field(default_factory=role_holders)
    duties: dict[dt.date, on_duty.Duties] = field(default_factory=dict)
    known: dict[tuple[object, ...], tuple[int, ...]] = field(default_factory=dict)

    def told(self, recipient: str, one: Watched, site_id: int | None, day: dt.date) -> tuple[int, ...]:
        """People behind a recipient for a check at a site, on a local day; who is away is stood in for."""
        own = (one.responsible_id, one.team_id) if recipient == RESPONSIBLE else (site_id,)
        key = (recipient, day, *own)
        if key not in self.known:
            self.known[key] = self._told(recipient, one, site_id, day)
        return self.known[key]

    def _told(self, recipient: str, one: Watched, site_id: int | None, day: dt.date) -> tuple[int, ...]:
        if day not in self.duties:
            self.duties[day] = on_duty.load(day)
        duties = self.duties[day]
        if recipient == RESPONSIBLE:
            return duties.of(one.responsible_id, one.team_id)
        holders = [
            person_id
            for person_id, grant in self.grants.get(recipient, ())
            if grant.site_id in (None, site_id) and grant.holds_on(day)
        ]
        return tuple(dict.fromkeys(each for person_id in holders for each in duties.of(person_id, None)))


def _chunks(keys: Collection[int]) -> Iterator[list[int]]:
    ordered = sorted(keys)
    for first in range(0, len(ordered), MOST_KEYS):
        yield ordered[first : first + MOST_KEYS]
