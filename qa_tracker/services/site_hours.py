"""The hours of a site: when mail comes and when it is quiet, and which rooms work round the clock."""

from __future__ import annotations

import datetime as dt

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.mail_hours import check_quiet
from qa_tracker.records import ledger
from qa_tracker.records.models import Location, Person, Site
from qa_tracker.services.guards import check_may


def set_hours(
    *,
    site: Site,
    digest_hour: int,
    quiet_from_hour: int | None,
    quiet_until_hour: int | None,
    actor: Person,
    at: dt.datetime,
) -> None:
    """Say when a site's mail comes and when it is quiet. Writes Site; leaf ``site.hours_set``.

    Refused: role, an hour that is none, quiet hours with one end or all day, the hours it has already.
    """
    check_may(actor, "site.manage", site.id, at)
    if digest_hour not in range(24):
        raise Invalid("site.digest_hour_wrong", field="digest_hour", hour=digest_hour)
    check_quiet(quiet_from_hour, quiet_until_hour)
    new = {
        "digest_hour": digest_hour,
        "quiet_from_hour": quiet_from_hour,
        "quiet_until_hour": quiet_until_hour,
    }
    old = {name: getattr(site, name) for name in new}
    if new == old:
        raise Conflict("site.hours_same", field="digest_hour")
    with ledger.command("site.hours_set", actor=actor, at=at) as act:
        act.change(site, **new)
        act.about(site, site=site)
        act.tell(new, old)


def set_round_the_clock(*, room: Location, round_the_clock: bool, actor: Person, at: dt.datetime) -> None:
    """Say whether a room works round the clock, so that urgent mail about it goes at any hour.

    Writes Location; leaf ``location.hours_set``. Refused: role, what is recorded already.
    """
    check_may(actor, "site.manage", room.site_id, at)
    if room.round_the_clock == round_the_clock:
        raise Conflict("location.hours_same")
    with ledger.command("location.hours_set", actor=actor, at=at) as act:
        act.change(room, round_the_clock=round_the_clock)
        act.about(room, site=room.site)
        act.tell({"name": room.name, "round_the_clock": round_the_clock})
