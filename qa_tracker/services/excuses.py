"""Excusing an occurrence of a check: apart from what was done, and the next one opens in its turn."""

from __future__ import annotations

import datetime as dt
import uuid

from qa_tracker.core.workflow import CHECK, target
from qa_tracker.records import ledger
from qa_tracker.records.models import Person
from qa_tracker.services import clocks, finding, plans
from qa_tracker.services.guards import check_may, may, required


def excuse(*, check: uuid.UUID, reason: str, actor: Person, at: dt.datetime) -> None:
    """Excuse an occurrence with a reason and open the next. Writes Check; leaf ``check.excused``."""
    row = finding.check(actor, check, at)
    check_may(actor, "check.excuse", row.site_id or actor.duties_site_id, at)
    reason = required(reason, "check.excuse_missing", "reason")
    was_done = row.state == "sent_back"
    state = target(CHECK, row.state, "excuse")
    with ledger.command("check.excused", actor=actor, at=at, reason=reason) as act:
        act.change(row, state=state, excuse=reason[:300])
        clocks.stop(row)
        # What was sent back has opened the next occurrence already.
        if row.plan is not None and not was_done:
            plans.open_next(act, row.plan, after_on=row.slot_on or row.due_on, done_on=row.due_on)
        act.about(row, device=row.device, site=row.site)
        act.tell({"state": state, "due": row.due_on.isoformat() if row.due_on else None})


def may_excuse(check_site_id: int | None, *, actor: Person, at: dt.datetime) -> bool:
    """Whether the actor may excuse a check of this site."""
    return may(actor, "check.excuse", check_site_id or actor.duties_site_id, at)
