"""Judging what was entered for a check: refusals beside their fields, verdicts with all they were judged by."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from decimal import Decimal

from qa_tracker.core import conformity, decimals
from qa_tracker.core.allowances import least_reference
from qa_tracker.core.canonical import canonical
from qa_tracker.core.conformity import Judgement
from qa_tracker.core.decimals import Exact
from qa_tracker.core.errors import DomainError, Invalid, SeveralInvalid
from qa_tracker.core.sentence_codes import SentenceCode
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.services.deriving import WorkedOut, work_out
from qa_tracker.services.entries import EMPTY, Entry, doubtful, left_empty, not_asked, read_entry
from qa_tracker.services.items import Item
from qa_tracker.services.weighing import MeasuredWith, Reference, Weighed, stated_for, weigh


@dataclass(frozen=True)
class JudgedItem:
    """An item with its entry, the exact value, and what its limits said; ``weighed`` is the one that decides."""

    item: Item
    entry: Entry
    exact: Exact | None
    weighed: Weighed | None
    instruction: str
    further: tuple[Weighed, ...] = ()

    @property
    def judgement(self) -> Judgement | None:
        """The verdict of the limit that decides."""
        return self.weighed.judgement if self.weighed else None

    @property
    def criterion(self) -> CriterionRow | None:
        """The limit that decides."""
        return self.weighed.criterion if self.weighed else None

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
class Asked:
    """What a check asks, what is worked out from it, and under what it is judged.

    ``attributes`` are those of device and test object that formulas may name.
    """

    items: tuple[Item, ...]
    derived: tuple[Item, ...] = ()
    attributes: Mapping[str, Mapping[str, object]] = field(default_factory=dict)
    instructions: Instructions = field(default_factory=Instructions)
    measured_with: MeasuredWith = field(default_factory=MeasuredWith)


def judge_all(asked: Asked, entries: Mapping[str, Entry], *, whole: bool) -> Judged:
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
    exact = _read(asked.items, entries, whole=whole)
    judged = [
        _judge_item(item, entries.get(item.key, EMPTY), exact, asked)
        for item in asked.items
        if whole or entries.get(item.key, EMPTY).text or entries.get(item.key, EMPTY).qualifier == "not_seen"
    ]
    if asked.derived:
        made = work_out(asked.derived, asked.items, entries, exact, asked.attributes)
        judged += [
            each for each in (_judge_derived(one, asked) for one in made) if _is_told(each, whole=whole)
        ]
    return Judged(tuple(judged), worst_of(judged))


def _is_told(one: JudgedItem, *, whole: bool) -> bool:
    """Whether a derived item is part of the check: it has a value, or should have had one to be judged."""
    return one.exact is not None or (whole and one.item.spec.required and one.weighed is not None)


def _judge_derived(made: WorkedOut, asked: Asked) -> JudgedItem:
    """Judge a quantity that was worked out; one that could not be is not assessable by each of its limits."""
    item, reference = made.item, Reference(made.item.nominal or "")
    if made.refusal is not None:
        weighed = tuple(Weighed(each, made.refusal, "", "", "simple") for each in item.criteria)
    else:
        weighed = tuple(
            _with_arithmetic(
                weigh(item, each, made.entry, made.exact, reference, (), asked.measured_with), made.arithmetic
            )
            for each in item.criteria
        )
    return decided(item, made.entry, made.exact, weighed, asked.instructions)


def _with_arithmetic(weighed: Weighed, arithmetic: str) -> Weighed:
    told = weighed.judgement.parameters | {"arithmetic": arithmetic}
    return replace(weighed, judgement=replace(weighed.judgement, parameters=told))


def _read(items: Sequence[Item], entries: Mapping[str, Entry], *, whole: bool) -> dict[str, Exact | None]:
    """Read every entry, or refuse them all at once."""
    errors: list[DomainError] = not_asked(items, entries)
    exact: dict[str, Exact | None] = {}
    for item in items:
        try:
            exact[item.key] = read_entry(item, entries.get(item.key, EMPTY))
        except DomainError as error:
            errors.append(error)
    if whole:
        errors += [Invalid("reading.missing", field=item.key) for item in left_empty(items, entries)]
        errors += doubtful(items, entries, exact)
    if errors:
        raise SeveralInvalid(tuple(errors))
    return exact


def worst_of(judged: Sequence[JudgedItem]) -> JudgedItem | None:
    """The item whose verdict makes the check's."""
    with_verdict = [one for one in judged if one.judgement is not None]
    index = conformity.worst([one.judgement for one in with_verdict if one.judgement is not None])
    return None if index is None else with_verdict[index]


