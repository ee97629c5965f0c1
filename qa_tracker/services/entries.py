"""What was typed for a check: read exactly, or refused beside its field; asked again where it looks mistyped."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal

from qa_tracker.core import decimals
from qa_tracker.core.decimals import Exact
from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.services.items import Item

NUMBERS = ("number", "count", "image", "derived")
REASONS = ("in_use", "in_theatre", "being_disinfected", "isolation_room", "on_loan", "not_found", "other")


@dataclass(frozen=True)
class Entry:
    """What was typed for one item; ``confirmed`` answers a value that was asked about."""

    text: str = ""
    qualifier: str = "="
    unit: str = ""
    not_tested: str = ""
    remark: str = ""
    condition_note: str = ""
    confirmed: bool = False
    origin: str = "typed"


EMPTY = Entry()
"""What an item has for which nothing was typed."""


def not_asked(items: Sequence[Item], entries: Mapping[str, Entry]) -> list[DomainError]:
    """A refusal for each key that the check does not ask."""
    asked = {item.key for item in items}
    return [Invalid("reading.not_asked", field=key, key=key) for key in entries if key not in asked]


def read_entry(item: Item, entry: Entry) -> Exact | None:
    """Read what was typed for one item.

    Raises
    ------
    Invalid
        ``number.*``, ``reading.unit_wrong``, ``reading.qualifier_not_allowed``, ``reading.grade_unknown``,
        ``reading.seen_and_not_seen``, ``reading.both``, ``reading.reason_unknown``
    """
    if entry.not_tested:
        if entry.text:
            raise Invalid("reading.both", field=item.key)
        if entry.not_tested not in REASONS:
            raise Invalid("reading.reason_unknown", field=item.key, reason=entry.not_tested)
        return None
    if not entry.text and entry.qualifier != "not_seen":
        return None
    if entry.text and entry.qualifier == "not_seen":
        raise Invalid("reading.seen_and_not_seen", field=item.key)
    if entry.qualifier not in item.spec.qualifiers:
        raise Invalid(
            "reading.qualifier_not_allowed",
            field=item.key,
            qualifier=entry.qualifier,
            allowed=", ".join(item.spec.qualifiers),
        )
    if entry.unit and entry.unit != item.spec.unit:
        raise Invalid("reading.unit_wrong", field=item.key, unit=entry.unit, wanted=item.spec.unit)
    return _value(item, entry)


def _value(item: Item, entry: Entry) -> Exact | None:
    spec = item.spec
    if entry.qualifier == "not_seen":
        return None
    if spec.kind in NUMBERS:
        return decimals.parse(entry.text, spec.resolution, field=item.key)
    known = [grade.value for grade in spec.grades] if spec.kind == "grade" else ["yes", "no"]
    if spec.kind in ("grade", "yes_no") and entry.text not in known:
        raise Invalid("reading.grade_unknown", field=item.key, grade=entry.text, known=", ".join(known))
    if len(entry.text) > 300:
        raise Invalid("reading.text_too_long", field=item.key, most=300)
    return None


def _answered(entry: Entry) -> bool:
    return bool(entry.text or entry.not_tested or entry.qualifier == "not_seen")


def left_empty(items: Sequence[Item], entries: Mapping[str, Entry]) -> list[Item]:
    """Required items without a value or a reason; of items that share a group one answer is enough."""
    answered = {
        (item.spec.one_of, item.series[1:])
        for item in items
        if item.spec.one_of and _answered(entries.get(item.key, EMPTY))
    }
    return [
        item
        for item in items
        if (item.spec.required or item.spec.one_of)
        and not _answered(entries.get(item.key, EMPTY))
        and (item.spec.one_of is None or (item.spec.one_of, item.series[1:]) not in answered)
    ]


def doubtful(
    items: Sequence[Item], entries: Mapping[str, Entry], exact: Mapping[str, Exact | None]
) -> list[DomainError]:
    """Values that look mistyped and were not confirmed."""
    found: list[DomainError] = []
    for item in items:
        value, entry = exact.get(item.key), entries.get(item.key, EMPTY)
        if value is None or entry.confirmed:
            continue
        last = item.last
        before = (
            decimals.from_scaled(last.scaled, last.places or 0) if last and last.scaled is not None else None
        )
        band = item.spec.plausible
        if before is not None and decimals.near_factor_ten(value.decimal, before):
            found.append(
                Invalid(
                    "reading.confirm_tenfold",
                    field=item.key,
                    value=value.entered,
                    last=decimals.plain(before),
                )
            )
        elif band and decimals.far_outside(value.decimal, Decimal(band.low), Decimal(band.high)):
            found.append(
                Invalid(
                    "reading.confirm_outside",
                    field=item.key,
                    value=value.entered,
                    low=band.low,
                    high=band.high,
                )
            )
    return found
