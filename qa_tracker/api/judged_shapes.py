"""Verdicts, items and readings as answers: one shape for what was judged and what would be."""

from __future__ import annotations

import uuid

from ninja import Schema

from qa_tracker.api.schemas import Moment
from qa_tracker.core.decimals import plain
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.records.queries.submissions import VerdictRow
from qa_tracker.services.items import Item
from qa_tracker.services.judging import JudgedItem
from qa_tracker.services.weighing import Weighed
from qa_tracker.services.wording import criterion_words, source_line, verdict_sentence


class CriterionOut(Schema):
    """The limit that judges: its code, the published set and edition, and the limit in words."""

    code: str
    set_code: str
    set_edition: str
    unit: str
    words: str


class VerdictOut(Schema):
    """A verdict with its sentence, the code and parameters the sentence is made of, and the arithmetic.

    `probability` is that of conformity with the level that decided, empty where no uncertainty is known.
    ``further`` holds what other limits of the same measurand say; of them all the worst decides.
    """

    verdict: str
    level: str
    code: str
    parameters: dict[str, str]
    sentence: str
    criterion: CriterionOut | None
    source: str
    reference: str
    departure: str
    allowance: str
    used: str
    instruction: str
    uncertainty: str
    rule: str
    probability: str
    further: list[VerdictOut]


class GradeOut(Schema):
    """One answer of a graded item, best first."""

    value: str
    name: str


class InForceOut(Schema):
    """The baseline in force."""

    uid: uuid.UUID
    qualifier: str
    entered: str
    unit: str
    epoch: int
    valid_from: Moment
    under_review: bool


class BandOut(Schema):
    """The band outside which a value has to be confirmed."""

    low: str
    high: str


class ItemOut(Schema):
    """One thing a check asks: what, where, in which unit and steps, and what it is compared with.

    Each of `criteria` judges it and the worst decides; `criterion` is the first of them.
    """

    key: str
    measurand: str
    name: str
    kind: str
    unit: str
    resolution: str
    aperture: str
    condition: str
    repeat: int
    required: bool
    one_of: str | None
    qualifiers: list[str]
    grades: list[GradeOut]
    prompt: str
    nominal: str | None
    baseline: InForceOut | None
    criterion: CriterionOut | None
    criteria: list[CriterionOut]
    plausible: BandOut | None
    last: str | None
    last_at: Moment | None


class ReadingOut(Schema):
    """A reading exactly as entered; `entered` is empty for an item left unread."""

    measurand: str
    aperture: str
    condition: str
    repeat: int
    qualifier: str
    entered: str
    unit: str
    origin: str
    condition_note: str
    measured_at: Moment | None
    verdict: VerdictOut | None


class NotTestedOut(Schema):
    """What could not be tested, and why."""

    measurand: str
    aperture: str
    condition: str
    reason: str
    remark: str
    name: str
    at: Moment


class SignatureOut(Schema):
    """Who signed, in which role, when, and what for."""

    uid: uuid.UUID
    name: str
    role: str
    meaning: str
    at: Moment
    shown_sha256: str
    remark: str


class SubmissionOut(Schema):
    """What was done: readings, verdicts, what could not be tested, signatures."""

    uid: uuid.UUID
    number: int
    performed_by: str
    measured_at: Moment
    recorded_at: Moment
    test_object: str
    instrument: str
    console: str
    console_software: str
    port: str
    partial_reason: str
    remark: str
    cleaned_before: str
    cleaned_after: str
    shown_sha256: str
    verdict: str
    verdict_level: str
    reason: str
    leaf_uid: uuid.UUID
    readings: list[ReadingOut]
    not_tested: list[NotTestedOut]
    signatures: list[SignatureOut]


class JudgedItemOut(Schema):
    """An item as it would be recorded."""

    key: str
    measurand: str
    aperture: str
    condition: str
    repeat: int
    qualifier: str
    entered: str
    unit: str
    not_tested: str
    verdict: VerdictOut | None