def _judge_item(
    item: Item,
    entry: Entry,
    exact: Mapping[str, Exact | None],
    asked: Asked,
) -> JudgedItem:
    value = exact.get(item.key)
    weighed: tuple[Weighed, ...] = ()
    in_group_unread = item.spec.one_of is not None and not entry.text and not entry.not_tested
    if not in_group_unread and (item.spec.required or entry.text or entry.not_tested):
        reference, repeats = reference_of(item, exact, asked.items), _repeats(item, exact)
        weighed = tuple(
            weigh(item, criterion, entry, value, reference, repeats, asked.measured_with)
            for criterion in item.criteria
        )
    return decided(item, entry, value, weighed, asked.instructions)


def decided(
    item: Item,
    entry: Entry,
    value: Exact | None,
    weighed: Sequence[Weighed],
    instructions: Instructions,
) -> JudgedItem:
    """An item with what each of its limits said: the worst decides, the first of equals."""
    index = conformity.worst([one.judgement for one in weighed])
    if index is None:
        return JudgedItem(item, entry, value, None, "")
    further = tuple(one for position, one in enumerate(weighed) if position != index)
    chosen = weighed[index]
    return JudgedItem(item, entry, value, chosen, instructions.for_verdict(chosen.judgement), further)


def _repeats(item: Item, exact: Mapping[str, Exact | None]) -> tuple[Decimal, ...]:
    """The readings of an item's measurand at its aperture and condition."""
    stem = item.key.rpartition(".")[0]
    values = (exact.get(f"{stem}.{number}") for number in range(1, item.spec.repeats + 1))
    return tuple(value.decimal for value in values if value is not None)


def reference_of(item: Item, exact: Mapping[str, Exact | None], items: Sequence[Item]) -> Reference:
    """What the reading is compared with: a nominal value, or the other reading of a ratio, with what is stated of it."""
    if item.spec.reference_from is None:
        return Reference(item.nominal or "")
    key = item.key.replace(item.spec.code, item.spec.reference_from, 1)
    value, other = exact.get(key), next((one for one in items if one.key == key), None)
    if value is None or other is None:
        return Reference(is_reading=True)
    stated = stated_for(other, _repeats(other, exact))
    least = decimals.plain(least_reference(other.spec.resolution))
    return Reference(decimals.plain(value.decimal), True, stated, least)


def shown_sha256(check_uid: str, edition_sha256: str, facts: Mapping[str, str | None], judged: Judged) -> str:
    """The hash of exactly what a signer is shown: every value, verdict and sentence, and the facts around."""
    shown = {
        "check": check_uid,
        "edition": edition_sha256,
        "facts": dict(facts),
        "items": [_shown_item(one) for one in judged.items],
    }
    return hashlib.sha256(canonical(shown)).hexdigest()


def _shown_item(one: JudgedItem) -> list[object]:
    shown: list[object] = [
        one.item.key, one.entry.qualifier, one.entry.text, one.item.spec.unit, one.entry.not_tested,
        one.entry.remark, one.entry.condition_note, *_shown_verdict(one.judgement),
    ]  # fmt: skip
    if one.further:
        shown.append([[each.criterion.code, *_shown_verdict(each.judgement)] for each in one.further])
    return shown


def _shown_verdict(judgement: Judgement | None) -> list[object]:
    if judgement is None:
        return ["", "", "", {}]
    return [judgement.verdict, judgement.level or "", str(judgement.code), judgement.parameters]


def unread_code() -> SentenceCode:
    """The sentence of an item that was not read."""
    return SentenceCode.NO_READING
