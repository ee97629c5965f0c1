"""Two editions of criteria side by side, and what an edition would have said of the readings there are."""

from __future__ import annotations

import uuid
from decimal import Decimal
from typing import Any

from ninja import Schema

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.judged_shapes import CriterionOut, criterion_out
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Moment
from qa_tracker.core.decimals import plain
from qa_tracker.core.edition_differences import Difference, Value, differences, stand_ins
from qa_tracker.core.errors import Invalid, NotFound
from qa_tracker.records.queries import devices, sites
from qa_tracker.records.queries import library as rows
from qa_tracker.records.queries.library import CriteriaSetRow
from qa_tracker.records.queries.what_if import Extent
from qa_tracker.services.said_again import Said, SaidAgain
from qa_tracker.services.what_if import CriterionAnswer, would_have_said
from qa_tracker.services.wording import verdict_sentence

router = NounRouter(tags=["procedures and criteria"])


class KeyChangeOut(Schema):
    """One key at which two editions of a limit differ, as text; empty where one lacks it."""

    key: str
    old: str
    new: str


class DifferenceOut(Schema):
    """What became of one limit: `added`, `removed`, `changed` or `same`; a code is empty where an edition lacks it."""

    state: str
    old_code: str
    new_code: str
    changes: list[KeyChangeOut]


class OutcomeOut(Schema):
    """So many readings that were judged so, and would be judged so."""

    verdict: str
    level: str
    would_verdict: str
    would_level: str
    readings: int


class AnswerOut(Schema):
    """What one limit would have said; `instead_of` is the limit that judged, where it is another."""

    criterion: CriterionOut
    instead_of: str
    readings: int
    changed: int
    outcomes: list[OutcomeOut]


class SaidOut(Schema):
    """A verdict with its sentence."""

    verdict: str
    level: str
    sentence: str


class SaidAgainOut(Schema):
    """A reading whose verdict would be another."""

    check_uid: uuid.UUID
    device_uid: uuid.UUID
    device: str
    site_code: str
    measured_at: Moment
    measurand: str
    aperture: str
    condition: str
    repeat: int
    qualifier: str
    entered: str
    unit: str
    said: SaidOut
    would_say: SaidOut


class WhatIfOut(Schema):
    """The whole answer, with one page of the readings whose verdict would be another, newest first."""

    readings: int
    changed: int
    criteria: list[AnswerOut]
    shown: list[SaidAgainOut]
    page: int
    pages: int


@router.reads("/criteria-sets/differences", list[DifferenceOut], "compareCriteriaSets", 404)
def compare(request: ApiRequest, old: uuid.UUID, new: uuid.UUID) -> list[dict[str, Any]]:
    """Two editions limit by limit; of two sets, by what procedures name for one measurand."""
    before, after = _set(old), _set(new)
    specs = [[each.spec for each in one.criteria] for one in (before, after)]
    pairs: dict[str, str] = {}
    if before.code != after.code:
        named = [spec.criteria for one in rows.list_editions() for spec in one.spec.measurands]
        pairs = stand_ins(named, *([spec.id for spec in each] for each in specs))
    return [_difference(each) for each in differences(*specs, pairs)]


@router.reads("/criteria-sets/what-if", WhatIfOut, "askWhatIf", 404)
def ask(
    request: ApiRequest,
    criteria_set: uuid.UUID,
    site: uuid.UUID | None = None,
    serial: str = "",
    since: Moment | None = None,
    until: Moment | None = None,
    page: int = 1,
) -> dict[str, Any]:
    """Judge the stored readings in sight by an edition, adopted or not. Nothing is changed by asking."""
    caller = request.auth
    extent = Extent(_site_id(caller, site), _device_ids(caller, serial), since, until)
    answer = would_have_said(_set(criteria_set), extent, caller.scope(), page=page)
    return {
        **{name: getattr(answer, name) for name in ("readings", "changed", "page", "pages")},
        "criteria": [_answer(each) for each in answer.criteria],
        "shown": [_again(each) for each in answer.shown],
    }


def _set(uid: uuid.UUID) -> CriteriaSetRow:
    found = rows.find_criteria_set(uid)
    if found is None:
        raise NotFound("criteria_set.unknown")
    return found


def _site_id(caller: Caller, uid: uuid.UUID | None) -> int | None:
    if uid is None:
        return None
    site = sites.find_site(caller.scope(), uid)
    if site is None:
        raise NotFound("site.unknown")
    return site.id


def _device_ids(caller: Caller, serial: str) -> frozenset[int] | None:
    if not serial:
        return None
    found = devices.by_serial(caller.scope(), serial)
    if not found:
        raise Invalid("what_if.device_unknown", field="serial", serial=serial)
    return frozenset(each.id for each in found)


def _difference(each: Difference) -> dict[str, Any]:
    return {
        "state": each.state,
        "old_code": each.old.id if each.old else "",
        "new_code": each.new.id if each.new else "",
        "changes": [{"key": one.key, "old": _text(one.old), "new": _text(one.new)} for one in each.changes],
    }


def _text(value: Value) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, Decimal):
        return plain(value)
    return value if isinstance(value, str) else ", ".join(value)


def _answer(each: CriterionAnswer) -> dict[str, Any]:
    return {
        "criterion": criterion_out(each.criterion),
        "instead_of": each.instead_of,
        "readings": each.readings,
        "changed": each.changed,
        "outcomes": [
            {
                **dict(zip(("verdict", "level"), one.then, strict=True)),
                **dict(zip(("would_verdict", "would_level"), one.now, strict=True)),
                "readings": one.count,
            }
            for one in each.outcomes
        ],
    }


def _again(each: SaidAgain) -> dict[str, Any]:
    return vars(each) | {
        "measurand": each.measurand.code,
        "said": _said(each.then),
        "would_say": _said(each.now),
    }


def _said(said: Said) -> dict[str, str]:
    sentence = verdict_sentence(said.code, said.parameters, said.verdict, said.level)
    return {"verdict": said.verdict, "level": said.level, "sentence": sentence}
