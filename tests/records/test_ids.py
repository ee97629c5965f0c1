"""UUIDv7: version, variant, and that they sort by their moments."""

from __future__ import annotations

import datetime as dt

import pytest
import time_machine

from qa_tracker.records.ids import uuid7

MOMENTS = [
    dt.datetime(1970, 1, 1, tzinfo=dt.UTC),
    dt.datetime(2026, 3, 29, 0, 59, 59, 999000, tzinfo=dt.UTC),
    dt.datetime(2026, 3, 29, 1, tzinfo=dt.UTC),
    dt.datetime(9999, 12, 31, tzinfo=dt.UTC),
]


@pytest.mark.parametrize("moment", MOMENTS)
def test_uuid7_holds_its_moment_version_and_variant(moment):
    with time_machine.travel(moment, tick=False):
        uid = uuid7()
    assert (uid.version, uid.variant) == (7, "specified in RFC 4122")
    assert uid.int >> 80 == round(moment.timestamp() * 1000)


def test_uuid7_sorts_by_moment_as_number_and_as_text():
    made = []
    for moment in MOMENTS:
        with time_machine.travel(moment, tick=False):
            made.append(uuid7())
    assert made == sorted(made)
    assert [uid.hex for uid in made] == sorted(uid.hex for uid in made)


def test_uuid7_is_new_each_time_within_a_millisecond():
    with time_machine.travel(MOMENTS[1], tick=False):
        assert len({uuid7() for _ in range(1000)}) == 1000
