"""Judging what was entered for a check: refusals beside their fields, verdicts with all they were judged by."""

from __future__ import annotations

import hashlib
import uuid
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from functools import lru_cache

from qa_tracker.core import conformity, decimals
from qa_tracker.core.canonical import canonical
from qa_tracker.core.conformity import Judgement
from qa_tracker.core.criteria import Criterion
from qa_tracker.core.decimals import Exact
from qa_tracker.core.errors import DomainError, Invalid, SeveralInvalid
from qa_tracker.core.sentence_codes import SentenceCode
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


@dataclass(frozen=True)
class JudgedItem:
    """An item with its entry, the exact value, and the verdict where there is a limit."""

    item: Item
    entry: Entry
    exact: Exact | None
    judgement: Judgement | None
    reference: str
    instruction: str

    @property
    def is_read(self) -> bool:
        """Whether there is a reading (a value, or "not seen")."""
        return bool(self.entry.text) or self.entry.qualifier == "not_seen"


@dataclass(frozen=True)
class Judged:
    """All items of a check, judged. ``worst`` is the item that makes the check's verdict."""

    items: tuple[JudgedItem, ...]
    worst: JudgedItem | None

    @property
    def verdict(self) -> str:
        """The check's verdict; empty where nothing has a limit."""
        return self.worst.judgement.verdict if self.worst and self.worst.judgement else ""

    @property
    def level(self) -> str:
        """The level that decided it."""
        return (self.worst.judgement.level or "") if self.worst and self.worst.judgement else ""

    def suggests_quarantine(self) -> bool:
        """Whether a finding is one for which the procedure says: out of use at once."""
        return self.verdict == "suspension" or any(
            one.entry.text in one.item.spec.suggests_quarantine_on for one in self.items if one.entry.text
        )


@dataclass(frozen=True)
class Instructions:
    """What the site tells people to do now."""

    remedial: str = ""
    suspension: str = ""

    def for_verdict(self, judgement: Judgement | None) -> str:
        """The words that go with a verdict; none with a conforming one."""
        if judgement is None or judgement.verdict == "conforming":
            return ""
        return {"suspension": self.suspension, "remedial": self.remedial}.get(judgement.level or "", "")


@dataclass(frozen=True)
class MeasuredWith:
    """The part of a baseline's key that belongs to the whole check."""

    console_model: str = ""
    console_software: str = ""
    test_object_id: int | None = None


def judge_all(
    items: Sequence[Item],
    entries: Mapping[str, Entry],
    instructions: Instructions,
    measured_with: MeasuredWith,
    *,
    whole: bool,
) -> Judged:
    """Judge every item.

    Parameters
    ----------
    entries
        By item key; a key that is not asked is refused.
    whole
        Whether this is for signing: then every required item needs a value or a reason, and a value that
        looks wrong needs its confirmation. Otherwise items left empty are left out.

    Raises
    ------
    SeveralInvalid
        with one refusal a field.
    """
    errors: list[DomainError] = _unknown(items, entries)
    exact: dict[str, Exact | None] = {}
    for item in items:
        try:
            exact[item.key] = read_entry(item, entries.get(item.key, EMPTY))
        except DomainError as error:
            errors.append(error)
    if whole:
        errors += [Invalid("reading.missing", field=item.key) for item in left_empty(items, entries)]
        errors += list(_doubtful(items, entries, exact))
    if errors:
        raise SeveralInvalid(tuple(errors))
    judged = [
        _judge_item(item, entries.get(item.key, EMPTY), exact, instructions, measured_with)
        for item in items
        if whole or entries.get(item.key, EMPTY).text or entries.get(item.key, EMPTY).qualifier == "not_seen"
    ]
    return Judged(tuple(judged), worst_of(judged))


def worst_of(judged: Sequence[JudgedItem]) -> JudgedItem | None:
    """The item whose verdict makes the check's."""
    with_verdict = [one for one in judged if one.judgement is not None]
    index = conformity.worst([one.judgement for one in with_verdict if one.judgement is not None])
    return None if index is None else with_verdict[index]


def _unknown(items: Sequence[Item], entries: Mapping[str, Entry]) -> list[DomainError]:
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


