"""The page of one device: who it is, where, how it stands, and its whole history; now or on a past day."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now

from qa_tracker.core.errors import NotFound
from qa_tracker.core.schedule import local_day
from qa_tracker.records.queries import (
    baselines,
    checks,
    devices,
    dossiers,
    faults,
    library,
    plans,
    series,
    submissions,
)
from qa_tracker.records.queries.baseline_readings import Waiting, under_review_at
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.devices import ApertureRow, ConditionRow, DeviceRow
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.records.queries.submissions import SignatureRow
from qa_tracker.services import guards
from qa_tracker.web import sight
from qa_tracker.web.asof import Known, known
from qa_tracker.web.presenters import charts, times
from qa_tracker.web.presenters.baselines import Limits, baselines_in_words, place_of
from qa_tracker.web.presenters.device import (
    Specs,
    conditions_in_words,
    facts_of,
    name_of,
    plans_in_words,
)
from qa_tracker.web.presenters.device_actions import offered
from qa_tracker.web.presenters.register import kind_words

MOST_CHECKS = 400
LISTED = 25


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The device as it is known now, or at the end of a past day."""
    at = now()
    row, asked, zone = _found(request, uid, at)
    moment = min((each for each in (asked.moment, row.seen_until) if each), default=None)
    past = moment is not None
    context = {
        "device": row,
        "asked": asked,
        "past": past,
        "zone": zone,
        "at": at,
        "kind": kind_words(row),
        "facts": facts_of(row),
        **_records(row, moment, at, zone),
    }
    if not past:
        context |= _doing(request, row, context["signatures"], at)
    return render(request, "device.html", context)


def _found(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> tuple[DeviceRow, Known, str]:
    scope = guards.scope(request.user, at)
    row = devices.find_device(scope, uid)
    if row is None:
        raise NotFound("device.unknown")
    zone = sight.zone_of_site(row.site_id)
    asked = known(request, zone, at)
    then = devices.find_device(scope, uid, asked.moment) if asked.moment else row
    if then is None:
        raise NotFound("device.unknown")
    return then, asked, zone


def _records(row: DeviceRow, moment: dt.datetime | None, at: dt.datetime, zone: str) -> dict[str, object]:
    """What is on record of a device until a moment."""
    until = moment or at
    done = checks.checks_of_device(row.id, until=moment, most=MOST_CHECKS)
    editions = library.adopted_procedures(row.site_id, moment)
    specs = {spec.code: spec for edition in editions for spec in edition.spec.measurands}
    apertures = devices.apertures_of(row.id, moment)
    conditions = devices.conditions_of(row.id, moment)
    epochs = baselines.baselines_of(row.id, moment)
    placed = devices.placements_of(row.id, moment)
    limits = Limits(specs, library.adopted_criteria(row.site_id, moment), conditions)
    told = baselines_in_words(epochs, limits, local_day(until, zone))
    return {
        "apertures": apertures,
        "conditions": conditions_in_words(conditions),
        "software": devices.software_of(row.id, moment),
        "placements": placed,
        "placements_line": times.placements_line(placed, until),
        "plans": plans_in_words(plans.plans_of(row.id, moment), done, until, zone),
        "baselines": told,
        "reviews": [each for each in told if each.under_review],
        "waiting": _waiting(row) if moment is None else [],
        "strips": times.strips(done, until),
        "checks": _listed(done),
        "charts": _charts(row, limits, apertures, epochs, moment, until),
        "faults": faults.faults_of_device(row.id, moment),
        "signatures": submissions.signatures_of(row.uid, moment),
        "procedures": _startable(row, editions),
    }


def _waiting(row: DeviceRow) -> list[Waiting]:
    """Who has baselines under review, of a scanner and the probes on it."""
    return under_review_at(row.id) if row.kind == "scanner" else []


def _listed(done: list[CheckRow]) -> list[CheckRow]:
    """The newest checks that were submitted, missed or excused."""
    past = [each for each in done if each.submitted_at or each.state in times.UNDONE]
    return sorted(past, key=lambda each: each.submitted_at or each.due_at or each.opens_at, reverse=True)[
        :LISTED
    ]


def _startable(row: DeviceRow, editions: list[EditionRow]) -> list[EditionRow]:
    """The adopted procedures meant for this kind of device."""
    return [each for each in editions if row.kind in each.spec.applies_to.kinds]


def _charts(
    row: DeviceRow,
    limits: Limits,
    apertures: list[ApertureRow],
    epochs: list[BaselineRow],
    moment: dt.datetime | None,
    until: dt.datetime,
) -> tuple[charts.Chart, ...]:
    points = series.every_series(row.id, times.months_before(until), moment)
    faces = {each.id: each.name for each in apertures}
    presets = {each.id: each for each in limits.conditions}
    specs, criteria = limits.specs, limits.adopted
    names = {key: _names(key, specs, faces, presets) for key in points}
    lines = {}
    for key, rows in points.items():
        wanted = specs[key[0]].criteria if key[0] in specs else ()
        criterion = next((criteria[code] for code in wanted if code in criteria), None)
        quantity = presets[key[2]].test_frequency_mhz if key[2] in presets else ""
        own = [each for each in epochs if each.key == key]
        lines[key] = charts.lines_of(criterion, own, rows[-1], quantity)
    return charts.charts_of(points, names, lines, until)


def _names(
    key: SeriesKey, specs: Specs, faces: dict[int, str], presets: dict[int, ConditionRow]
) -> tuple[str, str]:
    preset = presets.get(key[2] or 0)
    aperture = faces.get(key[1] or 0, "") if len(faces) > 1 else ""
    return name_of(key[0], specs), place_of(aperture, preset.name if preset else "")


def _doing(
    request: HttpRequest, row: DeviceRow, signatures: list[SignatureRow], at: dt.datetime
) -> dict[str, object]:
    """What the person may do with the device now."""

    def may(verb: str) -> bool:
        return guards.may(request.user, verb, sight.site_for(request, verb, row.site_id), at)

    accepted = any(each.meaning == "accepted" for each in signatures)
    return {
        "offered": offered(row, may, accepted=accepted),
        "may": {verb.replace(".", "_"): may(verb) for verb in ASKED},
        "dossiers": dossiers.list_dossiers(guards.scope(request.user, at), most=5, device_id=row.id)
        if may("dossier.read")
        else [],
    }


ASKED = (
    "baseline.set", "check.enter", "check.enter_user", "condition.set", "device.edit", "device.quarantine",
    "dossier.issue", "dossier.read", "fault.open", "ledger.read", "plan.make",
)  # fmt: skip
