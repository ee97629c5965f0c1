"""What is due as a person walks it: by site, room and scanner."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Mapping
from dataclasses import dataclass, replace
from itertools import groupby

from qa_tracker.core.schedule import local_day
from qa_tracker.core.workflow import DEVICE_USABLE
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.holds import HoldRow
from qa_tracker.records.queries.sites import SiteRow
from qa_tracker.services import wording


@dataclass(frozen=True)
class DueLine:
    """One check that is due, with what the person may do about it."""

    check: CheckRow
    due: str
    pressing: bool
    may_enter: bool
    barred: str
    held: tuple[tuple[HoldRow, dt.date], ...] = ()


@dataclass(frozen=True)
class DueRoom:
    """The lines of one room."""

    name: str
    lines: tuple[DueLine, ...]


@dataclass(frozen=True)
class DueSite:
    """The rooms of one site, in walking order."""

    code: str
    name: str
    rooms: tuple[DueRoom, ...]


def due_sites(
    rows: list[CheckRow],
    sites: Mapping[int, SiteRow],
    enterable: set[uuid.UUID],
    at: dt.datetime,
    held: Mapping[int, list[HoldRow]],
) -> tuple[DueSite, ...]:
    """Group checks that come sorted by site, room and scanner; what sites share comes last."""
    rows = sorted(rows, key=lambda row: not row.site_code)
    return tuple(
        DueSite(code, _name(sites, code), _rooms(list(group), sites, enterable, at, held))
        for code, group in groupby(rows, key=lambda row: row.site_code)
    )


def _name(sites: Mapping[int, SiteRow], code: str) -> str:
    return next((site.name for site in sites.values() if site.code == code), "")


def _rooms(
    rows: list[CheckRow],
    sites: Mapping[int, SiteRow],
    enterable: set[uuid.UUID],
    at: dt.datetime,
    held: Mapping[int, list[HoldRow]],
) -> tuple[DueRoom, ...]:
    return tuple(
        DueRoom(
            name,
            tuple(replace(_line(row, sites, enterable, at), held=_held(row, sites, held)) for row in group),
        )
        for name, group in groupby(rows, key=lambda row: row.location)
    )


def _line(row: CheckRow, sites: Mapping[int, SiteRow], enterable: set[uuid.UUID], at: dt.datetime) -> DueLine:
    zone = zone_at(sites, row.site_id)
    return DueLine(
        check=row,
        due=wording.due_words(row, at, zone),
        pressing=row.due_at is not None and at >= row.due_at,
        may_enter=row.uid in enterable and (row.opens_at is None or row.opens_at <= at),
        barred="" if row.device_state in DEVICE_USABLE else wording.device_state_word(row.device_state),
    )


def _held(
    row: CheckRow, sites: Mapping[int, SiteRow], held: Mapping[int, list[HoldRow]]
) -> tuple[tuple[HoldRow, dt.date], ...]:
    """Who knows of a check, and until which day at its site."""
    zone = zone_at(sites, row.site_id)
    return tuple((hold, local_day(hold.until_at, zone)) for hold in held.get(row.id, ()))


def zone_at(sites: Mapping[int, SiteRow], site_id: int | None) -> str:
    """The time zone of a site; what belongs to none goes by UTC."""
    return sites[site_id].time_zone if site_id in sites else "UTC"