class JudgedOut(Schema):
    """A check judged without being written; `shown_sha256` is what a signature on it is bound to.

    `decided_by` is the key of the item that made the verdict, empty where nothing was judged.
    """

    verdict: str
    level: str
    decided_by: str
    suggests_quarantine: bool
    meaning: str
    items: list[JudgedItemOut]
    shown_sha256: str


def criterion_out(criterion: CriterionRow | None) -> dict[str, str] | None:
    """A limit as an answer."""
    if criterion is None:
        return None
    return {
        "code": criterion.code,
        "set_code": criterion.set_code,
        "set_edition": criterion.set_edition,
        "unit": criterion.spec.unit,
        "words": criterion_words(criterion.spec),
    }


def verdict_of_row(row: VerdictRow | None) -> dict[str, object] | None:
    """A recorded verdict as an answer."""
    if row is None:
        return None
    return {
        **vars(row),
        "sentence": verdict_sentence(row.code, row.parameters, row.verdict, row.level),
        "criterion": criterion_out(row.criterion),
        "source": source_line(row.criterion, row.level) if row.criterion else "",
        "probability": row.parameters.get("probability", ""),
        "further": [verdict_of_row(each) for each in row.further],
    }


def verdict_of_item(one: JudgedItem) -> dict[str, object] | None:
    """The verdict an item would have as an answer."""
    if one.weighed is None:
        return None
    further = [_said(each, "", []) for each in one.further]
    return _said(one.weighed, one.instruction, further)


def _said(weighed: Weighed, instruction: str, further: list[dict[str, object]]) -> dict[str, object]:
    judgement, criterion = weighed.judgement, weighed.criterion
    code, level = str(judgement.code), judgement.level or ""
    numbers = {name: getattr(judgement, name) for name in ("departure", "allowance", "used")}
    return {
        "verdict": judgement.verdict,
        "level": level,
        "code": code,
        "parameters": judgement.parameters,
        "sentence": verdict_sentence(code, judgement.parameters, judgement.verdict, level),
        "criterion": criterion_out(criterion),
        "source": source_line(criterion, level),
        "reference": weighed.reference if weighed.basis in ("nominal", "ratio") else "",
        **{name: "" if number is None else plain(number) for name, number in numbers.items()},
        "instruction": instruction,
        "uncertainty": weighed.uncertainty,
        "rule": weighed.rule,
        "probability": judgement.parameters.get("probability", ""),
        "further": further,
    }


def judged_item_out(one: JudgedItem) -> dict[str, object]:
    """An item as it would be recorded."""
    item, entry = one.item, one.entry
    return {
        **_where(item),
        "qualifier": entry.qualifier,
        "entered": entry.text,
        "unit": item.spec.unit,
        "not_tested": entry.not_tested,
        "verdict": verdict_of_item(one),
    }


def item_out(item: Item) -> dict[str, object]:
    """An item as it is asked; the last value stays hidden where the procedure hides it."""
    spec, last = item.spec, None if item.spec.hide_last else item.last
    asked = ("name", "kind", "unit", "resolution", "required", "one_of", "qualifiers", "prompt")
    return {
        **_where(item),
        **{name: getattr(spec, name) for name in asked},
        "grades": spec.grades,
        "nominal": item.nominal,
        "baseline": item.baseline,
        "criterion": criterion_out(item.criterion),
        "criteria": [criterion_out(each) for each in item.criteria],
        "plausible": spec.plausible,
        "last": last.entered if last else None,
        "last_at": last.measured_at if last else None,
    }


def _where(item: Item) -> dict[str, object]:
    return {
        "key": item.key,
        "measurand": item.spec.code,
        "aperture": item.aperture.name if item.aperture else "",
        "condition": item.condition.name if item.condition else "",
        "repeat": item.repeat,
    }
