"""What an edition of a set would have said of the readings there are, without changing anything.

Each stored reading that a limit of the same id judged is judged by this edition's limit, with the baseline,
nominal value, banding quantity, uncertainty and decision rule that its verdict kept. Nothing is written.
"""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import chain, islice

from qa_tracker.core.edition_differences import stand_ins
from qa_tracker.core.errors import Invalid
from qa_tracker.core.judgement import VERDICT_OF_CODE
from qa_tracker.records.models import Criterion, Measurand
from qa_tracker.records.queries import library
from qa_tracker.records.queries.library import CriteriaSetRow, CriterionRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.records.queries.what_if import Extent, SaidRow, further_rows, said_rows
from qa_tracker.services.judging_again import Again
from qa_tracker.services.said_again import Place, SaidAgain, said_again

MOST = 300_000
"""Readings that are judged for one answer; more are refused, so that no page keeps the program busy for minutes."""
BATCH = 5000
PAGE = 50

Given = tuple[str, str]
"""A verdict and the level that decided it."""


@dataclass(frozen=True)
class Outcome:
    """So many readings that were judged so, and would be judged so."""

    then: Given
    now: Given
    count: int

    @property
    def differs(self) -> bool:
        """Whether the verdict would be another."""
        return self.then != self.now


@dataclass(frozen=True)
class CriterionAnswer:
    """What one limit of the edition would have said; ``instead_of`` is the limit that judged, where it is another."""

    criterion: CriterionRow
    instead_of: str
    outcomes: tuple[Outcome, ...]

    @property
    def readings(self) -> int:
        """How many stored readings it judges."""
        return sum(each.count for each in self.outcomes)

    @property
    def changed(self) -> int:
        """How many of them would have another verdict."""
        return sum(each.count for each in self.outcomes if each.differs)


@dataclass(frozen=True)
class WhatIf:
    """The whole answer, with one page of the readings whose verdict would change, newest first."""

    criteria: tuple[CriterionAnswer, ...]
    shown: tuple[SaidAgain, ...]
    page: int
    pages: int

    @property
    def readings(self) -> int:
        """How many stored readings were judged again."""
        return sum(each.readings for each in self.criteria)

    @property
    def changed(self) -> int:
        """How many of them would have another verdict."""
        return sum(each.changed for each in self.criteria)


def would_have_said(chosen: CriteriaSetRow, extent: Extent, scope: Scope, *, page: int = 1) -> WhatIf:
    """Judge the stored readings in sight by an edition. Reads only.

    Parameters
    ----------
    chosen
        Any published edition, adopted or not.
    extent
        Over which site, devices and time.
    page
        Which fifty of the readings that would change; one beyond the last shows the last.

    Raises
    ------
    Invalid
        ``what_if.too_many`` where more readings are asked about than are judged at once.
    """
    judges = _judges(chosen)
    counts: Counter[tuple[int, str, Given, Given]] = Counter()
    places: list[Place] = []
    again = Again()
    for batch in _batches(judges, extent, scope):
        for new, rows in batch.items():
            for (further, row), rank in zip(
                rows, again.ranks(new.spec, [row for _, row in rows]), strict=True
            ):
                verdict, level = VERDICT_OF_CODE[rank]
                then, now = (row.verdict, row.level), (str(verdict), str(level or ""))
                counts[new.id, judges.stored[row.criterion_id], then, now] += 1
                if then != now:
                    places.append(Place(row.measured_at, row.id, further, new.id))
    pages = max(1, -(-len(places) // PAGE))
    page = min(max(page, 1), pages)
    shown = sorted(places, reverse=True)[(page - 1) * PAGE : page * PAGE]
    return WhatIf(_answers(chosen, counts), said_again(shown, chosen.criteria), page, pages)


@dataclass(frozen=True)
class _Judges:
    """Which limit of the edition judges what a stored limit judged: by its id, or as procedures name it beside."""

    by_id: Mapping[str, CriterionRow]
    stored: Mapping[int, str]
    beside: Mapping[int, Mapping[str, str]]

    def of(self, row: SaidRow) -> CriterionRow | None:
        """The limit for what a stored one said."""
        code = self.stored[row.criterion_id]
        return self.by_id.get(code) or self.by_id.get(self.beside.get(row.measurand_id, {}).get(code, ""))


def _judges(chosen: CriteriaSetRow) -> _Judges:
    by_id = {each.code: each for each in chosen.criteria}
    beside: defaultdict[str, dict[str, str]] = defaultdict(dict)
    for edition in library.list_editions():
        for measurand in edition.spec.measurands:
            named = measurand.criteria
            beside[measurand.code] |= stand_ins([named], set(named) - by_id.keys(), by_id)
    wanted = by_id.keys() | {code for pairs in beside.values() for code in pairs}
    stored = dict(Criterion.objects.filter(code__in=wanted).values_list("id", "code"))
    measurands = Measurand.objects.filter(code__in=beside).values_list("id", "code")
    return _Judges(by_id, stored, {key: beside[code] for key, code in measurands})


Batch = dict[CriterionRow, list[tuple[bool, SaidRow]]]


def _batches(judges: _Judges, extent: Extent, scope: Scope) -> Iterator[Batch]:
    """What was said, some thousands at a time, by the limit that is to judge it; whether it stood beside another."""
    rows = chain(
        ((False, row) for row in said_rows(scope, extent, judges.stored)),
        ((True, row) for row in further_rows(scope, extent, judges.stored)),
    )
    taken = 0
    while batch := list(islice(rows, BATCH)):
        taken += len(batch)
        if taken > MOST:
            raise Invalid("what_if.too_many", field="since", most=MOST)
        yield _by_judge(judges, batch)


def _by_judge(judges: _Judges, rows: list[tuple[bool, SaidRow]]) -> Batch:
    by_code: dict[str, list[tuple[bool, SaidRow]]] = defaultdict(list)
    for further, row in rows:
        judge = judges.of(row)
        if judge is not None:
            by_code[judge.code].append((further, row))
    return {judges.by_id[code]: found for code, found in by_code.items()}


def _answers(
    chosen: CriteriaSetRow, counts: Counter[tuple[int, str, Given, Given]]
) -> tuple[CriterionAnswer, ...]:
    """What each limit would have said, in the edition's order; those that judge nothing are there too."""
    answers = []
    for criterion in chosen.criteria:
        codes = {code for key, code, _, _ in counts if key == criterion.id}
        for code in sorted(codes, key=lambda each: (each != criterion.code, each)) or [criterion.code]:
            outcomes = [
                Outcome(then, now, count)
                for (key, stored, then, now), count in counts.items()
                if (key, stored) == (criterion.id, code)
            ]
            outcomes.sort(key=lambda one: (not one.differs, -one.count, one.then, one.now))
            answers.append(
                CriterionAnswer(criterion, "" if code == criterion.code else code, tuple(outcomes))
            )
    return tuple(answers)
