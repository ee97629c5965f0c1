"""From the inputs of the entry page, by name, to what the service is given.

A value is named by its item's key; ``q-``, ``n-``, ``r-`` and ``c-`` before the key name its qualifier, the
reason it could not be tested, the remark to that, and the confirmation of a value that was asked about.
``condition-<id>`` says ``unchanged`` or ``changed``, ``condition-<id>-note`` what differs.
"""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Iterable, Mapping

from qa_tracker.core.errors import DomainError, Invalid, NotFound
from qa_tracker.core.schedule_days import zone_of
from qa_tracker.records.queries.submissions import SubmissionRow
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry
from qa_tracker.services.items import Item

NOT_TYPED = ("csrfmiddlewaretoken", "revision", "then", "typed_by", "password")
UNCHANGED = "unchanged"
CLEANED = ("cleaned_how", "cleaned_by", "cleaned_cycle")


def typed_inputs(data: Mapping[str, str]) -> dict[str, str]:
    """Everything typed, by name; empty inputs are left out, and signs no database keeps are dropped."""
    cleaned = {name: value.replace("\x00", "") for name, value in data.items() if name not in NOT_TYPED}
    return {name: value for name, value in cleaned.items() if value.strip()}


def entries_of(items: Iterable[Item], typed: Mapping[str, str]) -> dict[str, Entry]:
    """The entries of a check's items that have anything typed."""
    found = {item.key: _entry(item, typed) for item in items}
    return {key: entry for key, entry in found.items() if entry != Entry()}


def _entry(item: Item, typed: Mapping[str, str]) -> Entry:
    key = item.key
    qualifier = typed.get(f"q-{key}", "=")
    text = "" if qualifier == "not_seen" else typed.get(key, "").strip()
    not_tested = typed.get(f"n-{key}", "")
    if not (text or not_tested or qualifier == "not_seen"):
        return Entry()
    return Entry(
        text=text,
        qualifier=qualifier,
        not_tested=not_tested,
        remark=typed.get(f"r-{key}", "").strip()[:300],
        condition_note=condition_note(item, typed),
        confirmed=f"c-{key}" in typed,
    )


def condition_note(item: Item, typed: Mapping[str, str]) -> str:
    """ "unchanged", or what differs from the condition's recorded settings; empty where nothing was said."""
    if item.condition is None:
        return ""
    said = typed.get(f"condition-{item.condition.id}", "")
    return typed.get(f"condition-{item.condition.id}-note", "").strip() if said == "changed" else said


def unconfirmed(items: Iterable[Item], typed: Mapping[str, str]) -> tuple[DomainError, ...]:
    """One refusal for each condition that is neither confirmed nor described, though read under."""
    asked = {
        item.condition.id: item.condition
        for item in items
        if item.condition is not None and typed.get(item.key, "") and not condition_note(item, typed)
    }
    return tuple(
        Invalid("reading.condition_unconfirmed", field=f"condition-{key}", condition=condition.name)
        for key, condition in asked.items()
    )


def cleaned_before(typed: Mapping[str, str]) -> str:
    """How, by whom and in which cycle the device was cleaned, as one text; empty without how and by whom."""
    how, by_whom, cycle = (typed.get(name, "").strip() for name in CLEANED)
    if not (how and by_whom):
        return ""
    return f"{how}, {by_whom}" + (f", {cycle}" if cycle else "")


def moment(text: str, zone: str) -> dt.datetime | None:
    """A local date and time of the site; None where nothing was typed (``check.measured_at_wrong``)."""
    if not text:
        return None
    try:
        typed = dt.datetime.fromisoformat(text)
    except ValueError as error:
        raise Invalid("check.measured_at_wrong", field="measured_at", entered=text[:40]) from error
    return typed if typed.tzinfo else typed.replace(tzinfo=zone_of(zone))


def chosen(typed: Mapping[str, str], name: str) -> uuid.UUID | None:
    """The test object or instrument chosen in a list."""
    text = typed.get(name, "")
    if not text:
        return None
    try:
        return uuid.UUID(text)
    except ValueError as error:
        raise NotFound(f"{name}.unknown", field=name) from error


def typed_of(items: Iterable[Item], typed: Mapping[str, str], zone: str) -> Typed:
    """What the service judges and signs."""
    return Typed(
        entries=entries_of(items, typed),
        measured_at=moment(typed.get("measured_at", ""), zone),
        test_object=chosen(typed, "test_object"),
        instrument=chosen(typed, "instrument"),
        port=typed.get("port", "").strip()[:20],
        cleaned_before=cleaned_before(typed),
        cleaned_after=typed.get("cleaned_after", "").strip(),
        partial_reason=typed.get("partial_reason", ""),
        remark=typed.get("remark", "").strip(),
        outside_reason=typed.get("outside_reason", "").strip()[:300],
    )


def inputs_of(row: SubmissionRow) -> dict[str, str]:
    """The inputs a submission was made from, as far as it holds them; to put a check right that was sent back."""
    names = {"port": row.port, "remark": row.remark, "cleaned_after": row.cleaned_after}
    typed: dict[str, str] = {**names, "outside_reason": row.reason}
    for reading in row.readings:
        if reading.id is None:
            continue
        place = (reading.measurand, reading.aperture_id or 0, reading.condition_id or 0, reading.repeat)
        key = ".".join(str(part) for part in place)
        typed |= {key: reading.entered, f"q-{key}": reading.qualifier}
    return {name: value for name, value in typed.items() if value}
