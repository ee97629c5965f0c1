"""Making mails out of the notices owed: one digest a person and local day, and at once what must not wait.

At once: suspension verdicts, electrical checks that are overdue, and the highest level of a site's ladder. Quiet
hours and days off delay every mail and drop none, save that suspension and electrical notices about rooms that
work round the clock go at any hour.
"""

from __future__ import annotations

import datetime as dt
import hashlib
from collections.abc import Collection, Iterable
from dataclasses import dataclass, field

from django.conf import settings
from django.db import transaction

from qa_tracker.core.mail_hours import MailHours
from qa_tracker.core.schedule import SiteDays
from qa_tracker.records.models import Digest, NoticeMail, Person
from qa_tracker.records.queries.holds import holds_of
from qa_tracker.records.queries.library import electrical_procedures
from qa_tracker.records.queries.mail import PendingRow, pending_mail
from qa_tracker.services import ladders, plans

WAITS_FOR_THE_DIGEST = ("upcoming", "due", "late")
NEVER_HELD_BACK = ("suspension", "electrical")


@dataclass
class Sorting:
    """What decides how a notice is mailed: electrical procedures, every site's ladder and hours, who snoozed what."""

    electrical: frozenset[int]
    ladders: ladders.Ladders
    snoozed: frozenset[tuple[int, int]]
    hours: dict[int | None, MailHours] = field(default_factory=dict)

    def kind(self, row: PendingRow) -> str:
        """Why a notice is mailed at once: ``suspension``, ``electrical`` or ``ladder``; empty: it waits."""
        if row.level == "suspension":
            return "suspension"
        if row.procedure_id in self.electrical and row.level not in WAITS_FOR_THE_DIGEST:
            return "electrical"
        return "ladder" if row.level == self.ladders.of(row.site_id).levels[-1] else ""

    def waits(self, row: PendingRow) -> bool:
        """Whether its person snoozed the notices of its check, after this one was owed."""
        return (row.check_id, row.person_id) in self.snoozed and self.kind(row) not in NEVER_HELD_BACK

    def hours_of(self, person: Person) -> MailHours:
        """When mail may go to a person: by the site of their duties."""
        if person.duties_site_id not in self.hours:
            self.hours[person.duties_site_id] = _hours(person)
        return self.hours[person.duties_site_id]


def _hours(person: Person) -> MailHours:
    site = person.duties_site
    if site is None:
        return MailHours(SiteDays("UTC"))
    return MailHours(plans.site_days(site), site.digest_hour, site.quiet_from_hour, site.quiet_until_hour)


def _snoozed(pending: list[PendingRow], moment: dt.datetime) -> frozenset[tuple[int, int]]:
    """Check and person of every snooze in force."""
    held = holds_of({row.check_id for row in pending if row.check_id is not None}, moment)
    return frozenset(
        (check_id, hold.person_id)
        for check_id, rows in held.items()
        for hold in rows
        if hold.kind == "snoozed"
    )


def make_digests(*, at: dt.datetime, as_if: dt.datetime | None = None) -> int:
    """Make the mails whose moment has come; return how many.

    The mail's state is no record (see ``records/exempt.py``); the notices it carries have their leaf.
    """
    pending = pending_mail()
    if not pending:
        return 0
    by_person: dict[int, list[PendingRow]] = {}
    for row in pending:
        by_person.setdefault(row.person_id, []).append(row)
    sorting = Sorting(electrical_procedures(), ladders.in_force(), _snoozed(pending, as_if or at))
    people = Person.objects.filter(pk__in=by_person).select_related("duties_site").order_by("pk")
    return sum(_make_for(person, by_person[person.pk], sorting, at, as_if or at) for person in people)


def _make_for(
    person: Person, rows: list[PendingRow], sorting: Sorting, at: dt.datetime, moment: dt.datetime
) -> int:
    """The mails of one person: at once what may go at once, then the day's digest of all the rest."""
    hours, made = sorting.hours_of(person), 0
    open_now = hours.may_go(moment)
    day_on = hours.digest_day(moment)
    of_kind: dict[str, list[PendingRow]] = {}
    for row in rows:
        if not sorting.waits(row):
            of_kind.setdefault(sorting.kind(row), []).append(row)
    for kind in NEVER_HELD_BACK:
        going = [row for row in of_kind.pop(kind, []) if open_now or row.round_the_clock]
        made += _at_once(kind, person, going, at, moment.date())
    key = f"digest/{person.uid}/{day_on}"
    if day_on is not None and not Digest.objects.filter(key=key).exists():
        # The highest level goes with the digest that goes now anyway: one mail, not two.
        return made + _make(key, person, at, day_on, _ids(of_kind.values()))
    if open_now:
        made += _at_once("ladder", person, of_kind.get("ladder", []), at, moment.date())
    return made


def _at_once(kind: str, person: Person, rows: list[PendingRow], at: dt.datetime, day_on: dt.date) -> int:
    """One mail for all of one kind that waits now, named after the first of them."""
    if not rows:
        return 0
    return _make(f"{kind}/{rows[0].notice_uid}", person, at, day_on, _ids([rows]))


def _ids(groups: Iterable[list[PendingRow]]) -> list[int]:
    return [row.id for rows in groups for row in rows]


def _make(key: str, person: Person, at: dt.datetime, day_on: dt.date, wanted: Collection[int]) -> int:
    """One mail with the notices that no other sweep took meanwhile; none where there are none left."""
    name = hashlib.sha256(key.encode()).hexdigest()[:32]
    with transaction.atomic():
        mine = NoticeMail.objects.select_for_update().filter(pk__in=wanted, digest=None)
        free = list(mine.order_by("pk").values_list("pk", flat=True))
        if not free:
            return 0
        digest, created = Digest.objects.get_or_create(
            key=key,
            defaults={
                "person": person,
                "message_id": f"<{name}@{settings.MAIL_DOMAIN}>",
                "day_on": day_on,
                "created_at": at,
                "due_at": at,
            },
        )
        if created:
            NoticeMail.objects.filter(pk__in=free).update(digest=digest)
    return int(created)
