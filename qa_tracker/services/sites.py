"""Sites, rooms, pools and days off."""

from __future__ import annotations

import datetime as dt
import zoneinfo
from collections.abc import Collection

from qa_tracker.core.errors import Invalid
from qa_tracker.records import ledger
from qa_tracker.records.models import Holiday, Location, Person, Pool, PoolMember, Site
from qa_tracker.services.guards import check_may, required


def create(
    *,
    code: str,
    name: str,
    time_zone: str,
    weekend: Collection[int] = (6, 7),
    digest_hour: int = 7,
    actor: Person,
    at: dt.datetime,
    **instructions: str,
) -> Site:
    """Make a site. Writes Site; leaf ``site.created``. Refused: not a group administrator, a taken code, an
    unknown time zone, no working day, an hour that is none.

    ``weekend`` holds ISO weekdays (7 = Sunday); ``instructions`` the site's two instructions.
    """
    check_may(actor, "site.manage", None, at)
    code = required(code, "site.code_missing", "code").upper()
    if Site.objects.filter(code=code).exists():
        raise Invalid("site.code_taken", field="code", taken=code)
    if time_zone not in zoneinfo.available_timezones():
        raise Invalid("site.time_zone_unknown", field="time_zone", zone=time_zone)
    if not set(weekend) < set(range(1, 8)):
        raise Invalid("site.no_working_day", field="weekend")
    if digest_hour not in range(24):
        raise Invalid("site.digest_hour_wrong", field="digest_hour", hour=digest_hour)
    with ledger.command("site.created", actor=actor, at=at) as act:
        site = act.insert(
            Site(
                code=code,
                name=required(name, "site.name_missing", "name"),
                time_zone=time_zone,
                weekend=",".join(str(day) for day in sorted(weekend)),
                digest_hour=digest_hour,
                **instructions,
            )
        )
        act.about(site, site=site)
        act.tell({"code": code, "name": name, "time_zone": time_zone, "weekend": site.weekend})
    return site


def instruct(
    *, site: Site, remedial_instruction: str, suspension_instruction: str, actor: Person, at: dt.datetime
) -> None:
    """Set what a site tells people to do on a remedial and a suspension verdict; leaf ``site.instructed``."""
    check_may(actor, "site.manage", site.id, at)
    old = {"remedial": site.remedial_instruction, "suspension": site.suspension_instruction}
    with ledger.command("site.instructed", actor=actor, at=at) as act:
        act.change(
            site,
            remedial_instruction=remedial_instruction.strip(),
            suspension_instruction=suspension_instruction.strip(),
        )
        act.about(site, site=site)
        act.tell({"remedial": remedial_instruction, "suspension": suspension_instruction}, old)


def add_location(*, site: Site, name: str, position: int, actor: Person, at: dt.datetime) -> Location:
    """Add a room. Writes Location; leaf ``location.added``. Refused: a name the site already has."""
    check_may(actor, "site.manage", site.id, at)
    name = required(name, "location.name_missing", "name")
    if Location.objects.filter(site=site, name=name).exists():
        raise Invalid("location.name_taken", field="name", name=name)
    with ledger.command("location.added", actor=actor, at=at) as act:
        room = act.insert(Location(site=site, name=name, position=position))
        act.about(room, site=site)
        act.tell({"name": name, "position": position})
    return room


def add_holidays(*, site: Site, days: dict[dt.date, str], actor: Person, at: dt.datetime) -> None:
    """Copy days off as rows. Writes Holiday; leaf ``holidays.added``. Days already there are left as they are."""
    check_may(actor, "site.manage", site.id, at)
    known = set(Holiday.objects.filter(site=site).values_list("day_on", flat=True))
    new = {day: name for day, name in sorted(days.items()) if day not in known}
    if not new:
        raise Invalid("holiday.all_known", field="day_on")
    with ledger.command("holidays.added", actor=actor, at=at) as act:
        for day, name in new.items():
            act.insert(Holiday(site=site, day_on=day, name=name))
        act.about(site, site=site)
        act.tell({"days": {day.isoformat(): name for day, name in new.items()}})


def create_pool(*, name: str, sites: list[Site], actor: Person, at: dt.datetime) -> Pool:
    """Make a pool of devices shared by sites. Writes Pool and PoolMember; leaf ``pool.created``."""
    check_may(actor, "site.manage", None, at)
    sites = list({site.pk: site for site in sites}.values())
    if len(sites) < 2:
        raise Invalid("pool.needs_two_sites", field="sites")
    with ledger.command("pool.created", actor=actor, at=at) as act:
        pool = act.insert(Pool(name=required(name, "pool.name_missing", "name")))
        for site in sites:
            act.insert(PoolMember(pool=pool, site=site))
        act.about(pool)
        act.tell({"name": name, "sites": [site.code for site in sites]})
    return pool
