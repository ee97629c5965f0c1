"""The order of severity."""

from __future__ import annotations

from qa_tracker.core.conformity import Judgement, severity, worst
from qa_tracker.core.sentence_codes import SentenceCode

ORDER = [
    ("suspension", "suspension"),
    ("indeterminate", "suspension"),
    ("remedial", "remedial"),
    ("not_assessable", None),
    ("indeterminate", "remedial"),
    ("conforming", None),
]


def _judgements():
    return [Judgement(verdict, level, SentenceCode.WITHIN) for verdict, level in ORDER]


def test_severity_falls_from_suspension_to_conforming():
    assert [severity(judgement) for judgement in _judgements()] == [5, 4, 3, 2, 1, 0]


def test_worst_is_the_first_of_the_worst():
    ordered = _judgements()
    assert worst([ordered[5], ordered[2], ordered[0], ordered[0]]) == 2
    assert worst(ordered[3:]) == 0


def test_worst_is_nothing_when_there_are_none():
    assert worst([]) is None
