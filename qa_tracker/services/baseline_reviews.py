"""Baselines under review after a software event: which they are, and keeping them, signed."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence

from qa_tracker.core.decimals import Exact
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.records import ledger
from qa_tracker.records.models import Baseline, Person
from qa_tracker.services.baseline_limits import moved_to, refuse_beyond
from qa_tracker.services.baseline_proposals import FOR_GOOD, Around, around
from qa_tracker.services.baseline_rows import (
    Moved,
    Setting,
    SetUp,
    Source,
    change_of,
    put_epoch,
    setups_of,
    sign,
    told_of,
)
from qa_tracker.services.baselines import source_of
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.guards import check_password


def kept_setting(
    row: Baseline, model: str, software: str, reason: str, by: Person, setups: tuple[SetUp, ...]
) -> Setting:
    """The epoch that keeps a baseline's value for the software in use now; its set-ups are kept with it."""
    return Setting(
        row.device,
        row.measurand,
        row.aperture,
        row.condition,
        Exact(row.entered, row.scaled, row.places),
        row.qualifier,
        Source(model, software, row.test_object, row.method, row.from_readings),
        reason,
        by,
        row.expires_on,
        setups=setups,
    )


def keep(
    *,
    device: uuid.UUID,
    baselines: Sequence[uuid.UUID],
    reason: str,
    password: str,
    actor: Person,
    at: dt.datetime,
) -> list[Baseline]:
    """Keep baselines that are under review: the same value for the software in use now, signed.

    Writes Baseline, BaselineSetup, Signature; leaf ``baseline.kept``. The step it records is none, and the
    mismatch of software ends. Refused: role, no reason, a wrong password, one that is not under review or not of
    this device, a value that fails a limit which stands on no baseline.
    """
    row = find_device(actor, device, at)
    known = around(row, reason, FOR_GOOD, actor, at)
    found = _under_review(known, baselines)
    settings = [_setting(known, each) for each in found]
    told = [_told(known, each, setting) for each, setting in zip(found, settings, strict=True)]
    check_password(actor, password)
    with ledger.command("baseline.kept", actor=actor, at=at, reason=known.reason) as act:
        made = [put_epoch(act, each, known.standing[each.series]) for each in settings]
        sign(act, row, told, actor, known.role, known.reason)
    return made


def _under_review(known: Around, uids: Sequence[uuid.UUID]) -> list[Baseline]:
    standing = {row.uid: row for rows in known.standing.values() for row in rows}
    if not uids:
        raise Invalid("baseline.none_chosen", field="baselines")
    if not set(uids) <= set(standing):
        raise Invalid("baseline.unknown", field="baselines")
    found = [row for uid, row in standing.items() if uid in set(uids)]
    if not all(row.under_review for row in found):
        raise Conflict("baseline.not_under_review", field="baselines")
    return found


def _setting(known: Around, row: Baseline) -> Setting:
    now_with = source_of(known.device, None)
    return kept_setting(
        row,
        now_with.console_model or row.console_model,
        now_with.console_software or row.console_software,
        known.reason,
        known.actor,
        setups_of([row.pk]).get(row.pk, ()),
    )


def _told(known: Around, row: Baseline, setting: Setting) -> dict[str, object]:
    """As leaf and signature say it; a measurand that no adopted procedure asks for any more has no limits."""
    earlier = known.earlier[setting.series]
    moved = Moved(change_of(setting, earlier))
    spec = known.specs.get(row.measurand.code)
    if spec is not None:
        asked = known.asked(spec, (row.aperture, row.condition))
        refuse_beyond(asked, setting.exact, row.qualifier, row.test_object)
        moved = moved_to(asked, moved.change, earlier[0].value, earlier[-1])
    return told_of(setting, 1 + max(each.epoch for each in earlier), moved)
