"""The bulk door for baselines: taken from a check, from set-ups, or kept after a software event."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass

from qa_tracker.core.decimals import Exact
from qa_tracker.core.schedule import local_day
from qa_tracker.records import ledger
from qa_tracker.records.models import Baseline, Person
from qa_tracker.services.baseline_limits import Asked, moved_to
from qa_tracker.services.baseline_reviews import kept_setting
from qa_tracker.services.baseline_rows import (
    Moved,
    Setting,
    SetUp,
    Source,
    Tie,
    change_of,
    epoch_of,
    exact_mean,
    put_epoch,
    sign,
    told_of,
)
from qa_tracker.services.baselines import source_of_submissions
from qa_tracker.services.entries import Entry, read_entry
from qa_tracker.services.history import Done, Kept, Past
from qa_tracker.services.history_rows import in_force_rows
from qa_tracker.services.items import Item
from qa_tracker.services.judging import JudgedItem


@dataclass(frozen=True)
class _Wanted:
    """One baseline to be set, and the item its series is read by."""

    item: Item
    exact: Exact
    qualifier: str = "="
    setups: tuple[SetUp, ...] = ()
    tied: bool = False


def set_from_check(
    past: Past,
    kept: Kept,
    done: Done,
    codes: Sequence[str],
    *,
    by: Person,
    reason: str,
    at: dt.datetime,
    texts: dict[str, str] | None = None,
    tied: bool = False,
) -> list[Baseline]:
    """Make readings of a submission the baselines of their series, signed.

    ``texts`` puts a mean in a reading's place; ``tied`` says that the object before was read the same day, as its
    baseline says, so that the step between the two objects is none of the device's.
    """
    wanted = [
        _Wanted(one.item, _typed(one, texts or {}) or one.exact, one.entry.qualifier, tied=tied)
        for one in done.judged.items
        if one.item.spec.code in codes and one.exact is not None and one.item.repeat == 1
    ]
    return _set(past, kept, wanted, source_of_submissions([done.submission]), by, reason, at)


def _typed(one: JudgedItem, texts: dict[str, str]) -> Exact | None:
    text = texts.get(one.item.spec.code)
    return read_entry(one.item, Entry(text)) if text else None


def set_from_setups(
    past: Past, kept: Kept, setups: Sequence[Done], code: str, *, by: Person, reason: str, at: dt.datetime
) -> Baseline:
    """Make the mean of a measurand over independent checks its baseline, signed; each is kept as a set-up."""
    items: list[Item] = []
    found: list[SetUp] = []
    for done in setups:
        one = next(one for one in done.judged.items if one.item.spec.code == code and one.exact is not None)
        zone = past.days_of(done.check.site).zone
        items.append(one.item)
        if one.exact is not None:
            found.append(SetUp(one.exact, local_day(done.submission.measured_at, zone), done.submission))
    mean = exact_mean([one.exact.decimal for one in found], items[-1].spec.resolution)
    source = source_of_submissions([done.submission for done in setups])
    wanted = _Wanted(items[-1], mean, setups=tuple(found))
    return _set(past, kept, [wanted], source, by, reason, at)[0]


def _set(
    past: Past,
    kept: Kept,
    wanted: Sequence[_Wanted],
    source: Source,
    by: Person,
    reason: str,
    at: dt.datetime,
) -> list[Baseline]:
    settings = [_setting(past, kept, each, source, by, reason) for each in wanted]
    told = [_told(past, kept, setting, each.item) for setting, each in zip(settings, wanted, strict=True)]
    return _put(kept, past.act("baseline.set", by, at, reason), settings, told, by, reason)


def _setting(past: Past, kept: Kept, wanted: _Wanted, source: Source, by: Person, reason: str) -> Setting:
    item = wanted.item
    epochs = kept.baselines.get(item.series, [])
    before = epochs[-1] if wanted.tied and epochs else None
    return Setting(
        kept.device,
        past.measurands[item.spec.code],
        kept.apertures.get(item.aperture.id) if item.aperture else None,
        kept.conditions.get(item.condition.id) if item.condition else None,
        wanted.exact,
        wanted.qualifier,
        source,
        reason,
        by,
        setups=wanted.setups,
        tie=Tie(before, Exact(before.entered, before.scaled, before.places)) if before else None,
    )


def _told(past: Past, kept: Kept, setting: Setting, item: Item) -> dict[str, object]:
    """A baseline as its leaf says it, with its change from the first of its series."""
    epochs = kept.baselines.get(setting.series, [])
    if not epochs:
        return told_of(setting, 1, Moved(change_of(setting, [])))
    asked = Asked(kept.device, item.spec, setting.aperture, setting.condition, item.met, past.criteria)
    newest = in_force_rows(setting.series, epochs, kept.setups)[0]
    change = change_of(setting, epochs)
    return told_of(setting, epochs[-1].epoch + 1, moved_to(asked, change, epoch_of(epochs[0]).value, newest))


def keep_under_review(
    past: Past, kept: Kept, software: str, *, by: Person, reason: str, at: dt.datetime
) -> list[Baseline]:
    """Keep every baseline of a device that is under review: the same values, for the software in use now."""
    settings = [
        kept_setting(row, row.console_model, software, reason, by, kept.setups.get(row.pk, ()))
        for epochs in kept.baselines.values()
        for row in epochs
        if row.under_review
    ]
    if not settings:
        return []
    told = [_told_kept(setting, kept.baselines[setting.series]) for setting in settings]
    return _put(kept, past.act("baseline.kept", by, at, reason), settings, told, by, reason)


def _told_kept(setting: Setting, epochs: Sequence[Baseline]) -> dict[str, object]:
    return told_of(setting, epochs[-1].epoch + 1, Moved(change_of(setting, epochs)))


def _put(
    kept: Kept,
    act: ledger.Act,
    settings: Sequence[Setting],
    told: Sequence[dict[str, object]],
    by: Person,
    reason: str,
) -> list[Baseline]:
    """The rows and the leaf, and what later checks of the device have to know of them."""
    found = []
    for setting in settings:
        epochs = kept.baselines.setdefault(setting.series, [])
        row = put_epoch(act, setting, epochs)
        epochs.append(row)
        kept.setups[row.pk] = setting.setups
        found.append(row)
    kept.items.clear()
    sign(act, kept.device, told, by, "physicist", reason)
    return found
