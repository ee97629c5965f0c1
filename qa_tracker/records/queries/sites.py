"""Sites, rooms, pools and days off."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.records.models import Holiday, Location, Pool, PoolMember, Site
from qa_tracker.records.queries.as_of import noun, nouns
from qa_tracker.records.queries.scope import Scope


@dataclass(frozen=True)
class SiteRow:
    """A hospital."""

    id: int
    uid: uuid.UUID
    code: str
    name: str
    time_zone: str
    weekend: frozenset[int]
    digest_hour: int
    remedial_instruction: str
    suspension_instruction: str
    quiet_from_hour: int | None
    quiet_until_hour: int | None


@dataclass(frozen=True)
class LocationRow:
    """A room."""

    id: int
    uid: uuid.UUID
    site_id: int
    name: str
    position: int
    round_the_clock: bool


@dataclass(frozen=True)
class PoolRow:
    """A pool and its member sites."""

    id: int
    uid: uuid.UUID
    name: str
    site_ids: frozenset[int]


def site_row(site: Site) -> SiteRow:
    """A site as a frozen row."""
    weekend = frozenset(int(day) for day in site.weekend.split(",") if day)
    return SiteRow(
        site.id, site.uid, site.code, site.name, site.time_zone, weekend, site.digest_hour,
        site.remedial_instruction, site.suspension_instruction, site.quiet_from_hour, site.quiet_until_hour,
    )  # fmt: skip


def list_sites(scope: Scope, as_of: dt.datetime | None = None) -> list[SiteRow]:
    """Sites in sight, by code."""
    found = [site_row(site) for site in nouns(Site, as_of) if scope.holds(site.id)]
    return sorted(found, key=lambda site: site.code)


def find_site(scope: Scope, uid: uuid.UUID, as_of: dt.datetime | None = None) -> SiteRow | None:
    """A site in sight by uid."""
    site = noun(Site, as_of, uid=uid)
    return site_row(site) if site and scope.holds(site.id) else None


def site_by_id(site_id: int, as_of: dt.datetime | None = None) -> SiteRow | None:
    """A site by key, for use inside commands."""
    site = noun(Site, as_of, id=site_id)
    return site_row(site) if site else None


def list_locations(scope: Scope, site_id: int | None = None) -> list[LocationRow]:
    """Rooms in sight, by site and the order they are walked in."""
    rooms = nouns(Location) if site_id is None else nouns(Location, site_id=site_id)
    rows = [
        LocationRow(room.id, room.uid, room.site_id, room.name, room.position, room.round_the_clock)
        for room in rooms
        if scope.holds(room.site_id)
    ]
    return sorted(rows, key=lambda room: (room.site_id, room.position, room.name))


def list_pools(scope: Scope) -> list[PoolRow]:
    """Pools with a member in sight."""
    members: dict[int, set[int]] = {}
    for pool_id, site_id in PoolMember.objects.values_list("pool_id", "site_id"):
        members.setdefault(pool_id, set()).add(site_id)
    rows = [
        PoolRow(pool.id, pool.uid, pool.name, frozenset(members.get(pool.id, ()))) for pool in nouns(Pool)
    ]
    return [row for row in rows if scope.whole_group or any(scope.holds(each) for each in row.site_ids)]


def holidays_of(site_id: int | None) -> frozenset[dt.date]:
    """Days off of a site."""
    return frozenset(Holiday.objects.filter(site_id=site_id).values_list("day_on", flat=True))


def list_holidays(site_id: int) -> list[tuple[dt.date, str]]:
    """Days off with their names, in order."""
    return list(Holiday.objects.filter(site_id=site_id).order_by("day_on").values_list("day_on", "name"))
