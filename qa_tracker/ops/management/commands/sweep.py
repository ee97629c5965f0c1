"""The second heart: what the beat does each minute, once, from a timer or by hand."""

from __future__ import annotations

import datetime as dt
from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.utils.dateparse import parse_datetime
from django.utils.timezone import now

from qa_tracker.ops.facts import add_json, print_facts
from qa_tracker.services import checkpoints, dossiers, mail
from qa_tracker.services import sweep as sweeping


class Command(BaseCommand):
    """Move due checks, owe notices, make and deliver digests, sign a checkpoint."""

    help = (
        "Move every check whose moment has come, owe the notices, deliver the digests and sign a checkpoint. "
        "With --at, evaluate as if it were that moment; the ledger keeps the real clock and says so."
    )

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--at", metavar="ISO-MOMENT", help="for example 2026-03-14T09:00:00+00:00")
        add_json(parser)

    def handle(self, *args: Any, **options: Any) -> None:
        at, as_if = now(), _moment(options["at"])
        swept = sweeping.sweep(at=at, as_if=as_if)
        digests = mail.make_digests(at=at, as_if=as_if)
        dossiers.release_stuck(at=at)
        sent = mail.deliver_waiting(at=now())
        checkpoints.make(at=now())
        facts = {"checks": swept.checks, "notices": swept.notices, "digests": digests, "sent": sent}
        line = (
            f"{swept.checks} check(s) moved, {swept.notices} notice(s) owed, "
            f"{digests} mail(s) made, {sent} delivered."
        )
        print_facts(self.stdout, facts, [line], as_json=options["json"])


def _moment(text: str | None) -> dt.datetime | None:
    if text is None:
        return None
    try:
        moment = parse_datetime(text)
    except ValueError as error:
        raise CommandError(
            f"“{text}” is no moment: {error}. Write it as 2026-03-14T09:00:00+00:00."
        ) from error
    if moment is None:
        raise CommandError(f"“{text}” is no ISO 8601 moment. Write it as 2026-03-14T09:00:00+00:00.")
    return moment if moment.tzinfo else moment.replace(tzinfo=dt.UTC)
