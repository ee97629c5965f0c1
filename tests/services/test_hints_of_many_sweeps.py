"""Of many sweeps that come together one gives hints; the next gives them again."""

from __future__ import annotations

import datetime as dt

from qa_tracker.services.beats import HINTED_FOR, first_to_hint

AT = dt.datetime(2025, 3, 9, 7, tzinfo=dt.UTC)


def test_one_of_many_sweeps_hints_when_they_come_together(db):
    assert [first_to_hint(at=AT + each * HINTED_FOR / 10) for each in range(10)] == [True] + 9 * [False]


def test_next_sweep_hints_again_when_hints_may_be_lost(db):
    assert first_to_hint(at=AT)
    assert first_to_hint(at=AT + HINTED_FOR)
