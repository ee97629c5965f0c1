"""The life of checks: compliance with plans, moving a due day, and the year ahead."""

from __future__ import annotations

import datetime as dt
import uuid
from typing import Any, Literal

from ninja import Schema

from qa_tracker.api.authentication import ApiRequest
from qa_tracker.api.check_shapes import CheckOut
from qa_tracker.api.checks import check_row
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Given, Mark, Moment, Short
from qa_tracker.core.errors import NotFound
from qa_tracker.core.schedule import local_day
from qa_tracker.records.queries import checks as rows
from qa_tracker.records.queries import compliance as queries
from qa_tracker.records.queries import devices, library, people, sites
from qa_tracker.records.queries.compliance import Extent
from qa_tracker.services import due_days, year_ahead

router = NounRouter(tags=["planning"])
YEAR = dt.timedelta(days=365)


class FiguresOut(Schema):
    """Counts of one site, procedure or device; `overdue` is a part of `late`, `awaited_late` of `awaited`.

    `owed` is what was done, what was missed and what is awaited past its due day: percentages are of that, and empty
    where it is 0. What was excused or made void is no part of it.
    """

    label: str
    owed: int
    on_time: int
    late: int
    overdue: int
    missed: int
    excused: int
    awaited: int
    awaited_late: int
    void: int
    percent_on_time: int | None


class ComplianceOut(Schema):
    """The figures as they were known at a moment, and why checks were excused."""

    as_known_at: Moment
    from_on: dt.date
    until_on: dt.date
    figures: list[FiguresOut]
    excused_because: dict[str, int]


class DueMoveIn(Given):
    """The new due day, inside the check's window, and why."""

    to_on: dt.date
    reason: Short


class LoadOut(Schema):
    """Minutes of work expected of one person in the week of a Monday."""

    week_on: dt.date
    person: str
    minutes: int


class YearOut(Schema):
    """53 weeks of work from the plans as they are now; `unknown_minutes` counts checks left out of the minutes."""

    as_known_at: Moment
    checks: int
    unknown_minutes: int
    without_anyone: int
    loads: list[LoadOut]


@router.reads("/compliance", ComplianceOut, "showCompliance", 404)
def show_compliance(
    request: ApiRequest,
    from_on: dt.date | None = None,
    until_on: dt.date | None = None,
    by: Literal["site", "procedure", "device"] = "site",
    site: uuid.UUID | None = None,
    procedure: Mark | None = None,
    device: uuid.UUID | None = None,
    as_of: Moment | None = None,
) -> dict[str, Any]:
    """What became of the checks due from a day until a day, both included; the last year unless named."""
    caller = request.auth
    until_on = until_on or caller.at.date()
    from_on = from_on or until_on - YEAR
    extent = Extent(from_on, until_on, _site(request, site), _procedure(procedure), _device(request, device))
    found = queries.groups(caller.scope(), extent, by, caller.at, as_of)
    return {
        "as_known_at": as_of or caller.at,
        "from_on": from_on,
        "until_on": until_on,
        "figures": [
            vars(each.tally)
            | {
                "label": each.label,
                "owed": each.tally.owed,
                "percent_on_time": each.tally.percent(each.tally.on_time),
            }
            for each in found
        ],
        "excused_because": queries.excuses(caller.scope(), extent, as_of),
    }


def _site(request: ApiRequest, uid: uuid.UUID | None) -> int | None:
    if uid is None:
        return None
    found = next((each for each in sites.list_sites(request.auth.scope()) if each.uid == uid), None)
    if found is None:
        raise NotFound("site.unknown")
    return found.id


def _procedure(code: str | None) -> int | None:
    if code is None:
        return None
    return next((each.procedure_id for each in library.list_editions() if each.code == code), 0)


def _device(request: ApiRequest, uid: uuid.UUID | None) -> int | None:
    if uid is None:
        return None
    found = devices.find_device(request.auth.scope(), uid)
    if found is None:
        raise NotFound("device.unknown")
    return found.id


@router.does("/checks/{uuid:uid}/move-due", CheckOut, "moveDueDay")
def move_due_day(request: ApiRequest, uid: uuid.UUID, body: DueMoveIn) -> rows.CheckRow:
    """Move an awaited check's due day inside its window; the next is counted from the plan's own day."""
    caller = request.auth
    due_days.move(check=uid, to_on=body.to_on, reason=body.reason, actor=caller.actor, at=caller.at)
    return check_row(caller, uid)


@router.reads("/year-ahead", YearOut, "showYearAhead", 404)
def show_year_ahead(request: ApiRequest, site: uuid.UUID | None = None) -> dict[str, Any]:
    """The work of each week by person, from the plans."""
    caller = request.auth
    year = year_ahead.look(caller.scope(), local_day(caller.at, "UTC"), _site(request, site))
    names = people.names({person for _week, person in year.loads})
    loads = [
        {"week_on": week_on, "person": names.get(person, ""), "minutes": round(minutes)}
        for (week_on, person), minutes in sorted(year.loads.items())
        if minutes
    ]
    return {
        "as_known_at": caller.at,
        "checks": year.checks,
        "unknown_minutes": year.unknown,
        "without_anyone": year.nobodys,
        "loads": loads,
    }
