"""What an edition would have said, in words: counts from verdict to verdict, and the readings that would change."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.services.said_again import Said, SaidAgain
from qa_tracker.services.what_if import CriterionAnswer, WhatIf
from qa_tracker.web.presenters.judged import Shown, shown, value_words, where_words


@dataclass(frozen=True)
class ShownAgain:
    """One reading with the verdict it has and the one it would have."""

    check_uid: uuid.UUID
    device: str
    site_code: str
    name: str
    where: str
    value: str
    measured_at: dt.datetime
    zone: str
    then: Shown
    now: Shown


@dataclass(frozen=True)
class ShownAnswer:
    """The answer as the page shows it; ``silent`` are limits that judged no stored reading."""

    told: tuple[CriterionAnswer, ...]
    silent: tuple[CriterionAnswer, ...]
    readings: int
    changed: int
    shown: tuple[ShownAgain, ...]
    page: int
    pages: int

    @property
    def before(self) -> int:
        """The page of newer readings; 0 where there is none."""
        return self.page - 1

    @property
    def after(self) -> int:
        """The page of older readings; 0 where there is none."""
        return self.page + 1 if self.page < self.pages else 0


def shown_answer(answer: WhatIf) -> ShownAnswer:
    """Put an answer in words; limits that would change most come first."""
    told = [each for each in answer.criteria if each.readings]
    return ShownAnswer(
        tuple(sorted(told, key=lambda each: -each.changed)),
        tuple(each for each in answer.criteria if not each.readings),
        answer.readings,
        answer.changed,
        tuple(_again(each) for each in answer.shown),
        answer.page,
        answer.pages,
    )


def _again(each: SaidAgain) -> ShownAgain:
    spec = each.measurand
    return ShownAgain(
        each.check_uid,
        each.device,
        each.site_code,
        spec.name,
        where_words(each.aperture, each.condition, each.repeat, spec.repeats),
        value_words(spec, each.qualifier, each.entered, each.unit),
        each.measured_at,
        each.zone,
        _said(each.then),
        _said(each.now),
    )


def _said(said: Said) -> Shown:
    return shown(said.verdict, said.level, said.code, said.parameters, said.criterion, "")