def _doubtful(
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


def _judge_item(
    item: Item,
    entry: Entry,
    exact: Mapping[str, Exact | None],
    instructions: Instructions,
    measured_with: MeasuredWith,
) -> JudgedItem:
    value = exact.get(item.key)
    reference = reference_of(item, exact)
    judgement = None
    in_group_unread = item.spec.one_of is not None and not entry.text and not entry.not_tested
    if (
        item.criterion is not None
        and not in_group_unread
        and (item.spec.required or entry.text or entry.not_tested)
    ):
        judgement = _judge(item, entry, value, reference, measured_with)
    return JudgedItem(item, entry, value, judgement, reference, instructions.for_verdict(judgement))


def reference_of(item: Item, exact: Mapping[str, Exact | None]) -> str:
    """What the reading is compared with, as text: nominal, or the other reading of a ratio."""
    if item.spec.reference_from is not None:
        other = exact.get(item.key.replace(item.spec.code, item.spec.reference_from, 1))
        return decimals.plain(other.decimal) if other else ""
    return item.nominal or ""


def _judge(
    item: Item, entry: Entry, value: Exact | None, reference: str, measured_with: MeasuredWith
) -> Judgement | None:
    if item.criterion is None:
        return None
    judgement = _verdict_on(
        item.criterion.uid,
        item.criterion.spec.criterion,
        value=decimals.plain(value.decimal) if value else (entry.text or None),
        kind=item.spec.kind,
        qualifier=entry.qualifier,
        nominal=reference or None,
        baseline=decimals.plain(item.baseline.value) if item.baseline else None,
        baseline_qualifier=item.baseline.qualifier if item.baseline else "=",
        reference=reference or None,
        quantity=item.quantity or None,
        unit=item.spec.unit if item.spec.kind in NUMBERS else None,
        criterion_unit=item.criterion.spec.unit if item.spec.kind in NUMBERS else None,
    )
    flags = baseline_flags(item, measured_with)
    return replace(judgement, parameters=judgement.parameters | flags) if flags else judgement


@lru_cache(maxsize=8192)
def _verdict_on(criterion_uid: uuid.UUID, criterion: Criterion, **question: str | None) -> Judgement:
    """The same question has the same answer, and most readings of a fleet ask one that was asked before.

    Numbers are asked as texts, since 146 and 146.0 are equal and yet not the same sentence.
    """
    return conformity.judge(criterion, **question)  # type: ignore[arg-type]


def baseline_flags(item: Item, measured_with: MeasuredWith) -> dict[str, str]:
    """How the baseline's key differs from this check: flagged on the verdict, never passed over."""
    base, criterion = item.baseline, item.criterion
    if base is None or criterion is None or criterion.spec.criterion.basis != "baseline":
        return {}
    flags = {}
    for name, was, now in (
        ("mismatch_console", base.console_model, measured_with.console_model),
        ("mismatch_software", base.console_software, measured_with.console_software),
    ):
        if was and now and was != now:
            flags[name] = f"{was} / {now}"
    if base.test_object_id and measured_with.test_object_id not in (None, base.test_object_id):
        flags["mismatch_object"] = base.test_object
    if base.under_review:
        flags["baseline_under_review"] = "yes"
    return flags


def shown_sha256(check_uid: str, edition_sha256: str, facts: Mapping[str, str | None], judged: Judged) -> str:
    """The hash of exactly what a signer is shown: every value, verdict and sentence, and the facts around."""
    shown = {
        "check": check_uid,
        "edition": edition_sha256,
        "facts": dict(facts),
        "items": [
            [
                one.item.key, one.entry.qualifier, one.entry.text, one.item.spec.unit, one.entry.not_tested,
                one.entry.remark, one.entry.condition_note,
                one.judgement.verdict if one.judgement else "",
                (one.judgement.level or "") if one.judgement else "",
                str(one.judgement.code) if one.judgement else "",
                one.judgement.parameters if one.judgement else {},
            ]
            for one in judged.items
        ],
    }  # fmt: skip
    return hashlib.sha256(canonical(shown)).hexdigest()


def unread_code() -> SentenceCode:
    """The sentence of an item that was not read."""
    return SentenceCode.NO_READING
